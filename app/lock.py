"""A lock on a file that ends with the process that holds it, however that ends."""

from __future__ import annotations

import os
from pathlib import Path

try:
    import fcntl
except ImportError:  # Windows
    import msvcrt


class FileLock:
    """Held by at most one `FileLock` of all processes. The file stays behind empty."""

    def __init__(self, path: Path) -> None:
        self.path = path
        self._file: int | None = None

    def acquire(self) -> bool:
        """Take the lock without waiting; False when someone else holds it."""
        file = os.open(self.path, os.O_RDWR | os.O_CREAT, 0o600)
        try:
            _lock(file)
        except OSError:
            os.close(file)
            return False
        self._file = file
        return True

    def release(self) -> None:
        if self._file is not None:
            os.close(self._file)
            self._file = None


def is_held(path: Path) -> bool:
    """Whether anyone holds the lock on that path."""
    if not path.exists():
        return False
    lock = FileLock(path)
    if not lock.acquire():
        return True
    lock.release()
    return False


def _lock(file: int) -> None:
    """Raises OSError when the file is locked already."""
    if "fcntl" in globals():
        fcntl.flock(file, fcntl.LOCK_EX | fcntl.LOCK_NB)
    else:
        msvcrt.locking(file, msvcrt.LK_NBLCK, 1)

"""A lock on a file that ends with the process that holds it, however that ends."""

from __future__ import annotations

import contextlib
import os
import time
from pathlib import Path

try:
    import fcntl
except ImportError:  # Windows
    import msvcrt

PATIENCE_S = 0.1
"""How long taking a lock is tried; others may hold it for a moment to see whether it is free."""


class FileLock:
    """Held by at most one `FileLock` of all processes."""

    def __init__(self, path: Path) -> None:
        self.path = path
        self._file: int | None = None

    def acquire(self, patience_s: float = PATIENCE_S) -> bool:
        """Take the lock; False when someone else holds it."""
        end = time.monotonic() + patience_s
        while not self._try():
            if time.monotonic() >= end:
                return False
            time.sleep(0.01)
        return True

    def release(self) -> None:
        """Let go; the empty file stays."""
        if self._file is not None:
            os.close(self._file)
            self._file = None

    def remove(self) -> None:
        """Let go and take the file away."""
        with contextlib.suppress(OSError):  # Windows keeps a file that is open
            self.path.unlink(missing_ok=True)
        self.release()

    def _try(self) -> bool:
        file = os.open(self.path, os.O_RDWR | os.O_CREAT, 0o600)
        try:
            _lock(file)
            # Another may have removed the file between the two lines above: then this locks nothing.
            if os.path.samestat(os.fstat(file), os.stat(self.path)):
                self._file = file
                return True
        except OSError:
            pass
        os.close(file)
        return False


def is_held(path: Path) -> bool:
    """Whether anyone holds the lock on that path."""
    if not path.exists():
        return False
    lock = FileLock(path)
    if not lock.acquire(0.0):
        return True
    lock.release()
    return False


def _lock(file: int) -> None:
    """Raises OSError when the file is locked already."""
    if "fcntl" in globals():
        fcntl.flock(file, fcntl.LOCK_EX | fcntl.LOCK_NB)
    else:
        msvcrt.locking(file, msvcrt.LK_NBLCK, 1)

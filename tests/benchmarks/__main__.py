"""`python -m tests.benchmarks`: the tables of DEVELOPERS.md, as ratios measured in this one run. Takes minutes and 3 GB.

`python -m tests.benchmarks quick` leaves out the two large factorisations.
"""

from __future__ import annotations

import os
import platform
import sys

# Some machines name an older processor to OpenBLAS; a current NumPy is then measured below its speed.
for name in ("OPENBLAS_CORETYPE", "OPENBLAS_L2_SIZE"):
    os.environ.pop(name, None)

from tests.benchmarks.stacks import iterations  # noqa: E402
from tests.benchmarks.timing import apart  # noqa: E402

SIZES = ((200, 1, 1 / 15, 1 / 35), (1000, 1, 1 / 45, 1 / 100), (200, 6, 1 / 350, 1 / 1200))
BOX = "tests.benchmarks."


def main(quick: bool) -> None:
    machine = platform.processor() or platform.machine()
    print(f"Machine: {machine}, {os.cpu_count()} cores, Python {platform.python_version()}\n")
    against_splu(SIZES[:1] if quick else SIZES)
    scaling()
    real_stacks()
    against_libraries()


def against_splu(sizes) -> None:
    print("| size | cold to 1e-8 | of splu | wanted | zone edit to 1e-4 | of splu | wanted | touches cold / edit "
          "| peak MB, ours / splu |")
    print("|---|---|---|---|---|---|---|---|---|")
    for n, nz, cold_wanted, edit_wanted in sizes:
        ours = apart(BOX + "ours", n, nz, 15 if n * n * nz < 10**5 else 5)
        splu = apart(BOX + "reference", n, nz, 3 if n * n * nz < 10**5 else 1)
        assert abs(ours["peak_k"] - splu["peak_k"]) < 1e-6 * splu["peak_k"], "the two do not agree"
        cells = (f"{n}x{n}x{nz}",
                 f"{1e3 * ours['cold']:.1f} ms ({ours['cold_iterations']} it.)", f"1/{splu['seconds'] / ours['cold']:.0f}",
                 f"1/{1 / cold_wanted:.0f}",
                 f"{1e3 * ours['edit']:.1f} ms ({ours['edit_iterations']} it.)", f"1/{splu['seconds'] / ours['edit']:.0f}",
                 f"1/{1 / edit_wanted:.0f}",
                 f"{ours['cold'] / ours['touch']:.0f} / {ours['edit'] / ours['touch']:.0f}",
                 f"{ours['peak_mb']:.0f} / {splu['peak_mb']:.0f}")
        print(f"| {' | '.join(cells)} |", flush=True)


def against_libraries() -> None:
    print("\n| library, same plate | 200x200x1 | 400x400x1 |\n|---|---|---|")
    ours = [apart(BOX + "ours", n, 1, 7) for n in (200, 400)]
    for title, module, extra in (("scikit-fem, its default solve", "scikit_fem", 1), ("FiPy, LU", "fipy_volumes", 0),
                                 ("FiPy, PCG", "fipy_volumes", 1)):
        theirs = [apart(BOX + module, n, 1, extra) for n in (200, 400)]
        for one, other in zip(theirs, ours, strict=True):
            assert abs(one["peak_k"] / other["peak_k"] - 1.0) < 0.15, "the plates are not the same"
        times = [one["seconds"] / other["cold"] for one, other in zip(theirs, ours, strict=True)]
        print(f"| {title} | {times[0]:.0f} times ours | {times[1]:.0f} times ours |", flush=True)


def scaling() -> None:
    print("\n| cells | cells per second, cold to 1e-8 |\n|---|---|")
    for n in (100, 200, 400, 700, 1000, 1414):
        ours = apart(BOX + "ours", n, 1, 3)
        print(f"| {n * n:,} | {ours['cells'] / ours['cold'] / 1e6:.2f} million |", flush=True)


def real_stacks() -> None:
    even, found, widest = iterations(range(12))
    print(f"\nIterations to 1e-8: uniform box {even}; 12 real stacks {min(found)} to {max(found)}, median {sorted(found)[6]}; "
          f"cells up to {widest:.0f} times wider than high.")


if __name__ == "__main__":
    main(quick="quick" in sys.argv[1:])

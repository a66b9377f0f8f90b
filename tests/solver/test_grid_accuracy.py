"""How good the default grid and its error bar are, over random layered layouts with exact answers.

The exact peak is the double cosine series (tests/published/layered_series.py). Forty layouts in an
ordinary run; GRID_ACCURACY_LAYOUTS=200 for the full statistics.
"""

from __future__ import annotations

import os
from dataclasses import dataclass

import numpy as np
import pytest

from solver import parse_layout, solve
from tests.published.random_layered import AMBIENT_C, RISE_K, random_layered

LAYOUTS = int(os.environ.get("GRID_ACCURACY_LAYOUTS", "40"))
SEED = 20_240


@dataclass(frozen=True)
class Statistics:
    """Error of the peak and its bar for each layout, as shares of the rise; cells of the fine grid."""

    error: np.ndarray
    bar: np.ndarray
    cells: np.ndarray

    def __str__(self) -> str:
        size = np.abs(self.error)
        return (f"{len(size)} layouts: error of the peak median {100 * np.median(size):.3f} %, "
                f"95 % {100 * np.quantile(size, 0.95):.3f} %, worst {100 * size.max():.3f} % of the rise; "
                f"bar covers {100 * np.mean(self.bar >= size):.1f} %, "
                f"median bar {100 * np.median(self.bar):.3f} %; "
                f"cells median {int(np.median(self.cells))}, most {self.cells.max()}")


@pytest.fixture(scope="module")
def statistics() -> Statistics:
    rng = np.random.default_rng(SEED)
    rows = []
    for _ in range(LAYOUTS):
        document, _ = random_layered(rng)
        results = solve(parse_layout(document)).results
        error = results.peak.temperature_c - (AMBIENT_C + RISE_K)
        rows.append((error / RISE_K, results.peak.grid_uncertainty_k / RISE_K, results.grid.cells))
    return Statistics(*map(np.array, zip(*rows, strict=True)))


def test_peak_is_within_one_percent_of_the_rise(statistics: Statistics, capsys: pytest.CaptureFixture):
    with capsys.disabled():
        print(f"\n{statistics}")
    assert np.abs(statistics.error).max() <= 0.01, statistics


def test_median_error_is_at_most_two_thousandths_of_the_rise(statistics: Statistics):
    assert np.median(np.abs(statistics.error)) <= 0.002, statistics


def test_error_bar_covers_the_true_error(statistics: Statistics):
    """95 of 100; a sample of forty may miss that by chance, so it is held to 90."""
    wanted = 0.95 if LAYOUTS >= 100 else 0.90
    assert np.mean(statistics.bar >= np.abs(statistics.error)) >= wanted, statistics


def test_error_bar_is_not_wasteful(statistics: Statistics):
    assert np.median(statistics.bar) <= 5.0 * np.median(np.abs(statistics.error)), statistics

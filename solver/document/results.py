"""The results document: frozen models with exactly the fields of the file format."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Literal

from .layout import Layout, Model

Verdict = Literal["pass", "warn", "fail", "no-limits"]


class Peak(Model):
    """The hottest point of the plate; grid_uncertainty_k is missing for a draft."""

    temperature_c: float
    x_mm: float
    y_mm: float
    layer: str
    grid_uncertainty_k: float | None = None


class SourceResult(Model):
    """Temperatures of one source: mean and max of its footprint's face, case with a joint, junction if known."""

    id: str
    power_w: float
    mean_c: float
    max_c: float
    case_c: float | None = None
    junction_c: float | None = None
    limit_c: float | None = None
    margin_k: float | None = None
    verdict: Verdict


class HeatBalance(Model):
    """Heat from the sources and where it leaves; residual_w is what does not add up."""

    sources_w: float
    out_w: Mapping[str, float]
    residual_w: float


class GridSize(Model):
    nx: int
    ny: int
    nz: int
    cells: int


class Caution(Model):
    """What a reader must know before trusting the figures."""

    code: str
    where: str
    message: str


class Results(Model):
    format: Literal["heat-spreader-results"] = "heat-spreader-results"
    version: Literal[1] = 1
    layout: Layout
    verdict: Verdict
    peak: Peak
    sources: tuple[SourceResult, ...]
    heat_balance: HeatBalance
    grid: GridSize
    warnings: tuple[Caution, ...]

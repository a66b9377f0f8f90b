"""What a reader of the results must know before trusting them, as warnings in the results document."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from .document import Caution, Layout, Peak, SourceResult

if TYPE_CHECKING:
    from .steady import Solution

def cautions_of(solution: Solution, peak: Peak, parts: tuple[SourceResult, ...]) -> tuple[Caution, ...]:
    return (*_of_layout(solution.layout), *_of_numerics(solution), *_of_limits(solution.layout, peak, parts))


def _of_layout(layout: Layout) -> Iterator[Caution]:
    width, height = layout.plate.width_mm, layout.plate.height_mm
    for n, zone in enumerate(layout.zones):
        right, top = zone.x_mm + zone.width_mm, zone.y_mm + zone.height_mm
        if right <= 0 or top <= 0 or zone.x_mm >= width or zone.y_mm >= height:
            yield Caution(code="zone-outside", where=f"zones[{n}]",
                          message=f"Zone '{zone.id}' lies wholly off the plate and has no effect.")
        elif zone.x_mm < 0 or zone.y_mm < 0 or right > width * (1 + 1e-9) or top > height * (1 + 1e-9):
            yield Caution(code="zone-clipped", where=f"zones[{n}]",
                          message=f"Zone '{zone.id}' reaches past the plate; only the part on the plate counts.")
    for n, source in enumerate(layout.sources):
        if source.limit_c is not None and source.limit_at == "junction" and source.r_junction_case_k_w is None:
            yield Caution(code="junction-unknown", where=f"sources[{n}]",
                          message=f"'{source.id}' has a limit at its junction but no junction-to-case resistance; "
                                  "its limit is held against the case or, without a joint, the mean of its footprint.")
        elif source.limit_c is not None and source.limit_at == "case" and source.interface_k_mm2_w is None:
            yield Caution(code="case-unknown", where=f"sources[{n}]",
                          message=f"'{source.id}' has a limit at its case but no joint to the plate; its limit is held "
                                  "against the mean of its footprint.")


def _of_numerics(solution: Solution) -> Iterator[Caution]:
    grid, solved = solution.grid, solution.solved
    if solution.effort == "draft":
        yield Caution(code="draft", where="grid", message="Solved on the coarse draft grid; no uncertainty is known yet.")
    if grid.capped:
        yield Caution(code="grid-limited", where="grid",
                      message=f"The grid this layout asks for does not fit; it was solved with {grid.cells:,} cells, and edges "
                              f"closer than {grid.merge_m * 1e3:.3g} mm were made one. Expect a larger error.")
    if not solved.converged:
        yield Caution(code="not-converged", where="grid",
                      message=f"The equations were solved only to a relative residual of {solved.residual:.1e}; "
                              "do not trust the figures.")
    if solution.islands:
        yield Caution(code="island", where="zones",
                      message=f"{solution.islands} piece(s) of the plate are cut off from every sink and part; they are shown "
                              "without a temperature.")
    if solution.effort == "final" and not solution.readings.balanced:
        yield Caution(code="balance-open", where="heat_balance",
                      message=f"The heat balance is open by {solution.readings.open_w:.2e} W; do not trust the figures.")


def _of_limits(layout: Layout, peak: Peak, parts: tuple[SourceResult, ...]) -> Iterator[Caution]:
    bar = peak.grid_uncertainty_k
    if bar is None:
        return
    plate = layout.limits.plate_c
    if plate is not None and abs(plate - peak.temperature_c) < bar:
        yield Caution(code="limit-within-uncertainty", where="limits.plate_c",
                      message=f"The peak is closer to the plate's limit than the grid's uncertainty of {bar:.2g} K.")
    for n, part in enumerate(parts):
        if part.margin_k is not None and abs(part.margin_k) < bar:
            yield Caution(code="limit-within-uncertainty", where=f"sources[{n}]",
                          message=f"'{part.id}' is closer to its limit than the grid's uncertainty of {bar:.2g} K.")

"""The parts on the plate: which of them are bodies of their own, and their case and junction temperatures."""

from __future__ import annotations

from ..document import Layout, Source


def bodies_of(layout: Layout) -> dict[str, int]:
    """The number of the isothermal body of each source that stands on a joint, by source id."""
    jointed = [source.id for source in layout.sources if source.interface_k_mm2_w is not None]
    return {id_: number for number, id_ in enumerate(jointed)}


def junction(source: Source, case: float) -> float | None:
    """Junction temperature above a case (or, with no joint, above the mean of the footprint) at `case`, °C."""
    if source.r_junction_case_k_w is None:
        return None
    return case + source.power_w * source.r_junction_case_k_w

"""A solved layout as a table to read in a terminal; units stand in the heads."""

from __future__ import annotations

from .document import Results, Source, SourceResult

VERDICTS = {"pass": "within its limits", "warn": "within its limits, but near one", "fail": "OVER A LIMIT",
            "no-limits": "no limits given"}
WORDS = {"pass": "ok", "warn": "near", "fail": "OVER", "no-limits": "-"}
CAUTION = ("Estimates do not replace measurement. Heated plates and parts can burn. Local codes and licensed practice\n"
           "prevail.")
HEAD = ("part", "power W", "mean °C", "max °C", "case °C", "junction °C", "limit °C", "at", "margin K", "verdict")


def table(results: Results) -> str:
    """The whole report of one layout, lines of at most about 100 characters."""
    layout, peak = results.layout, results.peak
    bar = "" if peak.grid_uncertainty_k is None else f" ± {peak.grid_uncertainty_k:.2g} K (grid)"
    lines = [
        layout.title or "Untitled layout",
        f"  verdict   {VERDICTS[results.verdict]}",
        f"  peak      {peak.temperature_c:.2f} °C{bar} at x {peak.x_mm:.1f} mm, y {peak.y_mm:.1f} mm in layer {peak.layer}",
    ]
    if layout.limits.plate_c is not None:
        margin = layout.limits.plate_c - peak.temperature_c
        lines.append(f"  plate     limit {layout.limits.plate_c:g} °C, margin {margin:.1f} K")
    if results.sources:
        rows = [_part(source, part) for source, part in zip(layout.sources, results.sources, strict=True)]
        lines += ["", *_columns(HEAD, rows)]
    lines += ["", *_balance(results)]
    grid = results.grid
    lines += ["", f"  grid {grid.nx} x {grid.ny} x {grid.nz} = {grid.cells:,} cells"]
    lines += [f"  warning [{w.code}] {w.where}: {w.message}" for w in results.warnings]
    return "\n".join([*lines, "", CAUTION])


def _part(source: Source, part: SourceResult) -> tuple[str, ...]:
    limited = part.limit_c is not None
    return (part.id, f"{part.power_w:g}", _figure(part.mean_c), _figure(part.max_c), _figure(part.case_c),
            _figure(part.junction_c), f"{part.limit_c:g}" if limited else "-", source.limit_at if limited else "-",
            f"{part.margin_k:+.1f}" if limited else "-", WORDS[part.verdict])


def _figure(value: float | None) -> str:
    return "-" if value is None else f"{value:.1f}"


def _columns(head: tuple[str, ...], rows: list[tuple[str, ...]]) -> list[str]:
    """Rows under their heads; the first column to the left, the others to the right."""
    widths = [max(map(len, column)) for column in zip(head, *rows, strict=True)]
    lines = []
    for first, *others in (head, *rows):
        cells = [first.ljust(widths[0]), *(cell.rjust(w) for cell, w in zip(others, widths[1:], strict=True))]
        lines.append("  " + "  ".join(cells))
    return lines


def _balance(results: Results) -> list[str]:
    balance = results.heat_balance
    rows = []
    for name, watts in balance.out_w.items():
        share = f"{100 * watts / balance.sources_w:.1f}" if balance.sources_w else "-"
        if abs(watts) > 1e-9:
            rows.append((name, f"{watts:.3f}", share))
    return [f"  heat      {balance.sources_w:g} W in; open by {balance.residual_w:.1e} W",
            *_columns(("leaves through", "W", "%"), rows)]

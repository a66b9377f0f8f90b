"""Figures in words for the screen: always with a unit, with as many digits as are worth reading."""

from __future__ import annotations

from solver.document import Layout, Material, Source, SourceResult, is_void

MARKS = {"pass": "✓", "warn": "▲", "fail": "✕", "no-limits": "○"}
WORDS = {"pass": "within limits", "warn": "close to a limit", "fail": "over a limit",
         "no-limits": "no limits set"}
MINUS = "\u2212"


def number(value: float, digits: int = 1, signed: bool = False) -> str:
    """A decimal figure with a true minus sign; never "-0.0"."""
    rounded = round(value, digits) + 0.0
    return f"{rounded:{'+' if signed else ''}.{digits}f}".replace("-", MINUS)


def plain(value: float) -> str:
    """A figure as it is written into a field: no digits that are not there."""
    return f"{value:.10g}"


def celsius(value: float) -> str:
    return f"{number(value)} °C"


def kelvin(value: float, signed: bool = False) -> str:
    digits = 1 if abs(value) >= 1.0 or value == 0.0 else 2
    return f"{number(value, digits, signed)} K"


def uncertainty(value: float) -> str:
    """An error bar, never shown as nought."""
    if value < 0.005:
        return "± less than 0.01 K"
    return f"± {value:.1f} K" if value >= 0.1 else f"± {value:.2f} K"


def watts(value: float) -> str:
    size = abs(value)
    digits = 0 if size >= 1000 else 1 if size >= 100 else 2 if size >= 0.1 or size < 5e-7 else 4
    return f"{number(value, digits)} W"


def residual(value: float) -> str:
    """Heat that does not add up: mostly rounding, so its size is what matters."""
    return "0 W" if value == 0.0 else f"{value:.0e} W".replace("-", MINUS)


def thickness(value: float) -> str:
    return f"{value:.3g} mm"


def conductivity(material: Material) -> str:
    """In words: one figure where all directions are alike."""
    kx, ky, kz = material.kx, material.ky, material.kz
    if kx == ky == kz:
        return f"{kx:g} W/mK"
    if kx == ky:
        return f"{kx:g} W/mK in the plane, {kz:g} W/mK through it"
    return f"{kx:g} W/mK along x, {ky:g} along y, {kz:g} along z"


def conductivity_of(layout: Layout, name: str) -> str:
    if is_void(name):
        return "no conduction"
    return conductivity(layout.material(name))


def seconds(value: float) -> str:
    return f"{value * 1e3:.0f} ms" if value < 1.0 else f"{value:.1f} s"


def limit_point(source: Source, part: SourceResult) -> tuple[str, float]:
    """The point a part's limit is held against, in words, and its temperature there."""
    if part.margin_k is not None and part.limit_c is not None:
        value = part.limit_c - part.margin_k
    elif source.limit_at == "junction" and part.junction_c is not None:
        value = part.junction_c
    elif source.limit_at in ("junction", "case") and part.case_c is not None:
        value = part.case_c
    else:
        value = part.max_c
    if source.limit_at == "plate":
        return "footprint", value
    if source.limit_at == "junction" and part.junction_c is not None:
        return "junction", value
    return ("case", value) if part.case_c is not None else ("footprint mean", value)

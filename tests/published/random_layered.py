"""Random layered layouts of this trade, each as a layout document and as its exact series.

Insulated-metal boards, ceramic-bonded copper, graphite on metal, padded and plain plates, with one to eight
parts. The powers of a layout are scaled so that its hottest point is 60 K over ambient.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from tests.published.layered_series import Film, Heat, Held, Hottest, Series, Slab, solve_series

RISE_K = 60.0
AMBIENT_C = 25.0

STACKS = (
    ("metal",),
    ("foil", "dielectric", "metal"),
    ("foil", "ceramic", "foil"),
    ("foil", "ceramic", "foil", "metal"),
    ("graphite", "metal"),
    ("metal", "dielectric", "metal"),
    ("foil", "laminate", "foil"),
    ("ceramic",),
)
KINDS = {  # thickness mm, in-plane W/mK, through W/mK as a share of in-plane
    "foil": ((0.035, 0.3), (380.0, 400.0), 1.0),
    "dielectric": ((0.05, 0.2), (0.3, 4.0), 1.0),
    "metal": ((1.0, 6.0), (120.0, 400.0), 1.0),
    "ceramic": ((0.25, 1.0), (20.0, 180.0), 1.0),
    "graphite": ((0.05, 0.5), (800.0, 1500.0), 0.008),
    "laminate": ((0.3, 1.6), (0.6, 1.0), 0.4),
}


def random_layered(rng: np.random.Generator) -> tuple[dict, Series]:
    """A layout document (a dict) and the series that solves it; its hottest point is 60 K over ambient."""
    longest = np.exp(rng.uniform(np.log(20.0), np.log(200.0)))
    plate = tuple(float(round(v, 1)) for v in longest * rng.uniform(0.6, 1.0, 2))
    slabs = [_slab(kind, rng) for kind in STACKS[rng.integers(len(STACKS))]]
    top = Film(0.0 if rng.random() < 0.5 else float(rng.uniform(5.0, 25.0)), AMBIENT_C)
    film = float(np.exp(rng.uniform(np.log(5.0), np.log(2000.0))))
    bottom = Held(AMBIENT_C) if rng.random() < 0.1 else Film(film, AMBIENT_C)
    both_faces = isinstance(bottom, Film) and rng.random() < 0.1
    sources = _sources(plate, rng, both_faces)
    series = solve_series(plate, slabs, top, bottom, sources)
    scale = RISE_K / (hottest(series).temperature_c - AMBIENT_C)
    scaled = replace(series, sources=tuple(replace(s, power_w=s.power_w * scale) for s in sources))
    return document_of(scaled), scaled


def hottest(series: Series) -> Hottest:
    """The hottest point of both faces."""
    fed = {s.face for s in series.sources}
    return max((series.peak(face) for face in fed), key=lambda spot: spot.temperature_c)


def document_of(series: Series) -> dict:
    """The layout document of a series (joints between layers have no place in it)."""
    if any(slab.joint_below_m2k_w for slab in series.layers):
        raise ValueError("a layout document has no joints between layers; use a thin layer instead")
    names = [f"layer-{n + 1}" for n in range(len(series.layers))]
    return {
        "format": "heat-spreader-layout", "version": 1, "ambient_c": AMBIENT_C,
        "plate": dict(zip(("width_mm", "height_mm"), map(float, series.plate_mm), strict=True)),
        "materials": {name: {"k_x_w_mk": float(s.k_x), "k_y_w_mk": float(s.k_y), "k_z_w_mk": float(s.k_z)}
                      for name, s in zip(names, series.layers, strict=True)},
        "layers": [{"id": name, "thickness_mm": float(s.thickness_mm), "material": name}
                   for name, s in zip(names, series.layers, strict=True)],
        "sources": [{"id": f"Q{n + 1}", "x_mm": s.x_mm, "y_mm": s.y_mm, "width_mm": s.width_mm,
                     "height_mm": s.height_mm, "face": s.face, "power_w": s.power_w}
                    for n, s in enumerate(series.sources)],
        "faces": {"top": _face(series.top), "bottom": _face(series.bottom)},
    }


def _face(face: Film | Held) -> dict:
    if isinstance(face, Held):
        return {"kind": "fixed", "temperature_c": face.fixed_c}
    if face.film_w_m2k == 0:
        return {"kind": "insulated"}
    return {"kind": "convective", "film_w_m2k": face.film_w_m2k, "fluid_c": face.fluid_c}


def _slab(kind: str, rng: np.random.Generator) -> Slab:
    thickness, conductivity, through = KINDS[kind]
    k = float(rng.uniform(*conductivity))
    return Slab(float(round(np.exp(rng.uniform(*np.log(thickness))), 3)), k, k, k * through)


def _sources(plate: tuple[float, float], rng: np.random.Generator, both_faces: bool) -> list[Heat]:
    """One to eight parts of 2-30 mm, not over one another on a face."""
    placed: list[Heat] = []
    for _ in range(rng.integers(1, 9)):
        for _ in range(50):
            wish = np.exp(rng.uniform(np.log(2.0), np.log(30.0))) * rng.uniform(0.7, 1.0, 2)
            width, height = (float(round(min(max(v, 2.0), 0.6 * side), 1))
                             for v, side in zip(wish, plate, strict=True))
            x, y = (float(round(rng.uniform(0.0, side - size), 1))
                    for side, size in zip(plate, (width, height), strict=True))
            face = "bottom" if both_faces and rng.random() < 0.4 else "top"
            part = Heat(x, y, width, height, float(width * height * rng.uniform(0.3, 3.0)), face)
            if not any(_overlap(part, other) for other in placed):
                placed.append(part)
                break
    return placed


def _overlap(a: Heat, b: Heat) -> bool:
    return (a.face == b.face and a.x_mm < b.x_mm + b.width_mm and b.x_mm < a.x_mm + a.width_mm
            and a.y_mm < b.y_mm + b.height_mm and b.y_mm < a.y_mm + a.height_mm)

"""Layout documents for published cases, and the ways of solving and reading them that the tests share."""

from __future__ import annotations

from solver import Solution, parse_layout, planes, solve


def insulated() -> list[dict]:
    return [{"kind": "insulated"}]


def fixed(temperature_c: float) -> list[dict]:
    """One segment over a whole side, held at a temperature."""
    return [{"kind": "fixed", "temperature_c": temperature_c}]


def convective(film_w_m2k: float, fluid_c: float) -> list[dict]:
    """One segment over a whole side, with a film."""
    return [{"kind": "convective", "film_w_m2k": film_w_m2k, "fluid_c": fluid_c}]


def document(width_mm: float, height_mm: float, stack: list[tuple[float, float]], **rest) -> dict:
    """A layout document of isotropic layers (thickness mm, conductivity W/mK) from the top.

    rest: further fields of the document; edges may name only the sides that are not insulated.
    """
    names = [f"layer-{n + 1}" for n in range(len(stack))]
    sides = ("west", "east", "south", "north")
    rest["edges"] = {**{side: insulated() for side in sides}, **rest.get("edges", {})}
    rest["materials"] = {**{name: {"k_w_mk": k} for name, (_, k) in zip(names, stack, strict=True)},
                         **rest.get("materials", {})}
    return {
        "format": "heat-spreader-layout", "version": 1,
        "plate": {"width_mm": width_mm, "height_mm": height_mm},
        "layers": [{"id": name, "thickness_mm": thickness, "material": name}
                   for name, (thickness, _) in zip(names, stack, strict=True)],
        **rest,
    }


def source(x_mm: float, y_mm: float, width_mm: float, height_mm: float, power_w: float, **rest) -> dict:
    return {"id": "Q1", "x_mm": x_mm, "y_mm": y_mm, "width_mm": width_mm, "height_mm": height_mm,
            "power_w": power_w, **rest}


def solved(layout: dict, plane: bool = False) -> Solution:
    """The final solution of a document; plane: the plain two-dimensional plate."""
    return solve(parse_layout(layout), plane=plane)


def temperature(solution: Solution, x_mm: float, y_mm: float, plane: str = "top") -> float:
    """Temperature at a point of a plane, °C."""
    return planes.at(planes.temperature(solution, plane), x_mm, y_mm)

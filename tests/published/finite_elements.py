"""A layout document solved with finite elements by scikit-fem: an independent second opinion.

Triquadratic hexahedra (27 nodes) on lines snapped to every rectangle and gathered towards its edges. It
reads the document as it is written, shares no code with the solver, and covers what the series cannot:
zones, voids, edge segments, contacts and joints.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.sparse import csr_matrix, hstack, vstack
from scipy.sparse.linalg import splu
from skfem import Basis, BilinearForm, ElementHex2, FacetBasis, LinearForm, MeshHex, condense

MM = 1e-3
IN_PLANE, THROUGH = (0.2, 0.6, 0.2), (0.5, 0.5)
"""Cells between neighbouring lines, as shares of the distance: narrow where the field bends."""


@BilinearForm
def _conduction(u, v, w):
    return w.kx * u.grad[0] * v.grad[0] + w.ky * u.grad[1] * v.grad[1] + w.kz * u.grad[2] * v.grad[2]


@BilinearForm
def _mass(u, v, w):
    return u * v


@LinearForm
def _unit(v, w):
    return 1.0 * v


@dataclass(frozen=True)
class Answer:
    """Temperatures in °C and heats in W, sources in the document's order."""

    peak_c: float
    mean_c: list[float]
    case_c: list[float | None]
    out_w: dict[str, float]
    unknowns: int


class Plate:
    """The finite-element model of a layout document; z counts up, so the top face is at the largest z."""

    def __init__(self, layout: dict):
        self.layout = layout
        self.ambient_c = layout["ambient_c"]
        self.size = np.array([layout["plate"]["width_mm"], layout["plate"]["height_mm"]]) * MM
        thickness = np.array([layer["thickness_mm"] for layer in layout["layers"]]) * MM
        self.levels = thickness.sum() - np.concatenate([[0.0], np.cumsum(thickness)])
        x, y = (_gathered(self._lines(axis), IN_PLANE) for axis in (0, 1))
        z = _gathered(self.levels[::-1], THROUGH)
        mesh = MeshHex.init_tensor(x, y, z)
        names = self._materials(mesh.p[:, mesh.t].mean(axis=1))
        self.mesh = mesh.restrict(np.flatnonzero(names != "void"))
        names = names[names != "void"]
        self.k = np.array([_conductivity(layout["materials"][name]) for name in names]).T[:, :, None]
        self.basis = Basis(self.mesh, ElementHex2())
        self.middles = self.mesh.p[:, self.mesh.facets].mean(axis=1)
        self.outer = self.mesh.boundary_facets()

    def _rectangles(self):
        return [r for kind in ("zones", "sources", "contacts") for r in self.layout.get(kind, [])]

    def _lines(self, axis: int) -> np.ndarray:
        low, size = (("x_mm", "width_mm"), ("y_mm", "height_mm"))[axis]
        lines = [0.0, self.size[axis]]
        for r in self._rectangles():
            lines += [r[low] * MM, (r[low] + r[size]) * MM]
        for side in (("south", "north"), ("west", "east"))[axis]:
            for segment in self.layout["edges"].get(side, []):
                lines += [segment[end] * MM for end in ("from_mm", "to_mm") if end in segment]
        lines = np.clip(np.sort(lines), 0.0, self.size[axis])
        return lines[np.concatenate([[True], np.diff(lines) > 1e-9])]

    def _materials(self, at: np.ndarray) -> np.ndarray:
        """The material's name of each element, from its middle; a later zone lies over an earlier one."""
        layer = np.searchsorted(-self.levels, -at[2]) - 1
        names, ids = (np.array([entry[field] for entry in self.layout["layers"]], dtype=object)[layer]
                      for field in ("material", "id"))
        for zone in self.layout.get("zones", []):
            inside = _within(zone, at)
            if zone["layers"] != "all":
                inside &= np.isin(ids, zone["layers"])
            names[inside] = zone["material"]
        return names

    def _face(self, face: str) -> np.ndarray:
        """Facets of the top or bottom face."""
        level = self.levels[0] if face == "top" else self.levels[-1]
        return self.outer[np.abs(self.middles[2, self.outer] - level) < 1e-9]

    def _side(self, side: str, segment: dict) -> np.ndarray:
        axis = 0 if side in ("west", "east") else 1
        place = 0.0 if side in ("west", "south") else self.size[axis]
        facets = self.outer[np.abs(self.middles[axis, self.outer] - place) < 1e-9]
        along = self.middles[1 - axis, facets]
        low, high = segment.get("from_mm", 0.0) * MM, segment.get("to_mm", np.inf) * MM
        return facets[(along > low) & (along < high)]

    def _under(self, rectangle: dict, face: str | None = None) -> np.ndarray:
        facets = self._face(face or rectangle.get("face", "top"))
        return facets[_within(rectangle, self.middles[:, facets])]

    def _outlets(self):
        """(name, facets, W/m2K or None where held, sink's rise over ambient) of all that leads heat away."""
        for face in ("top", "bottom"):
            facets = self._face(face)
            for contact in self.layout.get("contacts", []):
                if contact["face"] == face:
                    mine = self._under(contact)
                    facets = np.setdiff1d(facets, mine)
                    rise = contact.get("sink_c", self.ambient_c) - self.ambient_c
                    yield f"contact:{contact['id']}", mine, contact["conductance_w_m2k"], rise
            yield from self._outlet(face, facets, self.layout["faces"].get(face, {"kind": "insulated"}))
        for side, segments in self.layout["edges"].items():
            for segment in segments:
                yield from self._outlet(side, self._side(side, segment), segment)

    def _outlet(self, name: str, facets: np.ndarray, condition: dict):
        if condition["kind"] == "convective":
            rise = condition.get("fluid_c", self.ambient_c) - self.ambient_c
            yield name, facets, condition["film_w_m2k"], rise
        elif condition["kind"] == "fixed":
            yield name, facets, None, condition.get("temperature_c", self.ambient_c) - self.ambient_c

    def _integrals(self, facets: np.ndarray) -> tuple[csr_matrix, np.ndarray]:
        """Mass matrix and integrals of the shape functions over facets."""
        basis = FacetBasis(self.mesh, ElementHex2(), facets=facets)
        return _mass.assemble(basis), _unit.assemble(basis)

    def solve(self) -> Answer:
        n = self.basis.N
        matrix = _conduction.assemble(self.basis, kx=self.k[0], ky=self.k[1], kz=self.k[2])
        load, held, films = np.zeros(n), [], []
        for name, facets, film, rise in self._outlets():
            if len(facets) and film is None:
                held.append((name, self.basis.get_dofs(facets).all(), rise))
            elif len(facets):
                mass, unit = self._integrals(facets)
                matrix = matrix + film * mass
                load += film * rise * unit
                films.append((name, film, rise, unit))
        feet, joints = [], []
        for part in self.layout["sources"]:
            mass, unit = self._integrals(self._under(part))
            feet.append(unit)
            if "interface_k_mm2_w" in part:
                per_area = 1e6 / part["interface_k_mm2_w"]
                matrix = matrix + per_area * mass
                joints.append((part, per_area * unit))
            else:
                load += part["power_w"] / unit.sum() * unit
        body, cases = _solved(matrix, load, joints, held)
        out: dict[str, float] = {}
        for name, film, rise, unit in films:
            out[name] = out.get(name, 0.0) + film * float(unit @ body - rise * unit.sum())
        fed = load + sum((joint * case for (_, joint), case in zip(joints, cases, strict=True)), np.zeros(n))
        left = fed - matrix @ body
        for name, at, _ in held:
            out[name] = out.get(name, 0.0) + float(left[at].sum())
        of_part = {part["id"]: float(case) + self.ambient_c
                   for (part, _), case in zip(joints, cases, strict=True)}
        return Answer(float(body.max()) + self.ambient_c,
                      [float(unit @ body / unit.sum()) + self.ambient_c for unit in feet],
                      [of_part.get(part["id"]) for part in self.layout["sources"]], out, n + len(joints))


def _solved(matrix: csr_matrix, load: np.ndarray, joints: list, held: list) -> tuple[np.ndarray, np.ndarray]:
    """Rises of the body and of the cases, which are one more unknown each, tied to their footprint."""
    powers = [part["power_w"] for part, _ in joints]
    if joints:
        coupling = csr_matrix(-np.array([joint for _, joint in joints]).T)
        own = csr_matrix(np.diag([joint.sum() for _, joint in joints]))
        matrix = vstack([hstack([matrix, coupling]), hstack([coupling.T, own])]).tocsr()
    rhs = np.concatenate([load, powers])
    values = np.zeros(len(rhs))
    for _, at, rise in held:
        values[at] = rise
    fixed = np.unique(np.concatenate([np.zeros(0, dtype=int), *(at for _, at, _ in held)]))
    inner, inner_load, _, free = condense(matrix, rhs, x=values, D=fixed)
    factor = splu(inner.tocsc(), permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0,
                  options={"SymmetricMode": True})
    values[free] = factor.solve(inner_load)
    return values[: len(load)], values[len(load) :]


def _gathered(lines: np.ndarray, cells: tuple[float, ...]) -> np.ndarray:
    """Each interval between lines cut into cells of the given shares of it."""
    inner = lines[:-1, None] + np.cumsum((0.0, *cells[:-1])) * np.diff(lines)[:, None]
    return np.concatenate([inner.ravel(), lines[-1:]])


def _within(rectangle: dict, at: np.ndarray) -> np.ndarray:
    x, y = rectangle["x_mm"] * MM, rectangle["y_mm"] * MM
    return ((at[0] > x) & (at[0] < x + rectangle["width_mm"] * MM)
            & (at[1] > y) & (at[1] < y + rectangle["height_mm"] * MM))


def _conductivity(material: dict) -> tuple[float, float, float]:
    if "k_w_mk" in material:
        return (material["k_w_mk"],) * 3
    if "k_in_plane_w_mk" in material:
        return material["k_in_plane_w_mk"], material["k_in_plane_w_mk"], material["k_through_w_mk"]
    return material["k_x_w_mk"], material["k_y_w_mk"], material["k_z_w_mk"]

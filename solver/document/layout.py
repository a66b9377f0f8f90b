"""The layout document: frozen models with exactly the fields of the file format, units in the names."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Literal

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, model_serializer, model_validator

VOID = "void"
"""The reserved material: no conduction, no film, no stored heat."""

ABSOLUTE_ZERO_C = -273.15

Positive = Annotated[float, Field(gt=0.0, allow_inf_nan=False, strict=True)]
NotNegative = Annotated[float, Field(ge=0.0, allow_inf_nan=False, strict=True)]
Finite = Annotated[float, Field(allow_inf_nan=False, strict=True)]
Temperature = Annotated[float, Field(gt=ABSOLUTE_ZERO_C, allow_inf_nan=False, strict=True)]
Name = Annotated[str, Field(min_length=1, max_length=100)]
Version = Annotated[Literal[1], BeforeValidator(lambda value: str(value) if isinstance(value, bool) else value)]
"""The number 1; JSON's true would otherwise pass for it."""
Side = Literal["west", "east", "south", "north"]
FaceName = Literal["top", "bottom"]
SIDES: tuple[Side, ...] = ("west", "east", "south", "north")


def is_void(material: str) -> bool:
    return material == VOID


class Model(BaseModel):
    """Frozen; unknown fields are refused; fields that are None are left out of the file."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    @model_serializer(mode="wrap")
    def _without_none(self, handler) -> dict[str, Any]:
        return {name: value for name, value in handler(self).items() if value is not None}


class Plate(Model):
    width_mm: Positive
    height_mm: Positive


class Material(Model):
    """Either k_w_mk, or k_in_plane_w_mk with k_through_w_mk, or k_x_w_mk, k_y_w_mk and k_z_w_mk."""

    k_w_mk: Positive | None = None
    k_in_plane_w_mk: Positive | None = None
    k_through_w_mk: Positive | None = None
    k_x_w_mk: Positive | None = None
    k_y_w_mk: Positive | None = None
    k_z_w_mk: Positive | None = None
    density_kg_m3: Positive | None = None
    specific_heat_j_kgk: Positive | None = None

    @model_validator(mode="after")
    def _one_form(self) -> Material:
        forms = (("k_w_mk",), ("k_in_plane_w_mk", "k_through_w_mk"), ("k_x_w_mk", "k_y_w_mk", "k_z_w_mk"))
        given = {name for form in forms for name in form if getattr(self, name) is not None}
        if given not in [set(form) for form in forms]:
            raise ValueError(f"conductivity fields given: {', '.join(sorted(given)) or 'none'}; allowed: k_w_mk alone, or "
                             "k_in_plane_w_mk with k_through_w_mk, or k_x_w_mk, k_y_w_mk and k_z_w_mk")
        return self

    @property
    def kx(self) -> float:
        """Conductivity along x, W/(m K)."""
        return self.k_w_mk or self.k_in_plane_w_mk or self.k_x_w_mk

    @property
    def ky(self) -> float:
        return self.k_w_mk or self.k_in_plane_w_mk or self.k_y_w_mk

    @property
    def kz(self) -> float:
        return self.k_w_mk or self.k_through_w_mk or self.k_z_w_mk


class Layer(Model):
    id: Name
    thickness_mm: Positive
    material: Name


class Zone(Model):
    id: Name
    layers: Literal["all"] | tuple[Name, ...]
    x_mm: Finite
    y_mm: Finite
    width_mm: Positive
    height_mm: Positive
    material: Name


class Source(Model):
    id: Name
    x_mm: Finite
    y_mm: Finite
    width_mm: Positive
    height_mm: Positive
    face: FaceName = "top"
    power_w: Finite
    r_junction_case_k_w: NotNegative | None = None
    interface_k_mm2_w: Positive | None = None
    limit_c: Temperature | None = None
    limit_at: Literal["junction", "case", "plate"] = "plate"


class InsulatedSegment(Model):
    kind: Literal["insulated"] = "insulated"
    from_mm: Finite | None = None
    to_mm: Finite | None = None


class FixedSegment(Model):
    kind: Literal["fixed"] = "fixed"
    from_mm: Finite | None = None
    to_mm: Finite | None = None
    temperature_c: Temperature | None = None


class ConvectiveSegment(Model):
    kind: Literal["convective"] = "convective"
    from_mm: Finite | None = None
    to_mm: Finite | None = None
    film_w_m2k: Positive
    fluid_c: Temperature | None = None


EdgeSegment = Annotated[InsulatedSegment | FixedSegment | ConvectiveSegment, Field(discriminator="kind")]
Segments = tuple[EdgeSegment, ...]
INSULATED: Segments = (InsulatedSegment(),)


class Edges(Model):
    west: Segments = INSULATED
    east: Segments = INSULATED
    south: Segments = INSULATED
    north: Segments = INSULATED


class InsulatedFace(Model):
    kind: Literal["insulated"] = "insulated"


class FixedFace(Model):
    kind: Literal["fixed"] = "fixed"
    temperature_c: Temperature | None = None


class ConvectiveFace(Model):
    kind: Literal["convective"] = "convective"
    film_w_m2k: Positive
    fluid_c: Temperature | None = None


Face = Annotated[InsulatedFace | FixedFace | ConvectiveFace, Field(discriminator="kind")]


class Faces(Model):
    top: Face = InsulatedFace()
    bottom: Face = InsulatedFace()


class Contact(Model):
    id: Name
    face: FaceName
    x_mm: Finite
    y_mm: Finite
    width_mm: Positive
    height_mm: Positive
    conductance_w_m2k: Positive
    sink_c: Temperature | None = None


class Limits(Model):
    plate_c: Temperature | None = None
    warn_margin_k: NotNegative = 10.0


class Layout(Model):
    format: Literal["heat-spreader-layout"]
    version: Version
    title: str = ""
    notes: str = ""
    ambient_c: Temperature = 25.0
    plate: Plate
    materials: Mapping[Name, Material] = {}
    layers: Annotated[tuple[Layer, ...], Field(min_length=1)]
    zones: tuple[Zone, ...] = ()
    sources: tuple[Source, ...] = ()
    edges: Edges = Edges()
    faces: Faces = Faces()
    contacts: tuple[Contact, ...] = ()
    limits: Limits = Limits()

    def material(self, name: str) -> Material:
        """The layout's own material of that name, else the built-in one. Raises KeyError for a name in neither."""
        from .materials import MATERIALS

        return self.materials[name] if name in self.materials else MATERIALS[name].material

"""The rig file: its schema, its reading, its messages.

TOML written by the user (docs/files.md has every key). What comes out is `records.Rig`, in SI; what is wrong
goes out as one `BadRig` that names the key, what it got and what it takes.
"""

from __future__ import annotations

import difflib
import math
import tomllib
from collections.abc import Mapping
from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import (
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Field,
    TypeAdapter,
    ValidationError,
    model_validator,
)

from .errors import BadRig
from .quantity import parse_quantity
from .records import AddedWeight, Air, Article, Quantity, Rig, Suspension, View

LARGEST_RIG_BYTES = 1_000_000  # a rig file is a page of text; anything larger is another file by mistake


def _reader(dimension: str, sign: str = "any") -> BeforeValidator:
    """Reads a quantity text of `dimension`; `sign` is "any", "positive" or "zero or more"."""

    def read(given: object) -> Quantity:
        quantity = parse_quantity(given, dimension)  # type: ignore[arg-type]  # it checks the type itself
        if (sign == "positive" and quantity.value <= 0.0) or (
            sign == "zero or more" and quantity.value < 0.0
        ):
            state = "negative" if quantity.value < 0 else "zero"
            raise BadRig(f"{given!r} is {state}.", f"Needed: a {dimension} that is {sign}.")
        return quantity

    return BeforeValidator(read)


Length = Annotated[Quantity, _reader("length", "positive")]
Distance = Annotated[Quantity, _reader("length", "zero or more")]
Height = Annotated[Quantity, _reader("length")]
Mass = Annotated[Quantity, _reader("mass", "positive")]
Time = Annotated[Quantity, _reader("time", "positive")]
Moment = Annotated[Quantity, _reader("moment", "positive")]
Stiffness = Annotated[Quantity, _reader("stiffness", "positive")]
Modulus = Annotated[Quantity, _reader("modulus", "positive")]
Force = Annotated[Quantity, _reader("force", "positive")]
Gravity = Annotated[Quantity, _reader("gravity", "positive")]
Density = Annotated[Quantity, _reader("density", "positive")]
Angle = Annotated[Quantity, _reader("angle")]


class _Table(BaseModel):
    model_config = ConfigDict(extra="forbid", arbitrary_types_allowed=True, strict=False)

    def quantities(self) -> dict[str, Quantity]:
        return {
            key: value for key in type(self).model_fields if isinstance(value := getattr(self, key), Quantity)
        }


class _AddedWeight(_Table):
    mass: Mass
    distance: Distance
    own_moment: Moment | None = None


class _Article(_Table):
    name: str = Field(default="article", max_length=200)
    mass: Mass | None = None
    axis: tuple[float, float, float] | None = None
    expected_moment: Moment | None = None
    added: list[_AddedWeight] = Field(default_factory=list, max_length=50)

    @model_validator(mode="after")
    def _axis_has_a_direction(self) -> _Article:
        if self.axis is not None and not (
            math.isfinite(math.hypot(*self.axis)) and math.hypot(*self.axis) > 0.0
        ):
            raise ValueError(f"axis = {list(self.axis)} has no direction; give three numbers, not all zero")
        return self


class _Strings(_Table):
    """What every suspension on strings may say of its strings."""

    string_mass: Mass | None = None  # all strings together
    string_stiffness: Stiffness | None = None  # twist of all strings together
    string_diameter: Length | None = None
    string_material: str | None = Field(default=None, max_length=60)
    string_load_limit: Force | None = None  # of one string


class _Bifilar(_Strings):
    kind: Literal["bifilar"]
    length: Length | None = None
    drop: Length | None = None
    upper_spacing: Length
    lower_spacing: Length | None = None
    centre_offset: Distance | None = None
    length_difference: Distance | None = None

    @model_validator(mode="after")
    def _length_or_drop(self) -> _Bifilar:
        _need_exactly_one(self, "length", "drop")
        return self


class _Trifilar(_Strings):
    kind: Literal["trifilar"]
    strings: int = Field(default=3, ge=3, le=24)
    length: Length | None = None
    drop: Length | None = None
    upper_radius: Length
    lower_radius: Length | None = None
    centre_offset: Distance | None = None

    @model_validator(mode="after")
    def _length_or_drop(self) -> _Trifilar:
        _need_exactly_one(self, "length", "drop")
        return self


class _TorsionWire(_Table):
    kind: Literal["torsion-wire"]
    stiffness: Stiffness | None = None
    wire_diameter: Length | None = None
    shear_modulus: Modulus | None = None
    length: Length | None = None

    @model_validator(mode="after")
    def _stiffness_or_wire(self) -> _TorsionWire:
        wire = (self.wire_diameter, self.shear_modulus, self.length)
        if self.stiffness is None and any(part is None for part in wire):
            raise ValueError("needs stiffness, or wire_diameter, shear_modulus and length together")
        if self.stiffness is not None and self.wire_diameter is not None:
            raise ValueError("has both stiffness and wire_diameter; give the one that was measured")
        return self


class _KnifeEdge(_Table):
    kind: Literal["knife-edge"]
    pivot_to_centre: Length


class _TwoEdge(_Table):
    kind: Literal["two-edge"]
    edge_separation: Length
    second_period: Time


_Kinds = Annotated[_Bifilar | _Trifilar | _TorsionWire | _KnifeEdge | _TwoEdge, Field(discriminator="kind")]


class _Place(_Table):
    gravity: Gravity | None = None
    latitude: Angle | None = None
    altitude: Height | None = None

    @model_validator(mode="after")
    def _one_source(self) -> _Place:
        if self.gravity is not None and self.latitude is not None:
            raise ValueError("has both gravity and latitude; give the one that you trust more")
        if self.altitude is not None and self.latitude is None:
            raise ValueError("has altitude without latitude; give both, or gravity itself")
        if self.latitude is not None and abs(self.latitude.value) > math.pi / 2 + 1e-9:
            raise ValueError(
                f"latitude = {self.latitude.text!r} lies beyond the poles; give -90 deg to 90 deg"
            )
        if self.altitude is not None and not -500.0 <= self.altitude.value <= 9000.0:
            raise ValueError(f"altitude = {self.altitude.text!r} is not on land; give height above the sea")
        return self


class _View(_Table):
    camera: Literal["above", "side", "oblique"] | None = Field(default=None, alias="from")
    dot_radius: Length | None = None
    dot_diameter: Length | None = None


class _Air(_Table):
    shape: Literal["plate", "sphere", "cylinder", "none"]
    width: Length | None = None
    height: Length | None = None
    diameter: Length | None = None
    length: Length | None = None
    distance: Distance | None = None  # of the shape's middle from the swing axis
    face: Literal["broadside", "edgewise"] | None = None
    density: Density | None = None


class _RigFile(_Table):
    article: _Article
    suspension: _Kinds
    place: _Place = _Place()
    view: _View = _View()
    air: _Air | None = None

    @model_validator(mode="after")
    def _gravity_needs_a_mass(self) -> _RigFile:
        if self.article.mass is None and self.suspension.kind != "torsion-wire":
            raise ValueError("article.mass is missing; without it gravity's part can't be worked out")
        return self


def read_rig(file: str | Path) -> Rig:
    """Read a rig file.

    Raises
    ------
    BadRig
        It can't be read, is not TOML, or a key is missing, unknown, of a wrong unit or impossible.
    """
    return rig_from_mapping(read_toml(file), name=str(file))


def rig_from_mapping(tables: Mapping[str, Any], *, name: str = "rig") -> Rig:
    """Make a rig of TOML tables already read, such as those kept in a result file."""
    checked = validate_tables(_RigFile, tables, name=name)
    article, hung = checked.article, checked.suspension
    axis = article.axis
    if axis is not None:
        norm = math.hypot(*axis)
        axis = (axis[0] / norm, axis[1] / norm, axis[2] / norm)
    place, view, air = checked.place, checked.view, checked.air
    return Rig(
        article=Article(
            name=article.name,
            mass=article.mass,
            axis=axis,
            expected_moment=article.expected_moment,
            added=tuple(AddedWeight(w.mass, w.distance, w.own_moment) for w in article.added),
        ),
        suspension=Suspension(
            kind=hung.kind,
            dimensions=hung.quantities(),
            strings=getattr(hung, "strings", 2),
            string_material=getattr(hung, "string_material", None),
        ),
        gravity=place.gravity,
        latitude=place.latitude,
        altitude=place.altitude,
        view=View(view.camera, view.dot_radius, view.dot_diameter),
        air=None if air is None else Air(air.shape, air.quantities(), air.density, air.face),
        source=dict(tables),
    )


def read_toml(file: str | Path) -> dict[str, Any]:
    """Read a TOML file that a user wrote, with messages that say what is the matter."""
    path = Path(file)
    try:
        if path.stat().st_size > LARGEST_RIG_BYTES:
            raise BadRig(
                f"{path} is {path.stat().st_size} bytes long.",
                "Needed: a short TOML text.",
                "Is it the right file?",
            )
        return tomllib.loads(path.read_bytes().decode("utf-8-sig"))
    except FileNotFoundError:
        raise BadRig(
            f"There is no file {path}.", "Needed: a TOML file.", "Check the name and the folder."
        ) from None
    except OSError as error:
        raise BadRig(f"{path} can't be read: {error.strerror}.", "Needed: a readable TOML file.") from None
    except UnicodeDecodeError:
        raise BadRig(
            f"{path} is not a text file.", "Needed: TOML in UTF-8.", "Is it the right file?"
        ) from None
    except (tomllib.TOMLDecodeError, RecursionError) as error:
        raise BadRig(
            f"{path} is not valid TOML: {error}.",
            'Needed: lines such as mass = "0.912 kg ± 0.5 g".',
            "Quantities stand in quotes; samples/ has rig files to start from.",
        ) from None


def validate_tables(schema: type[Any], tables: Mapping[str, Any], *, name: str) -> Any:
    """Check TOML tables against a pydantic model; one BadRig that names every key at fault."""
    try:
        return TypeAdapter(schema).validate_python(dict(tables))
    except ValidationError as error:
        problems = [_problem(item, schema) for item in error.errors()]
    first = problems[:5]
    more = [f"and {len(problems) - 5} more"] if len(problems) > 5 else []
    raise BadRig(f"{name}: " + "; ".join(first + more) + ".", "", "docs/files.md lists every key.")


def _problem(item: Mapping[str, Any], schema: type[Any]) -> str:
    """One validation error in the user's words: the key, what it got, what it takes."""
    kinds = {"bifilar", "trifilar", "torsion-wire", "knife-edge", "two-edge"}
    place = [str(part) for part in item["loc"]]
    key = ".".join(part for part in place if part not in kinds) or "the file"
    match item["type"]:
        case "missing":
            return f"{key} is missing"
        case "extra_forbidden":
            near = difflib.get_close_matches(place[-1], _all_keys(schema), n=1)
            return f"{key} is not a key here" + (f" (did you mean {near[0]}?)" if near else "")
        case "union_tag_not_found":
            return f"{key}.kind is missing (takes {', '.join(sorted(kinds))})"
        case "union_tag_invalid":
            return f"{key}.kind is not known (takes {', '.join(sorted(kinds))})"
        case "value_error":
            return f"{key}: {str(item['ctx']['error']).rstrip('.')}"
        case _:
            got = repr(item.get("input"))
            return f"{key} got {got if len(got) < 60 else got[:57] + '…'}: {item['msg'].lower()}"


def _all_keys(schema: type[Any]) -> list[str]:
    tables = [schema, *_Table.__subclasses__(), *_Strings.__subclasses__()]
    return sorted({field.alias or key for table in tables for key, field in table.model_fields.items()})


def _need_exactly_one(table: _Table, *keys: str) -> None:
    given = [key for key in keys if getattr(table, key) is not None]
    if len(given) != 1:
        what = "has both" if given else "needs one of"
        raise ValueError(
            f"{what} {' and '.join(keys) if given else ' or '.join(keys)}; give the one that was measured"
        )

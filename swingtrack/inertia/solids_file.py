"""The parts file (TOML, written by the user): its schema, its reading, its messages. docs/files.md has every key."""

from __future__ import annotations

import difflib
import math
import tomllib
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Annotated, Any

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, ValidationError, model_validator

from ..errors import BadRig
from ..quantity import parse_quantity
from ..records import Quantity
from .solids_materials import plain_name
from .solids_parts import Assembly, Axis, Part, Turn
from .solids_shapes import SHAPES
from .solids_sum import BODY_KEYS

LARGEST_FILE_BYTES = 1_000_000  # a parts file is a few pages of text
MOST_PARTS = 500
KINDS = (*SHAPES, "body")


def _reader(dimension: str, *, positive: bool = True) -> BeforeValidator:
    def read(given: object) -> Quantity:
        quantity = parse_quantity(given, dimension)  # type: ignore[arg-type]  # it checks the type itself
        if positive and quantity.value <= 0.0:
            raise BadRig(f"{given!r} is not over zero.", f"Needed: a {dimension} over zero.")
        return quantity

    return BeforeValidator(read)


def _turn_reader(given: object) -> Turn:
    """ "x 90 deg": an axis and an angle."""
    axis, _, angle = given.strip().partition(" ") if isinstance(given, str) else ("", "", "")
    if axis not in ("x", "y", "z") or not angle.strip():
        raise BadRig(
            f"{given!r} is not a turn.", "Needed: an axis and an angle.", 'Write "x 90 deg ± 1 deg".'
        )
    return Turn(axis, parse_quantity(angle, "angle"))


Size = Annotated[Quantity, _reader("length")]
Place = Annotated[Quantity, _reader("length", positive=False)]
Mass = Annotated[Quantity, _reader("mass")]
Density = Annotated[Quantity, _reader("density")]
Moment = Annotated[Quantity, _reader("moment")]
Point = tuple[Place, Place, Place]
ORIGIN_TEXT = ("0 mm ± 0 mm", "0 mm ± 0 mm", "0 mm ± 0 mm")


class _Table(BaseModel):
    model_config = ConfigDict(extra="forbid", arbitrary_types_allowed=True)


class _Part(_Table):
    name: str = Field(min_length=1, max_length=80)
    kind: str
    at: Point = Field(default=ORIGIN_TEXT, validate_default=True)  # read like the user's own
    turn: list[Annotated[Turn, BeforeValidator(_turn_reader)]] = Field(default_factory=list, max_length=12)
    mass: Mass | None = None
    density: Density | None = None
    material: str | None = Field(default=None, max_length=60)
    hole: bool = False
    of: str | None = None
    length: Size | None = None
    width: Size | None = None
    height: Size | None = None
    diameter: Size | None = None
    outer_diameter: Size | None = None
    inner_diameter: Size | None = None
    lower_diameter: Size | None = None
    upper_diameter: Size | None = None
    diameter_x: Size | None = None
    diameter_y: Size | None = None
    diameter_z: Size | None = None
    ring_diameter: Size | None = None
    tube_diameter: Size | None = None
    moment_x: Moment | None = None
    moment_y: Moment | None = None
    moment_z: Moment | None = None

    @model_validator(mode="after")
    def _keys_of_the_kind(self) -> _Part:
        if self.kind not in KINDS:
            near = difflib.get_close_matches(self.kind, KINDS, n=1)
            raise ValueError(
                f"kind = {self.kind!r} is not known"
                + (f" (did you mean {near[0]}?)" if near else "")
                + f"; takes {', '.join(KINDS)}"
            )
        needed = BODY_KEYS if self.kind == "body" else SHAPES[self.kind].keys
        given = {key for key in _SIZES if getattr(self, key) is not None}
        if missing := [key for key in needed if key not in given]:
            raise ValueError(f"{missing[0]} is missing (a {self.kind} needs {', '.join(needed)})")
        if surplus := sorted(given - set(needed)):
            takes = ", ".join(needed) or "no dimensions"
            raise ValueError(f"{surplus[0]} is not a key of a {self.kind} (it takes {takes})")
        _check_sizes(self)
        said = [key for key in ("mass", "density", "material") if getattr(self, key) is not None]
        if len(said) > 1:
            raise ValueError(f"has both {said[0]} and {said[1]}; give the one that was measured")
        return self


_SIZES = tuple(dict.fromkeys((*(key for shape in SHAPES.values() for key in shape.keys), *BODY_KEYS)))


class _Axis(_Table):
    direction: tuple[float, float, float] = (0.0, 0.0, 1.0)
    through: Point | None = None

    @model_validator(mode="after")
    def _has_a_direction(self) -> _Axis:
        length = math.hypot(*self.direction)
        if not (math.isfinite(length) and length > 0.0):
            raise ValueError(
                f"direction = {list(self.direction)} has no direction; give three numbers, not all zero"
            )
        return self


class _Measured(_Table):
    moment: Moment | None = None
    mass: Mass | None = None


class _PartsFile(_Table):
    name: str = Field(default="article", max_length=200)
    axis: _Axis = _Axis()
    measured: _Measured = _Measured()
    materials: dict[str, Density] = Field(default_factory=dict)
    part: list[_Part] = Field(min_length=1, max_length=MOST_PARTS)


def read_parts(file: str | Path) -> Assembly:
    """Read a parts file.

    Raises
    ------
    BadRig
        It can't be read, is not TOML, or a key is missing, unknown, of a wrong unit or impossible.
    """
    path = Path(file)
    try:
        if path.stat().st_size > LARGEST_FILE_BYTES:
            raise BadRig(
                f"{path} is {path.stat().st_size} bytes long.",
                "Needed: a short TOML text.",
                "Is it the right file?",
            )
        tables = tomllib.loads(path.read_bytes().decode("utf-8-sig"))
    except OSError as error:
        reason = "there is no such file" if isinstance(error, FileNotFoundError) else str(error.strerror)
        raise BadRig(
            f"{path} can't be read: {reason}.", "Needed: a TOML file.", "Check the name and the folder."
        ) from None
    except UnicodeDecodeError:
        raise BadRig(
            f"{path} is not a text file.", "Needed: TOML in UTF-8.", "Is it the right file?"
        ) from None
    except (tomllib.TOMLDecodeError, RecursionError) as error:
        raise BadRig(
            f"{path} is not valid TOML: {error}.",
            'Needed: [[part]] tables with lines such as diameter = "30 mm ± 0.1 mm".',
            "Quantities stand in quotes.",
        ) from None
    return parts_from_mapping(tables, name=str(path))


def parts_from_mapping(tables: Mapping[str, Any], *, name: str = "parts") -> Assembly:
    """Make an assembly of TOML tables already read."""
    try:
        checked = _PartsFile.model_validate(dict(tables))
    except ValidationError as error:
        problems = [_problem(item, tables) for item in error.errors()]
        more = [f"and {len(problems) - 5} more"] if len(problems) > 5 else []
        raise BadRig(
            f"{name}: " + "; ".join(problems[:5] + more) + ".", "", "docs/files.md lists every key."
        ) from None
    densities = {plain_name(material): density for material, density in checked.materials.items()}
    return Assembly(
        name=checked.name,
        parts=tuple(_part(part, densities) for part in checked.part),
        axis=Axis(checked.axis.direction, checked.axis.through),
        measured_moment=checked.measured.moment,
        measured_mass=checked.measured.mass,
        source=dict(tables),
    )


def _part(read: _Part, densities: Mapping[str, Quantity]) -> Part:
    sizes = {key: value for key in _SIZES if (value := getattr(read, key)) is not None}
    density = read.density
    if density is None and read.material is not None:
        density = densities.get(plain_name(read.material))
    return Part(
        name=read.name,
        kind=read.kind,
        dimensions=sizes,
        at=read.at,
        turns=tuple(read.turn),
        mass=read.mass,
        density=density,
        material=read.material,
        hole=read.hole,
        of=read.of,
    )


def _check_sizes(part: _Part) -> None:
    if part.kind == "body":
        moments = sorted(getattr(part, key).value for key in BODY_KEYS)
        if moments[0] + moments[1] < moments[2]:
            raise ValueError("one moment is larger than the other two together; no body has that")
        if part.mass is None:
            raise ValueError("mass is missing (a body needs its mass)")
        return
    for small, large in SHAPES[part.kind].smaller:
        if not getattr(part, small).value < getattr(part, large).value:
            raise ValueError(
                f"{small} = {getattr(part, small).text!r} is not below {large} = {getattr(part, large).text!r}"
            )


def _problem(item: Mapping[str, Any], tables: Mapping[str, Any]) -> str:
    """One validation error in the user's words: the key, what it got, what it takes."""
    key = _key(item["loc"], tables)
    match item["type"]:
        case "missing":
            return f"{key} is missing"
        case "extra_forbidden":
            known = [*_Part.model_fields, *_PartsFile.model_fields, *_Axis.model_fields]
            near = difflib.get_close_matches(str(item["loc"][-1]), known, n=1)
            return f"{key} is not a key here" + (f" (did you mean {near[0]}?)" if near else "")
        case "value_error":
            return f"{key}: {str(item['ctx']['error']).rstrip('.')}"
        case _:
            got = repr(item.get("input"))
            return f"{key} got {got if len(got) < 60 else got[:57] + '…'}: {item['msg'].lower()}"


def _key(place: Sequence[Any], tables: Mapping[str, Any]) -> str:
    """`part "shaft".at[0]` for ("part", 1, "at", 0)."""
    said = ""
    for depth, step in enumerate(place):
        if isinstance(step, int) and depth == 1 and place[0] == "part":
            given = tables["part"][step]
            name = given.get("name") if isinstance(given, dict) else None
            said += f" {name!r}" if isinstance(name, str) else f" {step + 1}"
        elif isinstance(step, int):
            said += f"[{step}]"
        else:
            said += f".{step}" if said else str(step)
    return said or "the file"

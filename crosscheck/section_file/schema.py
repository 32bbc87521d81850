"""The section file's keys, their forms and what they mean, as one schema; its JSON Schema comes from here.

Only forms are checked here: that a key is known, that a list is a list, a number a number or
arithmetic in quotes. What needs numbers or other keys is checked after arithmetic is resolved.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Annotated, Any

from pydantic import BaseModel, ConfigDict, Discriminator, Field, PlainValidator, Tag, WithJsonSchema
from pydantic_core import PydanticCustomError

from crosscheck.section_file.arithmetic import ALLOWED

# Tags of unions turn up in error locations; a key of a file cannot look like one of these.
_ONE, _LIST, _TABLE, _TEXT = "\x1fone", "\x1flist", "\x1ftable", "\x1ftext"
# TOML has no null: a key that may be left out is absent, never None, whatever its type.
_ABSENT: Any = None
UNION_TAGS = (_ONE, _LIST, _TABLE, _TEXT)
# Required where the file gives no outline.
WALLED = ("points", "walls")


def _refuse(allowed: str) -> PydanticCustomError:
    return PydanticCustomError("refused", "must be {allowed}", {"allowed": allowed})


def _number(value: Any) -> Any:
    if isinstance(value, bool) or not isinstance(value, (int, float, str)):
        raise _refuse(ALLOWED)
    if isinstance(value, float) and not math.isfinite(value):
        raise _refuse("a finite number")
    return value


def _printable(limit: int) -> Callable[[Any], Any]:
    def check(value: Any) -> Any:
        if not isinstance(value, str):
            raise _refuse("text in quotes")
        if not value.isprintable() or len(value) > limit or not value.strip() or value != value.strip():
            raise _refuse(f"1 to {limit} printable characters on one line, no space at either end")
        return value

    return check


def _choice(*allowed: Any) -> Callable[[Any], Any]:
    text = " or ".join(f'"{each}"' if isinstance(each, str) else str(each) for each in allowed)

    def check(value: Any) -> Any:
        if isinstance(value, bool) or type(value) is not type(allowed[0]) or value not in allowed:
            raise _refuse(text)
        return value

    return check


def _flag(value: Any) -> Any:
    if not isinstance(value, bool):
        raise _refuse("true or false")
    return value


def _count(value: Any) -> Any:
    if isinstance(value, bool) or not isinstance(value, int) or not 1 <= value <= 1000:
        raise _refuse("a whole number from 1 to 1000")
    return value


def _form(value: Any) -> str:
    if isinstance(value, list):
        return _LIST
    return _TABLE if isinstance(value, dict) else _ONE


def _list_or_text(value: Any) -> str:
    return _LIST if isinstance(value, list) else _TEXT


def _choice_schema(*allowed: Any) -> WithJsonSchema:
    return WithJsonSchema({"enum": list(allowed)})


Number = Annotated[Any, PlainValidator(_number), WithJsonSchema({"type": ["number", "string"]})]
Name = Annotated[
    Any, PlainValidator(_printable(60)), WithJsonSchema({"type": "string", "minLength": 1, "maxLength": 60})
]
Text = Annotated[
    Any, PlainValidator(_printable(200)), WithJsonSchema({"type": "string", "minLength": 1, "maxLength": 200})
]
Flag = Annotated[Any, PlainValidator(_flag), WithJsonSchema({"type": "boolean"})]
Count = Annotated[
    Any, PlainValidator(_count), WithJsonSchema({"type": "integer", "minimum": 1, "maximum": 1000})
]
Sides = Annotated[
    Any, PlainValidator(_choice("both", "theory", "fe")), _choice_schema("both", "theory", "fe")
]
Level = Annotated[
    Any,
    PlainValidator(_choice("midline", "corrected", "lumped")),
    _choice_schema("midline", "corrected", "lumped"),
]
AxisDirection = Annotated[
    Any, PlainValidator(_choice("+x", "-x", "+y", "-y")), _choice_schema("+x", "-x", "+y", "-y")
]
Pair = Annotated[list[Number], Field(min_length=2, max_length=2)]
PlaceOrName = Annotated[
    Annotated[Pair, Tag(_LIST)] | Annotated[Name, Tag(_TEXT)], Discriminator(_list_or_text)
]
NameOrList = Annotated[
    Annotated[Name, Tag(_TEXT)] | Annotated[list[Name], Field(min_length=1), Tag(_LIST)],
    Discriminator(_list_or_text),
]
NumberOrList = Annotated[
    Annotated[Number, Tag(_ONE)] | Annotated[list[Number], Field(min_length=1), Tag(_LIST)],
    Discriminator(lambda value: _LIST if isinstance(value, list) else _ONE),
]


class _Table(BaseModel):
    model_config = ConfigDict(extra="forbid")


class TaperTable(_Table):
    """Thickness that varies linearly by length over the whole path [L]."""

    from_: Number = Field(alias="from", description="thickness at the start of the path [L]")
    to: Number = Field(description="thickness at the end of the path [L]")


Thickness = Annotated[
    Annotated[Number, Tag(_ONE)]
    | Annotated[list[Number], Field(min_length=1), Tag(_LIST)]
    | Annotated[TaperTable, Tag(_TABLE)],
    Discriminator(_form),
]


class ShareTable(_Table):
    """Share that carries direct stress, side by side [-]."""

    theory: Number = Field(description="as theory sees the wall, 0 to 1 [-]")
    fe: Number = Field(description="as FE sees the wall, 0 to 1 [-]")


Share = Annotated[
    Annotated[Number, Tag(_ONE)] | Annotated[ShareTable, Tag(_TABLE)],
    Discriminator(lambda value: _TABLE if isinstance(value, dict) else _ONE),
]


class MaterialTable(_Table):
    """A linear-elastic material."""

    E: Number = Field(description="modulus of elasticity [F/L^2]")
    nu: Number = Field(default=_ABSENT, description="Poisson's ratio [-]; may be left out when G is given")
    G: Number = Field(default=_ABSENT, description="shear modulus [F/L^2]; E/(2(1+nu)) unless given")


class ArcTable(_Table):
    """A circular arc between the two points of a path."""

    through: Pair = Field(description="a third place on the arc [L]")


class WallTable(_Table):
    """One or more walls along a path."""

    name: Name = Field(
        default=_ABSENT, description="name of the wall, or of all walls of the path with a number"
    )
    path: list[Name] = Field(
        min_length=2, description="points joined by walls; ends on its first to close a cell"
    )
    thickness: Thickness = Field(description="one value, one per wall of the path, or a linear taper [L]")
    arc: ArcTable = Field(default=_ABSENT, description="bends a path of two points to a circular arc")
    line: Annotated[
        Any,
        PlainValidator(_choice("midline", "left face", "right face")),
        _choice_schema("midline", "left face", "right face"),
    ] = Field(default="midline", description="what the path runs along, seen in its direction")
    smooth: Flag = Field(default=False, description="tangent arcs through the points, no joints between")
    direct_share: Share = Field(
        default=1.0,
        description="share that carries direct stress, 0 to 1: one value, or one for each side [-]",
    )
    seen_by: Sides = Field(default="both", description="which side sees the wall")
    material: Name = Field(default=_ABSENT, description="a material of [materials]")


class ProfileTable(_Table):
    """A profile to be placed on walls, drawn standing on the left of a wall along its x axis."""

    points: dict[Name, Pair] = Field(
        description="places [L]; the first is the foot, those with y = 0 are feet"
    )
    walls: list[WallTable] = Field(min_length=1, description="as [[walls]]")


class PlacedTable(_Table):
    """A profile placed along walls, which it splits."""

    profile: Name = Field(description="a profile of [profiles]")
    wall: NameOrList = Field(description="the wall that carries it, or several, one after another")
    at: NumberOrList = Field(default=_ABSENT, description="fractions of the wall's length [-]")
    count: Count = Field(default=_ABSENT, description="so many, evenly spaced between the ends of the wall")
    angle: Number = Field(
        default=90, description="from the wall's direction to the profile's y axis, degrees"
    )
    side: Annotated[Any, PlainValidator(_choice("left", "right")), _choice_schema("left", "right")] = Field(
        default="left", description="side of the wall in its direction; right is the mirror image"
    )
    seen_by: Sides = Field(default="both", description="which side sees the profile's walls")
    boom: Number = Field(
        default=_ABSENT,
        description="area of a boom at the foot that theory sees instead, FE alone sees the walls [L^2]",
    )


class BoomTable(_Table):
    """Concentrated areas at a point or along a wall."""

    at: Annotated[
        Annotated[Number, Tag(_ONE)]
        | Annotated[list[Number], Field(min_length=1), Tag(_LIST)]
        | Annotated[Name, Tag(_TEXT)],
        Discriminator(lambda value: _TEXT if isinstance(value, str) else _form(value)),
    ] = Field(default=_ABSENT, description="a point, or fractions of the wall's length [-]")
    wall: Name = Field(default=_ABSENT, description="the wall that carries them")
    count: Count = Field(default=_ABSENT, description="so many, evenly spaced between the ends of the wall")
    area: Number = Field(description="area of each [L^2]")
    material: Name = Field(default=_ABSENT, description="a material of [materials]")
    seen_by: Sides = Field(default="both", description="which side sees them")


class CornerTable(_Table):
    """Rounding of a corner."""

    inner_radius: Number = Field(description="radius of the re-entrant side [L]")
    outer_radius: Number = Field(
        default=_ABSENT, description="radius of the outer side [L]; inner plus thickness"
    )


class LoadTable(_Table):
    """One load case."""

    name: Name = Field(description="name of the load case")
    shear: Pair = Field(default=_ABSENT, description="Vx, Vy [F]")
    through: PlaceOrName = Field(
        default=_ABSENT, description='line of action: coordinates [L], a point, or "midline shear centre"'
    )
    torque: Number = Field(default=_ABSENT, description="couple added to what the shear makes [F L]")
    axial: Number = Field(default=_ABSENT, description="axial force at the centroid, tension positive [F]")
    moment: Pair = Field(default=_ABSENT, description="Mx puts +y in tension, My puts +x in tension [F L]")
    bimoment: Number = Field(default=_ABSENT, description="bimoment [F L^2]")
    kind: Annotated[
        Any, PlainValidator(_choice("limit", "ultimate")), _choice_schema("limit", "ultimate")
    ] = Field(default=_ABSENT, description="a label that is echoed; nothing is multiplied")


class LoadReferenceTable(_Table):
    """What loads that do not say through are given about."""

    at: PlaceOrName = Field(
        description='where their shear acts: coordinates [L], a point, or "midline shear centre"'
    )
    x_axis: AxisDirection = Field(default="+x", description="what their x is in the file's axes")
    y_axis: AxisDirection = Field(default="+y", description="what their y is in the file's axes")
    axial_at: Annotated[Any, PlainValidator(_choice("centroid")), _choice_schema("centroid")] = Field(
        default=_ABSENT, description="says that their axial force acts at the centroid"
    )


class CutTable(_Table):
    """Where the hand method cuts a cell."""

    wall: Name = Field(description="the wall that is cut")
    at: Number = Field(description="fraction of its length, 0 to 1 [-]")


class ProbeTable(_Table):
    """A named place at which both sides report."""

    label: Name = Field(description="name of the place")
    wall: Name = Field(description="the wall it lies on")
    at: Number = Field(description="fraction of its length, 0 to 1 [-]")
    pitch: Number = Field(
        default=_ABSENT, description="distance of its fasteners: fastener load is flow times pitch [L]"
    )


class StatedTable(_Table):
    """A number to be judged."""

    quantity: Name = Field(description="name of the quantity")
    value: Number = Field(description="the number as stated")
    source: Text = Field(default=_ABSENT, description="where it is stated")
    tolerance: Number = Field(default=_ABSENT, description="difference up to which it stands [-]")
    measured_from: PlaceOrName = Field(
        default=_ABSENT, description="datum of a position: coordinates, point or wall"
    )
    load: Name = Field(default=_ABSENT, description="the load or unit load that it belongs to")
    level: Level = Field(default=_ABSENT, description="level of theory that it is held to; the nearest")


class MirrorTable(_Table):
    """Everything in the file doubled about an axis."""

    about: Annotated[
        Annotated[Any, PlainValidator(_choice("x", "y", "xy")), _choice_schema("x", "y", "xy"), Tag(_TEXT)]
        | Annotated[
            list[Annotated[Any, PlainValidator(_choice("x", "y")), _choice_schema("x", "y")]],
            Field(min_length=1, max_length=2),
            Tag(_LIST),
        ],
        Discriminator(_list_or_text),
    ] = Field(description="the axis, or both: points on it are shared")


class TablesTable(_Table):
    """CSV files in the folder of the section file, hashed into the result."""

    loads: Text = Field(default=_ABSENT, description="more load cases, one a row")
    points: Text = Field(default=_ABSENT, description="more points, one a row")


Outline = Annotated[
    dict[str, Any],
    WithJsonSchema(
        {
            "type": "object",
            "properties": {
                "boundary": {"type": ["array", "object"]},
                "openings": {"type": "array"},
                "file": {"type": "string"},
                "drawing_unit": {"type": "string"},
                "layers": {"type": ["array", "string"]},
                "gap": {"type": ["number", "string"]},
                "chord_error": {"type": ["number", "string"]},
            },
            "oneOf": [{"required": ["boundary"]}, {"required": ["file"]}],
            "additionalProperties": False,
        }
    ),
]


class SectionDocument(_Table):
    """A whole section file, given by walls, by an outline, or by both."""

    model_config = ConfigDict(
        extra="forbid",
        json_schema_extra={"anyOf": [{"required": list(WALLED)}, {"required": ["outline"]}]},
    )

    schema_number: Annotated[Any, PlainValidator(_choice(1)), _choice_schema(1)] = Field(
        default=1, alias="schema"
    )
    title: Text = Field(default=_ABSENT, description="one line; the file's name when left out")
    units: Text = Field(description="unit of length and of force")
    judged: Level = Field(default="midline", description="level of theory that verdicts judge")
    base_material: Name = Field(default=_ABSENT, description="required with more than one material")
    parameters: dict[str, Number] = Field(
        default_factory=dict, description="numbers or arithmetic on earlier ones"
    )
    materials: dict[Name, MaterialTable] = Field(default_factory=dict)
    points: dict[Name, Pair] = Field(default_factory=dict, description="places [L]")
    walls: list[WallTable] = Field(default_factory=list, min_length=1)
    profiles: dict[Name, ProfileTable] = Field(
        default_factory=dict, description="profiles that [[placed]] puts on walls"
    )
    placed: list[PlacedTable] = Field(default_factory=list)
    booms: list[BoomTable] = Field(default_factory=list)
    corners: dict[Name, CornerTable] = Field(default_factory=dict)
    loads: list[LoadTable] = Field(default_factory=list)
    load_reference: LoadReferenceTable = Field(default=_ABSENT)
    cuts: list[CutTable] = Field(default_factory=list)
    probes: list[ProbeTable] = Field(default_factory=list)
    stated: list[StatedTable] = Field(default_factory=list)
    criteria: dict[str, Number] = Field(default_factory=dict, description="largest accepted difference [-]")
    mirror: MirrorTable = Field(default=_ABSENT)
    tables: TablesTable = Field(default=_ABSENT, description="CSV files beside this one")
    tolerances: dict[str, Number] = Field(default_factory=dict, description="for the uncertainty budget")
    allowables: dict[str, Any] = Field(default_factory=dict, description="for margins")
    document: dict[str, Any] = Field(default_factory=dict, description="front matter of the dossier")
    outline: Outline = Field(
        default=_ABSENT, description="the solid that FE meshes: boundary and openings, or a drawing"
    )

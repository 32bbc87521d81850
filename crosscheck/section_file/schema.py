"""The section file's tables, their keys and what they mean, as one schema; its JSON Schema comes from here.

Only forms are checked here: that a key is known, that a list is a list, a number a number or
arithmetic in quotes. What needs numbers or other keys is checked after arithmetic is resolved.
"""

from __future__ import annotations

from typing import Annotated, Any

from pydantic import BaseModel, ConfigDict, Discriminator, Field, PlainValidator, Tag, WithJsonSchema

from crosscheck.section_file.schema_values import (
    ABSENT,
    LIST,
    ONE,
    TABLE,
    TEXT,
    AxisDirection,
    Count,
    Flag,
    Level,
    LongText,
    Name,
    NameOrList,
    Number,
    NumberOrList,
    Pair,
    PlaceOrName,
    Sides,
    Text,
    choice,
    choice_schema,
    form,
    list_or_text,
)

# Required where the file gives no outline.
WALLED = ("points", "walls")


class _Table(BaseModel):
    model_config = ConfigDict(extra="forbid")


class TaperTable(_Table):
    """Thickness that varies linearly by length over the whole path [L]."""

    from_: Number = Field(alias="from", description="thickness at the start of the path [L]")
    to: Number = Field(description="thickness at the end of the path [L]")


Thickness = Annotated[
    Annotated[Number, Tag(ONE)]
    | Annotated[list[Number], Field(min_length=1), Tag(LIST)]
    | Annotated[TaperTable, Tag(TABLE)],
    Discriminator(form),
]


class ShareTable(_Table):
    """Share that carries direct stress, side by side [-]."""

    theory: Number = Field(description="as theory sees the wall, 0 to 1 [-]")
    fe: Number = Field(description="as FE sees the wall, 0 to 1 [-]")


Share = Annotated[
    Annotated[Number, Tag(ONE)] | Annotated[ShareTable, Tag(TABLE)],
    Discriminator(lambda value: TABLE if isinstance(value, dict) else ONE),
]


class MaterialTable(_Table):
    """A linear-elastic material."""

    E: Number = Field(description="modulus of elasticity [F/L^2]")
    nu: Number = Field(default=ABSENT, description="Poisson's ratio [-]; may be left out when G is given")
    G: Number = Field(default=ABSENT, description="shear modulus [F/L^2]; E/(2(1+nu)) unless given")


class ArcTable(_Table):
    """A circular arc between the two points of a path."""

    through: Pair = Field(description="a third place on the arc [L]")


class WallTable(_Table):
    """One or more walls along a path."""

    name: Name = Field(
        default=ABSENT, description="name of the wall, or of all walls of the path with a number"
    )
    path: list[Name] = Field(
        min_length=2, description="points joined by walls; ends on its first to close a cell"
    )
    thickness: Thickness = Field(description="one value, one per wall of the path, or a linear taper [L]")
    arc: ArcTable = Field(default=ABSENT, description="bends a path of two points to a circular arc")
    line: Annotated[
        Any,
        PlainValidator(choice("midline", "left face", "right face")),
        choice_schema("midline", "left face", "right face"),
    ] = Field(default="midline", description="what the path runs along, seen in its direction")
    smooth: Flag = Field(default=False, description="tangent arcs through the points, no joints between")
    direct_share: Share = Field(
        default=1.0,
        description="share that carries direct stress, 0 to 1: one value, or one for each side [-]",
    )
    seen_by: Sides = Field(default="both", description="which side sees the wall")
    material: Name = Field(default=ABSENT, description="a material of [materials]")


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
    at: NumberOrList = Field(default=ABSENT, description="fractions of the wall's length [-]")
    count: Count = Field(default=ABSENT, description="so many, evenly spaced between the ends of the wall")
    angle: Number = Field(
        default=90, description="from the wall's direction to the profile's y axis, degrees"
    )
    side: Annotated[Any, PlainValidator(choice("left", "right")), choice_schema("left", "right")] = Field(
        default="left", description="side of the wall in its direction; right is the mirror image"
    )
    seen_by: Sides = Field(default="both", description="which side sees the profile's walls")
    boom: Number = Field(
        default=ABSENT,
        description="area of a boom at the foot that theory sees instead, FE alone sees the walls [L^2]",
    )


class BoomTable(_Table):
    """Concentrated areas at a point or along a wall."""

    at: Annotated[
        Annotated[Number, Tag(ONE)]
        | Annotated[list[Number], Field(min_length=1), Tag(LIST)]
        | Annotated[Name, Tag(TEXT)],
        Discriminator(lambda value: TEXT if isinstance(value, str) else form(value)),
    ] = Field(default=ABSENT, description="a point, or fractions of the wall's length [-]")
    wall: Name = Field(default=ABSENT, description="the wall that carries them")
    count: Count = Field(default=ABSENT, description="so many, evenly spaced between the ends of the wall")
    area: Number = Field(description="area of each [L^2]")
    material: Name = Field(default=ABSENT, description="a material of [materials]")
    seen_by: Sides = Field(default="both", description="which side sees them")


class CornerTable(_Table):
    """Rounding of a corner."""

    inner_radius: Number = Field(description="radius of the re-entrant side [L]")
    outer_radius: Number = Field(
        default=ABSENT, description="radius of the outer side [L]; inner plus thickness"
    )


class LoadTable(_Table):
    """One load case."""

    name: Name = Field(description="name of the load case")
    shear: Pair = Field(default=ABSENT, description="Vx, Vy [F]")
    through: PlaceOrName = Field(
        default=ABSENT, description='line of action: coordinates [L], a point, or "midline shear centre"'
    )
    torque: Number = Field(default=ABSENT, description="couple added to what the shear makes [F L]")
    axial: Number = Field(default=ABSENT, description="axial force at the centroid, tension positive [F]")
    moment: Pair = Field(default=ABSENT, description="Mx puts +y in tension, My puts +x in tension [F L]")
    bimoment: Number = Field(default=ABSENT, description="bimoment [F L^2]")
    kind: Annotated[Any, PlainValidator(choice("limit", "ultimate")), choice_schema("limit", "ultimate")] = (
        Field(default=ABSENT, description="a label that is echoed; nothing is multiplied")
    )


class LoadReferenceTable(_Table):
    """What loads that do not say through are given about."""

    at: PlaceOrName = Field(
        description='where their shear acts: coordinates [L], a point, or "midline shear centre"'
    )
    x_axis: AxisDirection = Field(default="+x", description="what their x is in the file's axes")
    y_axis: AxisDirection = Field(default="+y", description="what their y is in the file's axes")
    axial_at: Annotated[Any, PlainValidator(choice("centroid")), choice_schema("centroid")] = Field(
        default=ABSENT, description="says that their axial force acts at the centroid"
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
        default=ABSENT, description="distance of its fasteners: fastener load is flow times pitch [L]"
    )


class StatedTable(_Table):
    """A number to be judged."""

    quantity: Name = Field(description="name of the quantity")
    value: Number = Field(description="the number as stated")
    source: Text = Field(default=ABSENT, description="where it is stated")
    tolerance: Number = Field(default=ABSENT, description="difference up to which it stands [-]")
    measured_from: PlaceOrName = Field(
        default=ABSENT, description="datum of a position: coordinates, point or wall"
    )
    load: Name = Field(default=ABSENT, description="the load or unit load that it belongs to")
    probe: Name = Field(default=ABSENT, description="label of the probe that a flow_at_probes belongs to")
    level: Level = Field(default=ABSENT, description="level of theory that it is held to; the nearest")


class AllowableTable(_Table):
    """Strengths of one wall."""

    shear_stress: Number = Field(default=ABSENT, description="largest shear stress [F/L^2]")
    shear_flow: Number = Field(default=ABSENT, description="largest shear flow [F/L]")
    direct_stress: Number = Field(default=ABSENT, description="largest direct stress, either sign [F/L^2]")
    von_mises_stress: Number = Field(default=ABSENT, description="largest von Mises stress [F/L^2]")
    source: Text = Field(default=ABSENT, description="where it is stated")


class AllowablesTable(AllowableTable):
    """Strengths of every wall, and of single walls."""

    walls: dict[Name, AllowableTable] = Field(
        default_factory=dict, description="by the name of a wall, or of a path for all its walls"
    )


class TolerancesTable(_Table):
    """How far the part may be from the numbers of the file."""

    thickness: Number = Field(default=ABSENT, description="plus or minus, relative [-]")
    dimension: Number = Field(default=ABSENT, description="plus or minus, of every place [L]")
    material: Number = Field(default=ABSENT, description="plus or minus, relative, of E and G [-]")


class ChangeTable(_Table):
    """One issue of the document and what it changed."""

    issue: Text = Field(description="its issue")
    date: Text = Field(description="its date")
    text: LongText = Field(description="what was changed")


class DocumentTable(_Table):
    """Front matter of the dossier, texts as they are to be printed."""

    number: Text = Field(default=ABSENT, description="number of the document")
    issue: Text = Field(default=ABSENT, description="its issue")
    date: Text = Field(default=ABSENT, description="its date")
    part: Text = Field(default=ABSENT, description="the part")
    drawing: Text = Field(default=ABSENT, description="drawing of the part, with its issue")
    requirement: LongText = Field(default=ABSENT, description="requirement that the part has to meet")
    prepared: Text = Field(default=ABSENT, description="who prepared it")
    checked: Text = Field(default=ABSENT, description="who checked it")
    approved: Text = Field(default=ABSENT, description="who approved it")
    authorised: Text = Field(default=ABSENT, description="who authorised it")
    intended_use: LongText = Field(default=ABSENT, description="what the numbers are to be used for")
    changes: list[ChangeTable] = Field(default_factory=list, description="issues, the first one first")


class MirrorTable(_Table):
    """Everything in the file doubled about an axis."""

    about: Annotated[
        Annotated[Any, PlainValidator(choice("x", "y", "xy")), choice_schema("x", "y", "xy"), Tag(TEXT)]
        | Annotated[
            list[Annotated[Any, PlainValidator(choice("x", "y")), choice_schema("x", "y")]],
            Field(min_length=1, max_length=2),
            Tag(LIST),
        ],
        Discriminator(list_or_text),
    ] = Field(description="the axis, or both: points on it are shared")


class TablesTable(_Table):
    """CSV files in the folder of the section file, hashed into the result."""

    points: Text = Field(default=ABSENT, description="more points, one a row")
    walls: Text = Field(default=ABSENT, description="more walls between two points, one a row")
    booms: Text = Field(default=ABSENT, description="more booms, one a row")
    loads: Text = Field(default=ABSENT, description="more load cases, one a row")


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
        json_schema_extra={
            "anyOf": [{"required": list(WALLED)}, {"required": ["outline"]}, {"required": ["tables"]}]
        },
    )

    schema_number: Annotated[Any, PlainValidator(choice(1)), choice_schema(1)] = Field(
        default=1, alias="schema", description="number of the file format"
    )
    title: Text = Field(default=ABSENT, description="one line; the file's name when left out")
    units: Text = Field(description="unit of length and of force")
    judged: Level = Field(default="midline", description="level of theory that verdicts judge")
    base_material: Name = Field(default=ABSENT, description="required with more than one material")
    parameters: dict[str, Number] = Field(
        default_factory=dict, description="numbers or arithmetic on earlier ones"
    )
    materials: dict[Name, MaterialTable] = Field(
        default_factory=dict, description="materials by name; without any, results are per unit modulus"
    )
    points: dict[Name, Pair] = Field(default_factory=dict, description="places [L]")
    walls: list[WallTable] = Field(default_factory=list, min_length=1, description="walls along paths")
    profiles: dict[Name, ProfileTable] = Field(
        default_factory=dict, description="profiles that [[placed]] puts on walls"
    )
    placed: list[PlacedTable] = Field(default_factory=list, description="profiles placed along walls")
    booms: list[BoomTable] = Field(default_factory=list, description="areas that carry direct stress only")
    corners: dict[Name, CornerTable] = Field(
        default_factory=dict, description="rounding by point, or of every_bend where exactly two walls meet"
    )
    loads: list[LoadTable] = Field(default_factory=list, description="load cases")
    load_reference: LoadReferenceTable = Field(
        default=ABSENT, description="what loads without through are given about"
    )
    cuts: list[CutTable] = Field(default_factory=list, description="where the hand method cuts cells")
    probes: list[ProbeTable] = Field(default_factory=list, description="named places where both sides report")
    stated: list[StatedTable] = Field(default_factory=list, description="numbers to be judged")
    criteria: dict[str, Number] = Field(default_factory=dict, description="largest accepted difference [-]")
    mirror: MirrorTable = Field(default=ABSENT, description="everything doubled about an axis")
    tables: TablesTable = Field(default=ABSENT, description="CSV files beside this one")
    tolerances: TolerancesTable = Field(default=ABSENT, description="for the uncertainty budget")
    allowables: AllowablesTable = Field(default=ABSENT, description="for margins")
    document: DocumentTable = Field(default=ABSENT, description="front matter of the dossier")
    outline: Outline = Field(
        default=ABSENT, description="the solid that FE meshes: boundary and openings, or a drawing"
    )

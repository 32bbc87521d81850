"""Reference cases: a section, what is asked of it, and the values from outside that must be met."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from crosscheck.section_file.model import SectionFile

# How a value was obtained, best first. Only the first two make a row count as evidence from outside.
OBTAINED = ("read", "exact", "procedure", "recomputed", "common practice", "from memory")
OBTAINED_WORDS = {
    "read": "seen in the source, or in an excerpt of it",
    "exact": "a closed formula or convergent series, evaluated",
    "procedure": "made by the named procedure, written again apart from both sides",
    "recomputed": "found by another program for this purpose, on two meshes",
    "common practice": "a fact of the trade",
    "from memory": "recalled; edition, page or digits may be slightly off",
}
SIDES = ("theory", "fe", "both")
KINDS = ("value", "relative difference", "absolute difference")

# What a row may ask for besides the parameters of its section file.
SECTION_NAMES = (
    "area", "plain_area", "centroid_x", "centroid_y", "second_moment_xx", "second_moment_yy",
    "product_moment_xy", "principal_angle", "principal_moment_u", "principal_moment_v", "shear_centre_x",
    "shear_centre_y", "torsion_constant", "warping_constant", "shear_area_x", "shear_area_y",
)  # fmt: skip
THEORY_NAMES = (
    "torsion_constant_cells", "torsion_constant_open", "cell_area", "warping_function",
    "wagner_x", "wagner_y", "wagner_omega", "polar_radius_squared", "section_modulus_x_top",
    "section_modulus_x_bottom", "section_modulus_y_left", "section_modulus_y_right",
)  # fmt: skip
FE_NAMES = (
    "mean_coefficient_x", "mean_coefficient_y", "energy_coefficient_x", "energy_coefficient_y",
    "stress", "stress_x", "stress_y", "fillet_stress",
)  # fmt: skip
# At a place `at` of a `wall`, for a `load`.
WALL_NAMES = ("flow", "shear_stress", "direct_stress")
LOAD_NAMES = ("rate_of_twist", "peak_flow")
NAMES = (*SECTION_NAMES, *THEORY_NAMES, *FE_NAMES, *WALL_NAMES, *LOAD_NAMES)


@dataclass(frozen=True)
class Source:
    """A work that values come from: author and title, edition or year."""

    key: str
    work: str
    edition: str

    @property
    def text(self) -> str:
        """Work and edition as cited."""
        return f"{self.work}, {self.edition}" if self.edition else self.work


@dataclass(frozen=True)
class Tolerance:
    """Largest difference accepted: "relative" [-], "absolute" or "printed" [the value's unit], and why."""

    kind: str
    size: float
    why: str

    def of(self, value: float) -> float:
        """As an absolute difference."""
        return self.size * abs(value) if self.kind == "relative" else self.size

    @property
    def text(self) -> str:
        """In words."""
        if self.kind == "printed":
            return "half a unit of the last digit printed"
        size = f"{self.size:.3g}".replace("e-0", "e-")
        return f"{size} of the value" if self.kind == "relative" else size


@dataclass(frozen=True)
class ReferenceRow:
    """One value that a section must show.

    name: unique in the suite. quantity: a name of NAMES, or arithmetic on such names and on the parameters of
    the section file, so that it is in the unit printed.
    side: "theory", "fe" or "both"; level: of theory.
    kind: "value"; or the difference theory minus FE, over FE's value where "relative".
    value: as a number; printed: as it stands in the source.
    load: of the section file, or "unit Vx", "unit Vy", "unit T". wall, at, face: a place on a wall.
    point: a place in the solid [L]. nu: FE with the material's Poisson's ratio instead of 0.
    known_problem: why the reference itself is wrong (a misprint, another definition): it must then disagree.
    """

    name: str
    quantity: str
    value: float
    printed: str
    tolerance: Tolerance
    source: Source
    place: str
    obtained: str
    side: str = "both"
    level: str = "midline"
    kind: str = "value"
    unit: str = ""
    load: str | None = None
    wall: str | None = None
    at: float = 0.5
    face: str | None = None
    point: tuple[float, float] | None = None
    nu: bool = False
    note: str = ""
    known_problem: str = ""

    @property
    def sides(self) -> tuple[str, ...]:
        """Sides that are judged one by one; both at once for a difference."""
        if self.kind != "value":
            return ("both",)
        return ("theory", "fe") if self.side == "both" else (self.side,)


@dataclass(frozen=True)
class ReferenceCase:
    """A section and its rows; file: the row file it stands in; quick: part of the quick run."""

    name: str
    file: str
    section: SectionFile
    rows: tuple[ReferenceRow, ...]
    overrides: Mapping[str, str] = field(default_factory=dict)
    accuracy: float = 1e-5
    smooth: bool = False
    quick: bool = False

    @property
    def needs_fe(self) -> bool:
        """Whether any row asks the finite-element side."""
        return any(row.side != "theory" for row in self.rows)

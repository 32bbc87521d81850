"""A channel as both sides might report it: theory is real, FE is a stand-in that differs by known amounts."""

from __future__ import annotations

from dataclasses import dataclass, field
from types import SimpleNamespace

import numpy as np

import beam_theory
from crosscheck.comparison.levels import Levels, solve_levels
from crosscheck.section_file.model import LoadSpec, Material, ProbeSpec, SectionFile, WallSpec

# What the stand-in multiplies theory's value with; everything else is left as theory has it.
FE_OVER_THEORY = {"torsion_constant": 1.02, "warping_constant": 0.94, "shear_area_y": 1.001}
FE_SHIFT = {"shear_centre_x": 0.2}
FLOW_FACTORS = (1.0, 1.03, 1.0)


@dataclass(frozen=True)
class StandInFe:
    """An FE solution that follows from theory's by the factors above."""

    theory: beam_theory.Solution
    section: SectionFile
    half_width: float = 1e-4
    flow_error: float = 1e-6
    strip: tuple[float, float] | None = (0.1, 0.9)
    met: bool = True
    accuracy_note: str = "reached"
    poisson: None = None
    checks: tuple[SimpleNamespace, ...] = (
        SimpleNamespace(name="resultants", value=1e-12, allowed=1e-8, passed=True),
    )
    mesh: SimpleNamespace = field(
        default_factory=lambda: SimpleNamespace(order=4, unknowns=2479, elements=600, strips=3, joints=4)
    )

    @property
    def quantities(self):
        found = {}
        for name, quantity in self.theory.quantities.items():
            if quantity.value is None:
                found[name] = SimpleNamespace(
                    value=None, low=None, high=None, basis="estimate", reason="no FE value", with_nu=None
                )
                continue
            value = quantity.value * FE_OVER_THEORY.get(name, 1.0) + FE_SHIFT.get(name, 0.0)
            half = self.half_width * abs(value) if name in FE_OVER_THEORY else 0.0
            basis = "bound" if half else "exact"
            found[name] = SimpleNamespace(
                value=value, low=value - half, high=value + half, basis=basis, reason=None, with_nu=None,
                half_width=half,
            )  # fmt: skip
        return found

    @property
    def strips(self):
        return {wall.name: self.strip for wall in self.section.walls}

    @property
    def outline(self):
        places = np.array(list(self.section.points.values()))
        low, high = places.min(axis=0), places.max(axis=0)
        # Faces: of the channel the walls reach half a thickness past the midline, but not at its free ends.
        x0, y0, x1, y1 = low[0] - 2.5, low[1] - 2.5, high[0], high[1] + 2.5
        loop = np.array([(x0, y0), (x1, y0), (x1, y1), (x0, y1)])
        bands = {
            wall.name: SimpleNamespace(straight=True, thickness=wall.thickness) for wall in self.section.walls
        }
        return SimpleNamespace(loops=(loop,), extent=float((high - low).max()), notes=(), bands=bands)

    def flow_at(self, wall, fractions):
        rows = [self.theory.unit_flow(name).at(wall, fractions) for name in ("Vx", "Vy", "T")]
        values = np.array(rows) * np.array(FLOW_FACTORS)[:, None]
        return SimpleNamespace(values=values, errors=np.full_like(values, self.flow_error))

    def face_stress(self, wall, fractions, actions):
        """Theory's stress, shear larger by the factors of the flows."""
        shear = np.zeros((2, len(fractions)))
        for unit, size, factor in zip(
            ("Vx", "Vy", "T"), (*actions.shear, actions.torque), FLOW_FACTORS, strict=True
        ):
            if size:
                load = {"Vx": {"shear": (1.0, 0.0)}, "Vy": {"shear": (0.0, 1.0)}, "T": {"torque": 1.0}}[unit]
                one = beam_theory.stress(self.theory, beam_theory.Load(unit, **load))
                shear += size * factor * one.shear(wall, fractions).T
        load = beam_theory.Load(
            "direct", axial=actions.axial, moment=actions.moment, bimoment=actions.bimoment
        )
        direct = beam_theory.stress(self.theory, load).direct(wall, fractions).T
        return SimpleNamespace(direct=direct, shear=shear, error=np.full_like(shear, self.flow_error))

    def boundary_peaks(self, actions):
        return []

    def picture_mesh(self):
        return SimpleNamespace(
            nodes=np.array([(0.0, 0.0), (50.0, 0.0), (50.0, 100.0), (0.0, 100.0)]),
            triangles=np.array([(0, 1, 2), (0, 2, 3)]),
            warping=np.array([0.0, 1.0, 2.0, 3.0]),
            pole=(0.0, 0.0),
            edges=np.array([(0, 1), (1, 2), (2, 3), (3, 0), (0, 2)]),
        )


def channel_file(**changes) -> SectionFile:
    """Plain channel 100 x 50 on the midline, t = 5, one load on the web's midline."""
    given = {
        "path": "channel.toml",
        "sha256": "0" * 64,
        "title": "Winch rail, plain channel",
        "length_unit": "mm",
        "force_unit": "N",
        "points": {"a": (50.0, 0.0), "b": (0.0, 0.0), "c": (0.0, 100.0), "d": (50.0, 100.0)},
        "walls": (
            WallSpec("bottom", "a", "b", (5.0, 5.0)),
            WallSpec("web", "b", "c", (5.0, 5.0)),
            WallSpec("top", "c", "d", (5.0, 5.0)),
        ),
        "loads": (LoadSpec("gust", (0.0, -1200.0), (0.0, 0.0), 0.0),),
        "probes": (ProbeSpec("rivet line", "web", 0.3), ProbeSpec("corner weld", "web", 0.01)),
    }
    return SectionFile(**{**given, **changes})


def channel_of_steel(**changes) -> SectionFile:
    """The same with a material, so that rates of twist have a modulus."""
    walls = tuple(
        WallSpec(wall.name, wall.start, wall.end, wall.thickness, material="steel")
        for wall in channel_file().walls
    )
    steel = Material("steel", 210000.0, 80000.0, 0.3125)
    return channel_file(materials={"steel": steel}, base_material="steel", walls=walls, **changes)


def both_sides(section: SectionFile, **fe) -> tuple[Levels, StandInFe]:
    """Theory's solutions of a section file and the stand-in made from the midline's."""
    levels = solve_levels(section)
    return levels, StandInFe(levels.solutions["midline"], section, **fe)

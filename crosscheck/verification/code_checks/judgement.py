"""The comparison itself: rows, verdicts, effects and loads redone from the numbers of both sides.

One section of two materials is written out here a second time, apart from its file, and both sides are asked
directly; what the comparison says of it has to follow from their answers.
"""

from __future__ import annotations

import math
from functools import cache

import numpy as np

import beam_theory
import fe_models
from crosscheck.case_files import case_folder
from crosscheck.comparison.comparing import compare
from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import FeValue, QuantityResult, Result
from crosscheck.comparison.verdicts import section_yardstick
from crosscheck.comparison.verdicts import verdict as verdict_of
from crosscheck.section_file.reader import read_section
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import Shape, Wall

GROUP = "comparison"
ROUND_OFF = 1e-9
FILE = "two_material_hat_battery_tray.toml"
# The file's materials: E [N/mm^2] and nu; aluminium is the base.
ALUMINIUM, STEEL = (72000.0, 0.33), (205000.0, 0.29)
# Its loads: N, Mx, My, Vx, Vy and where.
LOADS = {
    "battery in a gust": (0.0, -48000.0, 0.0, 0.0, -920.0, (0.0, 0.0)),
    "battery in a turn": (700.0, -21000.0, 9000.0, 260.0, -410.0, (0.0, 31.0)),
}
# Loads of the file of two cells: Vx, Vy, and x, y of the line of action, its parameters worked out by hand.
TAIL_LOADS = {"gust on the tail": (0.0, 3650.0, 77.5, 41.0), "rudder": (1280.0, 0.0, 0.0, 155.8)}
LONG = ("area", "second_moment_xx", "second_moment_yy", "principal_moment_u", "principal_moment_v",
        "torsion_constant", "shear_area_x", "shear_area_y")  # fmt: skip
PLACES = ("centroid_x", "centroid_y", "shear_centre_x", "shear_centre_y")


def shear_modulus(material: tuple[float, float]) -> float:
    """G = E/(2 (1 + nu))."""
    return material[0] / (2.0 * (1.0 + material[1]))


def hat() -> Shape:
    """The section of the file, by hand: coordinates, thickness and ratios of moduli."""
    points = {"a": (-53.0, 0.0), "b": (-31.0, 0.0), "c": (-22.0, 31.0)}
    points |= {"d": (22.0, 31.0), "e": (31.0, 0.0), "f": (53.0, 0.0)}
    sheet, plate = (1.8, 1.8), (1.2, 1.2)
    e, g = STEEL[0] / ALUMINIUM[0], shear_modulus(STEEL) / shear_modulus(ALUMINIUM)
    walls = (
        Wall("a", "b", sheet), Wall("b", "c", sheet), Wall("c", "d", plate, e=e, g=g),
        Wall("d", "e", sheet), Wall("e", "f", sheet),
    )  # fmt: skip
    return Shape(points, walls, {})


@cache
def both() -> tuple[Result, beam_theory.Solution, fe_models.Solution]:
    """The comparison of the file, and both sides asked directly."""
    shape = hat()
    compared = compare(read_section(case_folder() / "sections" / FILE))
    return compared, beam_theory.solve(shape.theory()), fe_models.solve(shape.solid(), 1e-5)


def _row(result: Result, name: str, load: str | None = None) -> QuantityResult:
    return next(r for r in result.quantities if r.name == name and r.load == load)


def same_section() -> Finding:
    """Every quantity of the section that the file gave against the section that is written out here."""
    result, theory, fe = both()
    worst, where = 0.0, ""
    for name in (*LONG, *PLACES, "product_moment_xy", "warping_constant"):
        row = _row(result, name)
        interval = fe.quantities[name]
        # over what a difference is measured by: 1, the size, sqrt(Ixx Iyy)
        scale = abs(interval.known) if name in LONG or name == "warping_constant" else row.normaliser or 0.0
        own = row.theory["midline"]
        assert own is not None
        assert row.fe.value is not None
        off = max(abs(own - theory.require(name)), abs(row.fe.value - interval.known)) / scale
        if not off <= worst:
            worst, where = off, name
    return Finding(worst, 1e-7, f"Largest difference {worst:.1e} ({where or 'none'}).")


def verdicts() -> Finding:
    """Differences, normalisers, verdicts, factors and effects of the section's rows by their definitions."""
    result, _, fe = both()
    extent = 106.0
    wrong: list[str] = []
    count = 0
    value = {n: q.known for n, q in fe.quantities.items() if q.value is not None}
    for row in result.quantities:
        if (
            row.load is not None
            or row.verdict is None
            or row.name not in (*LONG, *PLACES, "warping_constant")
        ):
            continue
        theory, fe_value = row.theory[row.judged], row.fe.value
        assert theory is not None
        assert fe_value is not None
        assert row.uncertainty is not None
        by = abs(fe_value)
        if row.name in PLACES:
            by = extent
        elif row.name == "warping_constant":
            by = max(value["warping_constant"], value["torsion_constant"] * extent**2)
        d = (theory - fe_value) / by
        u = (
            (row.fe.high - row.fe.low) / 2.0 / by
            if row.fe.high is not None and row.fe.low is not None
            else 0.0
        )
        limit = 0.01 if row.name in PLACES else 0.05
        verdict = "within" if abs(d) + u <= limit else "outside" if abs(d) - u > limit else "inconclusive"
        count += 1
        if abs(row.difference[row.judged] or 0.0) != 0.0 and not math.isclose(
            row.difference[row.judged] or 0.0, d, rel_tol=1e-6, abs_tol=1e-12
        ):
            wrong.append(f"difference of {row.name}")
        if not math.isclose(row.uncertainty, u, rel_tol=1e-3, abs_tol=1e-12):
            wrong.append(f"uncertainty of {row.name}")
        if row.verdict != verdict:
            wrong.append(f"verdict of {row.name}")
        if row.name in PLACES:
            if row.factor is not None or row.effect is not None:
                wrong.append(f"factor or effect of a place, {row.name}")
            continue
        if row.factor is None or not math.isclose(row.factor, fe_value / theory, rel_tol=1e-12):
            wrong.append(f"factor of {row.name}")
        if row.effect is not None:
            understated = "conservative" if theory < fe_value else "unconservative"
            use = "twist" if row.name in ("torsion_constant", "warping_constant") else "deflection"
            if row.effect.get(use) != understated:
                wrong.append(f"effect of {row.name}")
        elif abs(d) > max(u, 1e-9):
            wrong.append(f"no effect of {row.name}")
    return Finding(float(len(wrong)), 0.0, f"{count} rows redone; wrong: {', '.join(wrong) or 'none'}.")


def borders() -> Finding:
    """The three verdicts on either side of their borders, for both signs."""
    table = (
        (0.03, 0.01, "within"), (0.04, 0.01, "within"),
        (0.045, 0.01, "inconclusive"), (0.055, 0.01, "inconclusive"),
        (0.0601, 0.01, "outside"), (0.2, 0.0, "outside"), (0.0, 0.06, "inconclusive"),
    )  # fmt: skip
    wrong = [
        f"{s * d:g} +- {u:g}"
        for d, u, want in table
        for s in (1.0, -1.0)
        if verdict_of(s * d, u, 0.05) != want
    ]
    return Finding(
        float(len(wrong)), 0.0, f"{2 * len(table)} verdicts at criterion 0.05; wrong: {wrong or 'none'}."
    )


def yardsticks() -> Finding:
    """What differences are divided by, for numbers by hand: I_w over the larger of itself and J D^2."""

    def fe(**numbers: float) -> dict[str, FeValue]:
        return {n: FeValue(v, v, v, "exact") for n, v in numbers.items()}

    moments = fe(second_moment_xx=9.0, second_moment_yy=4.0, principal_moment_u=12.0, principal_moment_v=3.0)
    own = {"principal_moment_u": 12.0, "principal_moment_v": 3.0}
    table = (
        ("warping_constant", fe(warping_constant=3.0, torsion_constant=2.0), 200.0),
        ("warping_constant", fe(warping_constant=300.0, torsion_constant=2.0), 300.0),
        ("shear_centre_x", fe(shear_centre_x=0.0), 10.0),
        ("product_moment_xy", moments, 6.0),
        ("principal_angle", moments, 6.0 / 9.0),
        ("area", fe(area=-5.0), 5.0),
    )
    worst = 0.0
    for name, numbers, want in table:
        got = section_yardstick(QUANTITIES[name], own, numbers, 10.0).value
        worst = max(worst, math.inf if got is None else abs(got / want - 1.0))
    return Finding(worst, 1e-12, f"{len(table)} yardsticks; largest difference {worst:.1e}.")


def loads() -> Finding:
    """Torque about each shear centre, rate of twist, flows at probes and direct stress, from both sides."""
    result, theory, fe = both()
    names = {"crown": "c-d"}
    worst, where = 0.0, "none"

    def see(what: str, got: float, want: float, scale: float) -> None:
        nonlocal worst, where
        if not abs(got - want) <= worst * scale:
            worst, where = abs(got - want) / scale, what

    g = shear_modulus(ALUMINIUM)
    fe_centre = [fe.quantities[f"shear_centre_{i}"].known for i in "xy"]
    for name, (axial, mx, my, vx, vy, at) in LOADS.items():
        row = _row(result, "rate_of_twist", name)
        load = beam_theory.Load(name, (vx, vy), at, axial=axial, moment=(mx, my))
        torque = (at[0] - fe_centre[0]) * vy - (at[1] - fe_centre[1]) * vx
        twist = torque / (g * fe.quantities["torsion_constant"].known)
        scale = abs(twist) + 1e-3 * abs(vx + vy) * 100.0 / (g * fe.quantities["torsion_constant"].known)
        assert row.fe.value is not None
        see(f"FE's twist, {name}", row.fe.value, twist, scale)
        flow = theory.flow(load)
        own = row.theory["midline"]
        assert own is not None
        see(f"theory's twist, {name}", own, flow.twist / g, scale)
        stress = beam_theory.stress(theory, load)
        found = next(w for w in result.flows if w.load == name and w.wall in names)
        wall = names[found.wall]
        peak = abs(flow.peak().flow)
        units = np.array([vx, vy, torque])
        for probe in found.probes:
            u = np.array([probe.s / 44.0])
            assert probe.theory is not None
            see(f"theory's flow, {name}", probe.theory, float(flow.at(wall, u)[0]), peak)
            if probe.fe is not None:
                see(f"FE's flow, {name}", probe.fe, float(units @ fe.flow_at(wall, u).values[:, 0]), peak)
        own_largest = max(
            abs(stress.largest("direct", w).stress) for w in ("a-b", "b-c", "c-d", "d-e", "e-f")
        )
        told = [p for p in result.theory_peaks if p.load == name and p.kind == "direct"]
        for theory_peak in told:
            see(f"direct stress, {name}", abs(theory_peak.value), own_largest, own_largest)
    return Finding(worst, 1e-6, f"Largest difference {worst:.1e} ({where}) over {len(LOADS)} loads.")


def combination() -> Finding:
    """FE's flows of loads on two cells: Vx and Vy times the unit flows and T_sc times unit T's."""
    result = compare(read_section(case_folder() / "sections" / "two_cell_tail_boom.toml"))
    centre = [_row(result, f"shear_centre_{axis}").fe.value or 0.0 for axis in "xy"]
    flows = {(w.load, w.wall): w.probes for w in result.flows}
    peak, worst, count = 0.0, 0.0, 0
    for name, (vx, vy, x, y) in TAIL_LOADS.items():
        torque = (x - centre[0]) * vy - (y - centre[1]) * vx
        for (load, wall), probes in flows.items():
            if load != name:
                continue
            units = [flows[u, wall] for u in ("unit Vx", "unit Vy", "unit T")]
            for probe, *unit in zip(probes, *units, strict=True):
                if probe.fe is None:
                    continue
                want = sum(f * (u.fe or 0.0) for f, u in zip((vx, vy, torque), unit, strict=True))
                worst, peak, count = max(worst, abs(probe.fe - want)), max(peak, abs(want)), count + 1
    share = worst / peak if count else math.inf
    return Finding(share, 1e-9, f"Largest difference {share:.1e} of the peak at {count} probes.")


CHECKS = (
    code_check("the file's section", GROUP, "both", same_section, quick=True, features={"two materials"}),
    code_check("rows redone", GROUP, "both", verdicts, quick=True),
    code_check("flows of loads from unit flows", GROUP, "fe", combination, features={"many cells"}),
    code_check("yardsticks", GROUP, "both", yardsticks, quick=True),
    code_check("borders of the verdicts", GROUP, "both", borders, quick=True),
    code_check(
        "loads redone", GROUP, "both", loads, quick=True, features={"load on a line", "axial and moment"}
    ),
)

"""Stresses of theory: what they must add up to, and what the numbers made from them must be."""

from __future__ import annotations

from functools import partial

import numpy as np
from numpy.typing import NDArray

import beam_theory
from crosscheck.verification.code_checks.equilibrium import by_theory
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES, Shape, Wall

GROUP = "stresses of theory"
ROUND_OFF = 1e-9
# Places of a wall at which a largest value is looked for, and what may lie between two of them.
PLACES, BETWEEN = 801, 1e-4

Array = NDArray[np.float64]

LOADS = (
    beam_theory.Load("pull", axial=130.0, moment=(2000.0, -900.0)),
    beam_theory.Load("push", shear=(20.0, -35.0), through=(10.0, 5.0), torque=400.0, moment=(-800.0, 1500.0)),
    beam_theory.Load("warp", shear=(-8.0, 12.0), torque=-90.0, bimoment=4.0e4),
)


def _scaled(load: beam_theory.Load, by: float) -> beam_theory.Load:
    """A load with all its forces and couples scaled."""
    (vx, vy), (mx, my) = load.shear, load.moment
    return beam_theory.Load(
        load.name, (by * vx, by * vy), load.through, by * load.torque, by * load.axial, (by * mx, by * my)
    )


def _fibres(shape: Shape, theory: beam_theory.Solution) -> Array:
    """Fibres: x, y from the centroid, omega, area with its share, sigma of each load, (n, 7)."""
    centre = np.array([theory.require("centroid_x"), theory.require("centroid_y")])
    cases = [beam_theory.stress(theory, load) for load in LOADS]
    rows = []
    for wall in shape.walls:
        line = shape.line(wall)
        sigma = [case.direct(wall.name, line.fraction).mean(axis=1) for case in cases]
        omega = theory.warping_at(wall.name, line.fraction)
        area = wall.direct_share * line.thickness * line.weight
        rows.append(np.column_stack([line.place - centre, omega, area, *sigma]))
    for number, (p, a) in enumerate(shape.booms.items()):
        wall = next(w for w in shape.walls if p in (w.start, w.end))
        omega = theory.warping_at(wall.name, np.array([0.0 if p == wall.start else 1.0]))
        sigma = [np.array([case.booms()[number].stress]) for case in cases]
        place = np.array([shape.points[p]]) - centre
        rows.append(np.column_stack([place, omega, [a], *sigma]))
    return np.concatenate(rows)


def resultants(name: str) -> Finding:
    """N, Mx, My and B of the direct stress, summed over the fibres, against the loads."""
    shape, theory = by_theory(name)
    found = _fibres(shape, theory)
    x, y, omega, area = found[:, :4].T
    worst = 0.0
    for load, sigma in zip(LOADS, found[:, 4:].T, strict=True):
        force = sigma * area
        pairs = (
            (np.ones_like(x), load.axial),
            (y, load.moment[0]),
            (x, load.moment[1]),
            (omega, load.bimoment),
        )
        for arm, want in pairs:
            worst = max(worst, abs(float(arm @ force) - want) / float(np.abs(arm) @ np.abs(force)))
    return Finding(worst, ROUND_OFF, f"Largest miss {worst:.1e} of the sum of magnitudes.")


def faces(name: str) -> Finding:
    """Differences of both faces: direct stress as the load is bent through t, shear stress 2 g t twist.

    The mean shear is q/t; von Mises stress is the root of sigma^2 + 3 tau^2.
    """
    shape, theory = by_theory(name)
    worst = 0.0
    for load in LOADS:
        case = beam_theory.stress(theory, load)
        turned = load.shear != (0.0, 0.0) or load.torque != 0.0
        flow = theory.flow(load) if turned else None
        for wall in shape.walls:
            line = shape.line(wall)
            sigma, tau = case.direct(wall.name, line.fraction), case.shear(wall.name, line.fraction)
            tangent = line.step / np.hypot(*line.step.T)[:, None]
            normal = np.column_stack([-tangent[:, 1], tangent[:, 0]])
            slope = np.array([case.slope.real, case.slope.imag])
            bend = (
                wall.e * line.thickness * (normal @ slope) if wall.direct_share > 0.0 else 0.0 * line.fraction
            )
            scale = float(np.abs(sigma).max()) or 1.0
            worst = max(worst, float(np.abs(sigma[:, 0] - sigma[:, 1] - bend).max()) / scale)
            q = np.zeros(len(tau)) if flow is None else flow.at(wall.name, line.fraction)
            twist = 0.0 if flow is None or theory.in_cell(wall.name) else flow.twist
            scale = float(np.abs(tau).max()) or 1.0
            worst = max(worst, float(np.abs(tau.mean(axis=1) - q / line.thickness).max()) / scale)
            split = tau[:, 1] - tau[:, 0] - 2.0 * wall.g * line.thickness * twist
            worst = max(worst, float(np.abs(split).max()) / scale)
            both = np.sqrt(sigma**2 + 3.0 * tau**2) - case.von_mises(wall.name, line.fraction)
            worst = max(worst, float(np.abs(both).max()) / (float(np.abs(sigma).max()) + scale))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e}.")


def peaks(name: str) -> Finding:
    """Largest stresses, and their envelope over all loads, against a dense search."""
    shape, theory = by_theory(name)
    cases = [beam_theory.stress(theory, load) for load in LOADS]
    over = {(r.kind, r.wall): r for r in beam_theory.envelope(theory, LOADS).walls}
    u, worst = np.linspace(0.0, 1.0, PLACES), 0.0
    for wall in shape.walls:
        for kind in ("direct", "shear", "von_mises"):
            dense = [float(np.abs(getattr(case, kind)(wall.name, u)).max()) for case in cases]
            if max(dense) == 0.0:
                continue
            own = [abs(case.largest(kind, wall.name).stress) for case in cases]
            worst = max(worst, *(abs(a - b) / max(dense) for a, b in zip(own, dense, strict=True)))
            # a millionth of the load makes a millionth of the stress
            small = beam_theory.stress(theory, _scaled(LOADS[1], 1e-6)).largest(kind, wall.name).stress
            worst = max(worst, abs(abs(small) * 1e6 - own[1]) / max(dense))
            # the search at many places can only find less
            if any(a < b * (1.0 - 1e-12) for a, b in zip(own, dense, strict=True)):
                worst = float("inf")
            row = over[kind, wall.name]
            worst = max(worst, abs(abs(row.value) - max(dense)) / max(dense))
            if row.load != LOADS[int(np.argmax(dense))].name:
                worst = float("inf")
        flow = max(abs(theory.flow(load).peak(wall.name).flow) for load in LOADS[1:])
        worst = max(worst, abs(abs(over["flow", wall.name].value) / flow - 1.0))
    return Finding(worst, BETWEEN, f"Largest difference {worst:.1e} from a search at {PLACES} places a wall.")


def flow_peaks(name: str) -> Finding:
    """Largest flows of unit and other loads, and where they stand still, against a dense search."""
    shape, theory = by_theory(name)
    loads = (beam_theory.Load("Vx", (1.0, 0.0)), beam_theory.Load("Vy", (0.0, 1.0)), *LOADS[1:])
    flows = [theory.flow(load) for load in loads]
    u, worst = np.linspace(0.0, 1.0, PLACES), 0.0
    for wall in shape.walls:
        dense = [float(np.abs(f.at(wall.name, u)).max()) for f in flows]
        for flow, largest in zip(flows, dense, strict=True):
            peak = flow.peak(wall.name)
            there = float(flow.at(wall.name, np.array([peak.at]))[0])
            worst = max(
                worst, abs(abs(peak.flow) - largest) / max(dense), abs(there - peak.flow) / max(dense)
            )
            q = flow.shear_at(wall.name, u)
            turns = np.flatnonzero(np.diff(np.sign(np.diff(q))) != 0)
            still = flow.stationary(wall.name)
            if wall.direct_share > 0.0 and len(still) != len(turns):
                worst = float("inf")
    return Finding(worst, BETWEEN, f"Largest difference {worst:.1e} from a search at {PLACES} places a wall.")


def numbers_from_faces(name: str) -> Finding:
    """Section moduli, torsion modulus and Wagner coefficients against the real faces and sums over fibres."""
    shape, theory = by_theory(name)
    made = beam_theory.faces.face_quantities(theory)
    centre = np.array([theory.require("centroid_x"), theory.require("centroid_y")])
    pole = np.array([theory.require("shear_centre_x"), theory.require("shear_centre_y")])
    u = np.linspace(0.0, 1.0, PLACES)
    reach, fastest = [], 0.0
    torsion = beam_theory.stress(theory, beam_theory.Load("unit T", torque=1.0))
    for wall in shape.walls:
        tau = torsion.shear(wall.name, u)
        fastest = max(fastest, float(np.abs(tau).max()))
        if wall.direct_share == 0.0:
            continue
        z = theory.place(wall.name, u) - centre
        d = np.gradient(z, axis=0)
        d[0], d[-1] = (4 * z[1] - z[2] - 3 * z[0]) / 2, (3 * z[-1] + z[-3] - 4 * z[-2]) / 2
        n = np.column_stack([-d[:, 1], d[:, 0]]) / np.hypot(*d.T)[:, None]
        half = 0.5 * (wall.thickness[0] + u * (wall.thickness[1] - wall.thickness[0]))[:, None]
        reach += [wall.e * (z + half * n), wall.e * (z - half * n)]
    reach += [np.array([shape.points[p]]) - centre for p in shape.booms]
    fibre = np.concatenate(reach)
    angle = theory.require("principal_angle")
    axis = np.array([np.cos(angle), np.sin(angle)])
    across = np.array([-axis[1], axis[0]])
    right, up = np.eye(2)
    ways = {
        "x_top": ("second_moment_xx", up), "x_bottom": ("second_moment_xx", -up),
        "y_right": ("second_moment_yy", right), "y_left": ("second_moment_yy", -right),
        "u_plus": ("principal_moment_u", across), "u_minus": ("principal_moment_u", -across),
        "v_plus": ("principal_moment_v", axis), "v_minus": ("principal_moment_v", -axis),
    }  # fmt: skip
    want = {
        f"section_modulus_{n}": theory.require(m) / float((fibre @ d).max()) for n, (m, d) in ways.items()
    }
    want["torsion_modulus"] = 1.0 / fastest
    off = {n: abs(made[n].require(n) / v - 1.0) for n, v in want.items()}
    # K = integral of sigma r^2 = N r_0^2 + Mx beta_x + My beta_y + B beta_w
    found = _fibres(shape, theory)
    square = ((found[:, :2] + centre - pole) ** 2).sum(axis=1)
    for load, sigma in zip(LOADS, found[:, 4:].T, strict=True):
        force = sigma * found[:, 3]
        by_name = (
            load.axial * made["polar_radius_squared"].require("polar radius")
            + load.moment[0] * made["wagner_x"].require("wagner_x")
            + load.moment[1] * made["wagner_y"].require("wagner_y")
            + load.bimoment * made["wagner_omega"].require("wagner_omega")
        )
        off[f"Wagner, {load.name}"] = abs(float(square @ force) - by_name) / float(square @ np.abs(force))
    where = max(off, key=off.__getitem__)
    return Finding(
        off[where], BETWEEN, f"Largest difference {off[where]:.1e} ({where}) of {len(off)} numbers."
    )


def peak_near_an_end() -> Finding:
    """Channel under Vy, its web divided a little below mid-height: tau = V S/(I t) at the neutral axis.

    The place is within a hundredth of one end of the upper part of the web, whichever way that runs.
    """
    b, half, t, below = 40.0, 50.0, 2.0, 0.5
    points = {"a": (b, half), "b": (0.0, half), "m": (0.0, -below), "c": (0.0, -half), "d": (b, -half)}
    inertia = 2.0 * t * b * half**2 + t * (2.0 * half) ** 3 / 12.0
    want = (t * b * half + 0.5 * t * half**2) / (inertia * t)
    place, worst = below / (half + below), 0.0
    for start, end, at in (("m", "b", place), ("b", "m", 1.0 - place)):
        walls = [Wall(p[0], p[1], (t, t)) for p in ("ab", "mc", "cd")]
        theory = beam_theory.solve(Shape(points, (*walls, Wall(start, end, (t, t))), {}).theory())
        case = beam_theory.stress(theory, beam_theory.Load("Vy", (0.0, 1.0)))
        found = case.largest("shear")
        off = abs(abs(found.stress) / want - 1.0)
        # a largest value is known to round-off, its place to the root of that
        worst = max(
            worst, off, 1e-4 * abs(found.at - at), abs(case.largest("shear", f"{start}-{end}").at - found.at)
        )
    return Finding(worst, 1e-11, f"Largest difference {worst:.1e} of the stress (1e-4 times of the place).")


def stiffnesses() -> Finding:
    """Stiffnesses of theory for E = 70, G = 27 against the quantities they are made from."""
    _, theory = by_theory("open section")
    made = beam_theory.stiffness(theory, 70.0, 27.0, (3.0, -2.0))
    q = theory.require
    want = {
        "EA": 70.0 * q("area"), "EIxx": 70.0 * q("second_moment_xx"), "EIyy": 70.0 * q("second_moment_yy"),
        "EIxy": 70.0 * q("product_moment_xy"), "EIu": 70.0 * q("principal_moment_u"),
        "EIv": 70.0 * q("principal_moment_v"), "angle": q("principal_angle"),
        "GJ": 27.0 * q("torsion_constant"),
        "EIw": 70.0 * q("warping_constant"), "GA_Vx": 27.0 * q("shear_area_x"),
        "GA_Vy": 27.0 * q("shear_area_y"),
        "coupling": q("shear_coupling") / 27.0, "centroid_x": q("centroid_x") - 3.0,
        "centroid_y": q("centroid_y") + 2.0, "shear_centre_x": q("shear_centre_x") - 3.0,
        "shear_centre_y": q("shear_centre_y") + 2.0,
        "characteristic_length": np.sqrt(70.0 * q("warping_constant") / (27.0 * q("torsion_constant"))),
    }  # fmt: skip
    worst = max(abs(getattr(made, n).require(n) / v - 1.0) for n, v in want.items())
    plain = beam_theory.stiffness(theory, 70.0, 27.0)
    worst = max(
        worst,
        abs(plain.centroid_x.require("x") - q("centroid_x")),
        abs(plain.centroid_y.require("y") - q("centroid_y")),
    )
    return Finding(worst, 1e-12, f"Largest difference {worst:.1e} of {len(want)} numbers.")


CHECKS = (
    *(
        code_check(f"{what}, {name}", GROUP, "theory", partial(measure, name), quick=quick, features=features)
        for what, measure, quick, features in (
            ("resultants of direct stress", resultants, True, {"axial and moment", "bimoment"}),
            ("stress at both faces", faces, True, {"torque"}),
            ("largest flows", flow_peaks, True, set()),
            ("largest stresses and envelope", peaks, False, set()),
            ("numbers from the faces", numbers_from_faces, True, set()),
        )
        for name in SHAPES
    ),
    code_check("largest stress near an end", GROUP, "theory", peak_near_an_end, quick=True),
    code_check("stiffnesses", GROUP, "theory", stiffnesses, quick=True),
)

"""Error bars of finite elements, worked out a second time from the fields: gaps, geometry, one order less."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

import numpy as np
from numpy.typing import NDArray

import fe_models
from crosscheck.verification.code_checks.equilibrium import by_fe
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import Shape, Wall, nose_cell
from fe_models.fields import warping
from fe_models.intervals import Interval, around
from fe_models.quantities import quantities
from fe_models.space import space

GROUP = "two-sidedness and monotonicity"
ROUND_OFF = 1e-9
# Shares that error bars keep for round-off, of bounds and of exact quantities, and of the geometry's error.
BOUNDS, EXACT, GEOMETRY = 1e-10, 1e-12, 2.0
# Chords of a circle in steps of 0.01 lose a sixth of their square in area, twice that in J: half is kept.
CHORDS = 0.5 * 0.01**2
# Shapes whose bar of I_w is redone, and those whose whole intervals are.
WARPED = ("two cells, two materials", "curved nose", "nose of two materials")
Array = NDArray[np.float64]


def _solved(name: str) -> fe_models.Solution:
    """A shape; one upright, curved and with second moments from the mesh; a solid; joints of short walls."""
    if name == "crowded joint":
        points = {"a": (0.0, 0.0), "b": (40.0, 0.0), "c": (43.0, 0.0), "d": (43.0, 50.0)}
        sides = (Wall("b", "c", (4.0, 4.0)), Wall("c", "d", (4.0, 4.0)))
        shape = Shape(points, (Wall("a", "b", (6.0, 6.0), e=1.02, g=1.03), *sides), {})
        return fe_models.solve(shape.solid(), 1e-2)
    if name == "bar of two half circles":
        wall = fe_models.Wall("1", "a", "b", (5.0, 5.0))
        ends = {p: fe_models.Rounding(0.0, 2.5) for p in "ab"}
        return fe_models.solve(fe_models.Section({"a": (0.0, 0.0), "b": (5.0, 0.0)}, (wall,), ends), 1e-3)
    if name == "half disc":
        line = fe_models.ClosedLine(((-7.0, 3.0), (13.0, 3.0)), (None, (3.0, 13.0)))
        return fe_models.solve_solid(fe_models.Solid((line,)), 1e-2)
    if name == "nose of two materials":
        shape = nose_cell()
        first, *others = shape.walls
        two = replace(shape, walls=(replace(first, e=2.0, g=1.7), *others))
        return fe_models.solve(two.moved(1j).solid(), 1e-3)
    return by_fe(name)


def _doubt(solved: fe_models.Solution) -> float:
    """Share in area and polar moment of elements that as well could be another wall's, e or g times."""
    fields, mesh = solved.fields, solved.fields.space.mesh
    square = (fields.space.points**2).sum(axis=-1)
    shares = []
    for ratio in (fields.moduli.e, fields.moduli.g):
        for kernel in (np.ones(square.shape), square):
            each = (fields.space.weights * kernel).sum(axis=1)
            lost = 0.0
            for part, among in enumerate(solved.outline.splits):
                rows = [i for i in range(len(each)) if among.nearest and mesh.region[i] == part]
                owners: dict[int, set[int]] = {}
                for i in rows:
                    for v in mesh.triangles[i].tolist():
                        owners.setdefault(v, set()).add(int(mesh.owner[i]))
                spread = float(np.ptp(ratio[rows])) if rows else 0.0
                border = [i for i in rows if any(len(owners[v]) > 1 for v in mesh.triangles[i].tolist())]
                lost += spread * float(each[border].sum())
            shares.append(lost / float((ratio * each).sum()))
    return max(shares)


def _products(fields: fe_models.Fields, one: Array, two: Array) -> float:
    """Integral of one . two/g."""
    weight = fields.space.weights / fields.moduli.g[:, None]
    return float(np.einsum("eq,eqa,eqa->", weight, one, two))


def _geometry(solved: fe_models.Solution) -> float:
    """Largest difference of the mesh's plain area and second moments from those of the outline."""
    fields = solved.fields
    w, p = fields.space.weights.ravel(), fields.space.points.reshape(-1, 2)
    area = float(w.sum())
    p = p - w @ p / area
    exact = solved.outline.moments(fields.inertia.centroid + w @ fields.space.points.reshape(-1, 2) / area)
    mesh = np.array([w @ p[:, 1] ** 2, w @ p[:, 0] ** 2, w @ (p[:, 0] * p[:, 1])])
    off = float(np.abs(mesh - exact.second).max()) / float(mesh[:2].max())
    return max(off, abs(area / exact.area - 1.0))


def redone(name: str) -> Finding:
    """Low and high of J, shear areas, shear centre and moments from gaps of the fields and the geometry."""
    solved = _solved(name)
    fields = solved.fields
    got = quantities(fields, solved.outline)
    doubt = _doubt(solved)
    geometry = GEOMETRY * _geometry(solved) if solved.outline.curved else 0.0
    off = geometry + doubt + (CHORDS if solved.outline.chorded else 0.0)
    extent = solved.outline.extent
    gap = []
    for pair in (fields.torsion, *fields.flexure):
        apart = pair.kinematic - pair.static
        gap.append((_products(fields, apart, apart), apart))
    want: dict[str, tuple[float, float]] = {}
    j = _products(fields, fields.torsion.kinematic, fields.torsion.kinematic)
    half = 0.5 * gap[0][0] + BOUNDS * j + off * abs(j - 0.5 * gap[0][0])
    want["torsion_constant"] = (j - 0.5 * gap[0][0], half)
    points = fields.space.points
    for i, (axis, sign) in enumerate((("y", -1.0), ("x", 1.0))):
        kinematic = fields.flexure[i].kinematic
        energy = _products(fields, kinematic, kinematic)
        low, high = 1.0 / (energy * (1.0 + BOUNDS) + gap[1 + i][0]), 1.0 / (energy * (1.0 - BOUNDS))
        middle = 0.5 * (low + high)
        want[f"shear_area_{'xy'[i]}"] = (middle, 0.5 * (high - low) + off * middle)
        moment = points[..., 0] * kinematic[..., 1] - points[..., 1] * kinematic[..., 0]
        torque = float((fields.space.weights * moment).sum()) - 0.5 * _products(
            fields, gap[1 + i][1], gap[0][1]
        )
        half = 0.5 * float(np.sqrt(gap[0][0] * gap[1 + i][0])) + BOUNDS * extent + off * extent
        centroid = float(fields.inertia.centroid["xy".index(axis)])
        want[f"shear_centre_{axis}"] = (centroid + sign * torque, half)
    uniform = bool((fields.moduli.e == fields.moduli.e[0]).all())
    share = EXACT + (0.0 if uniform else geometry) + doubt
    xx, yy = (got[f"second_moment_{n}"].known for n in ("xx", "yy"))
    xy = got["product_moment_xy"].known
    radius = float(np.hypot(0.5 * (xx - yy), xy))
    u, v = 0.5 * (xx + yy) + radius, 0.5 * (xx + yy) - radius
    want |= {"principal_moment_u": (u, share * u), "principal_moment_v": (v, share * v)}
    want |= {
        n: (got[n].known, share * got[n].known) for n in ("area", "second_moment_xx", "second_moment_yy")
    }
    want["product_moment_xy"] = (xy, share * float(np.sqrt(xx * yy)))
    want |= {n: (got[n].known, share * extent) for n in ("centroid_x", "centroid_y")}
    # of the major axis u: the turn that makes it larger than any other
    angle = got["principal_angle"].value or 0.0
    axis_u = np.array([np.cos(angle), np.sin(angle)])
    about = xx * axis_u[0] ** 2 + yy * axis_u[1] ** 2 - 2.0 * xy * axis_u[0] * axis_u[1]
    if got["principal_angle"].value is not None:
        want["principal_angle"] = (angle + abs(about / u - 1.0), share * 0.5 * (xx + yy) / radius)
    worst, where = 0.0, ""
    if uniform:
        # about the file's origin: the mesh's centroid, off by its geometry, has no part in it
        m = solved.outline.moments(np.zeros(2))
        x, y = m.first / m.area
        second = float(fields.moduli.e[0]) * (m.second - m.area * np.array([y * y, x * x, x * y]))
        lengths = np.array([x - got["centroid_x"].known, y - got["centroid_y"].known]) / extent
        moments = (second - np.array([xx, yy, xy])) / float(np.sqrt(xx * yy))
        worst, where = 1e6 * float(np.abs(np.concatenate([lengths, moments])).max()), "moments of the outline"
    bound = "bound on the interpolated outline" if solved.outline.curved else "bound"
    guess = name in ("crowded joint", "bar of two half circles")
    basis = {"torsion_constant": "estimate" if guess else bound, "area": "estimate" if doubt else "exact"}
    if (doubt > 0.0) != (name == "crowded joint") or any(got[n].basis != b for n, b in basis.items()):
        worst, where = float("inf"), "basis"
    for n, (value, half) in want.items():
        interval = got[n]
        scale = (
            extent
            if "centre" in n or "centroid" in n
            else float(np.sqrt(xx * yy))
            if "xy" in n
            else abs(value)
        )
        away = max(
            abs(interval.known - value) / scale,
            # a half-width of round-off alone is lost in the digits of its ends
            abs(interval.half_width - half) / (half + 1e-6 * scale),
        )
        if not away <= worst:
            worst, where = away, n
    return Finding(worst, 1e-6, f"Largest difference {worst:.1e} ({where}) of {len(want)} intervals.")


def arithmetic() -> Finding:
    """Intervals widened, padded and met, by hand; what is no bound, or has no value, stays as it is."""
    one, two = Interval(2.0, 1.5, 2.6, "bound"), Interval(2.2, 1.8, 3.0, "bound")
    none, guess = Interval(None, None, None, "exact", "undefined"), Interval(9.0, 8.0, 10.0, "estimate")
    met = one.meet(two)
    pairs = [
        (around(3.0, 0.25, "bound"), (3.0, 2.75, 3.25)),
        (one.widened(0.1), (2.0, 1.3, 2.8)),
        (around(-2.0, 0.5, "bound").widened(0.1), (-2.0, -2.7, -1.3)),
        (one.padded(0.5), (2.0, 1.0, 3.1)),
        (one.padded(0.0), (2.0, 1.5, 2.6)),
        (met, (2.2, 1.8, 2.6)),
        (one.meet(guess), (2.0, 1.5, 2.6)),
        (guess.meet(one), (9.0, 8.0, 10.0)),
        (one.meet(none), (2.0, 1.5, 2.6)),
        (one.meet(Interval(2.0, None, 2.1, "bound")), (2.0, 1.5, 2.6)),
    ]
    worst = 0.0
    for interval, (value, low, high) in pairs:
        assert interval.low is not None
        assert interval.high is not None
        worst = max(worst, abs(interval.known - value), abs(interval.low - low), abs(interval.high - high))
        worst = max(worst, abs(interval.half_width - 0.5 * (high - low)))
    if none.half_width != 0.0 or none.widened(0.1) != none or none.meet(one) != none:
        worst = float("inf")
    if (
        Interval(1.0, None, 2.0, "bound").half_width != 0.0
        or around(0.0, 1.0, "bound").widened(0.1).low != -1.0
    ):
        worst = float("inf")
    return Finding(worst, 1e-12, f"Largest difference {worst:.1e} of {len(pairs)} intervals.")


def warping_bar(name: str) -> Finding:
    """Error bar of I_w: its change when omega is solved one order lower on the same mesh."""
    solved = _solved(name)
    fields, interval = solved.fields, quantities(solved.fields, solved.outline)["warping_constant"]
    order = fields.space.element.order - 1
    mesh = fields.space.mesh
    below = space(mesh, order, fields.inertia.centroid)
    omega = warping(below, fields.moduli)
    pole = [quantities(fields, solved.outline)[f"shear_centre_{a}"].known for a in "xy"]
    found = []
    for on, potential in ((fields.space, fields.torsion.potential), (below, omega)):
        x, y = (on.points - (np.array(pole) - fields.inertia.centroid)).transpose(2, 0, 1)
        weight = on.weights * fields.moduli.e[:, None]
        # about S omega is omega_C less (y_s x - x_s y), up to a constant
        shift = (np.array(pole) - fields.inertia.centroid) @ np.array([[0.0, -1.0], [1.0, 0.0]])
        local = on.value(potential) - (x * shift[0] + y * shift[1])
        local = local - float((weight * local).sum() / weight.sum())
        found.append(float((weight * local**2).sum()))
    half = abs(found[0] - found[1]) + BOUNDS * found[0]
    off = max(abs(interval.known / found[0] - 1.0), abs(interval.half_width / half - 1.0))
    return Finding(off, 1e-6, f"I_w {found[0]:.8g} +- {half:.2g}, largest difference {off:.1e}.")


CHECKS = (
    *(
        code_check(f"error bars redone, {n}", GROUP, "fe", partial(redone, n), quick=n in WARPED[:2])
        for n in (*WARPED, "half disc", "crowded joint", "bar of two half circles")
    ),
    *(code_check(f"error bar of I_w, {n}", GROUP, "fe", partial(warping_bar, n)) for n in WARPED),
    code_check("arithmetic of intervals", GROUP, "fe", arithmetic, quick=True),
)

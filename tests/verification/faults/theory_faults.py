"""Deliberate faults in beam_theory."""

from __future__ import annotations

from fault import Fault

B = "beam_theory/"
THEORY = (
    Fault(
        "arc of a bend twice as long", B + "bends.py", "first[1] * abs(turn)", "2.0 * first[1] * abs(turn)"
    ),
    Fault(
        "own thickness of cell walls",
        B + "thick_torsion.py",
        "float(own.sum()) + terms",
        "0.9 * float(own.sum()) + terms",
    ),
    Fault(
        "area of thick cells",
        B + "thick_torsion.py",
        "Torsion(flow, float(twice @ flow),",
        "Torsion(flow, 1.01 * float(twice @ flow),",
    ),
    Fault(
        "moments about the origin",
        B + "shear.py",
        "curves = pieces.curves.moved(-mass.centroid)",
        "curves = pieces.curves",
    ),
    Fault(
        "arms without a sign",
        B + "curve.py",
        "return cross(self.position(u), self.tangent(u))",
        "return np.abs(cross(self.position(u), self.tangent(u)))",
    ),
    Fault(
        "a length in millimetres inside",
        B + "warping.py",
        "largest <= ROUND_OFF * float(",
        "largest <= 1e-3 + ROUND_OFF * float(",
    ),
    Fault("a coefficient of the tee", B + "corner_terms.py", "0.2204 * w +", "0.2304 * w +"),
    Fault(
        "a coefficient of the angle", B + "corner_terms.py", "0.076 * fillet / b)\n", "0.086 * fillet / b)\n"
    ),
    Fault(
        "a cell's corner, length",
        B + "corner_terms.py",
        "return x1 - c1 + (x2 - c2) / b",
        "return x1 - c1 + (x2 - c2)",
    ),
    Fault("a cell's corner, area", B + "corner_terms.py", "c - 1.25 * tangent", "c - 1.2 * tangent"),
    Fault("sign of the closing flow", B + "shear.py", "closing(graph, -sums)", "closing(graph, sums)"),
    Fault("sign of a boom's step", B + "shear.py", "balance = -graph.boom *", "balance = graph.boom *"),
    Fault("open walls by t^3/2", B + "torsion.py", "cubes / 3.0", "cubes / 2.0"),
    Fault("factor two of the cell area", B + "torsion.py", "twice = 2.0 * graph", "twice = 1.0 * graph"),
    Fault(
        "sign of shared walls", B + "torsion.py", "-flexibility, -flexibility]", "flexibility, flexibility]"
    ),
    Fault("shifted centroid", B + "inertia.py", ".sum()) / area)", ".sum()) / area * 1.001)"),
    Fault(
        "moduli left out of weights",
        B + "network.py",
        "self.e[:, None] * self.t * self.ds",
        "self.t * self.ds",
    ),
    Fault("direct share left out", B + "network.py", "wall.e * wall.direct_share", "wall.e"),
    Fault("g left out of flexibilities", B + "network.py", "(self.g * self.t_log)", "self.t_log"),
    Fault("taper by the mean thickness", B + "network.py", "t0 * safe / span)", "0.5 * (t0 + t1))"),
    Fault("axes of bending", B + "inertia.py", "(of_x, of_y) * axis.conjugate()", "(of_x, of_y) * axis"),
    Fault("sign of y_s", B + "midline.py", "y_s = -(k_x", "y_s = (k_x"),
    Fault(
        "sign of an arm", B + "solution.py", "arm.real * vy - arm.imag * vx", "arm.real * vy + arm.imag * vx"
    ),
    Fault("sign of the swept area in warping", B + "warping.py", "- curves.swept(u))", "+ curves.swept(u))"),
    Fault("mean of the warping function", B + "warping.py", "corner - mean, inside - mean", "corner, inside"),
    Fault("shear energy twice", B + "shear.py", "np.array([a @ form @ a,", "np.array([2.0 * (a @ form @ a),"),
    Fault(
        "bow of an arc left out of areas",
        B + "curve.py",
        "self.travel(u)) + bow",
        "self.travel(u)) + 0.0 * bow",
    ),
    Fault("torque of open walls lost", B + "solution.py", "rest = twist * self", "rest = 0.0 * twist * self"),
    Fault(
        "sign of the bimoment",
        B + "stress.py",
        "value + self.warping * omega",
        "value - self.warping * omega",
    ),
    Fault(
        "fibres a whole thickness off",
        B + "stress.py",
        "half = 0.5 * (p.t0[piece] +",
        "half = (p.t0[piece] +",
    ),
    Fault("faces exchanged", B + "stress.py", "[mean - twist, mean + twist]", "[mean + twist, mean - twist]"),
    Fault("von Mises with 2 tau^2", B + "stress.py", "sigma**2 + 3.0 * tau**2", "sigma**2 + 2.0 * tau**2"),
    Fault("first moment of an arc", B + "curve.py", "u**2 * (a * p2 +", "u**2 * (2.0 * a * p2 +"),
    Fault("end of a free wall", B + "corner_terms.py", "FREE_END = ", "FREE_END = 1.1 * "),
    Fault(
        "bend on its inner radius",
        B + "bends.py",
        "0.5 * (corner.inner_radius + outer)",
        "corner.inner_radius",
    ),
    Fault(
        "ends of a boom pair exchanged",
        B + "lumps.py",
        "(weight * (1.0 - xi) * stress)",
        "(weight * xi * stress)",
    ),
    Fault("own-axis second moments", B + "own_axis.py", "cube = (p.e / 12.0)", "cube = (p.e / 10.0)"),
    Fault("secondary warping", B + "own_axis.py", "float((((p.e / 12.0)", "float((((p.e / 10.0)"),
    Fault("a term of the sheet's polynomial", B + "wall_flow.py", "0.5 * line * rise", "line * rise"),
    Fault("an arc's term of the sheet", B + "wall_flow.py", "b1 = weight * (-1j", "b1 = weight * (1j"),
    Fault("sheet's boom step", B + "working.py", "boom_step = -(np", "boom_step = (np"),
    Fault(
        "least load taken as governing",
        B + "envelope.py",
        "abs(value) > abs(best.value)",
        "abs(value) < abs(best.value)",
    ),
    Fault(
        "sense of the principal angle",
        B + "inertia.py",
        "math.atan2(-2.0 * self.xy",
        "math.atan2(2.0 * self.xy",
    ),
    Fault("G J with E", B + "stiffness.py", 'times("torsion_constant", G)', 'times("torsion_constant", E)'),
    Fault(
        "cut moved",
        B + "shear.py",
        "graph.chord_at[:, None], at[cut]",
        "0.5 + 0.0 * graph.chord_at[:, None], at[cut]",
    ),
    Fault(
        "x and y of the Wagner coefficients",
        B + "faces.py",
        '"wagner_x": Quantity(bending(mass.slope(0.0, 1.0)))',
        '"wagner_x": Quantity(bending(mass.slope(1.0, 0.0)))',
    ),
    Fault(
        "thickness at a boom inside a taper",
        B + "network.py",
        "t0, t1 = t[:, 0] + rise * u0",
        "t0, t1 = t[:, 0] + 0.9 * rise * u0",
    ),
    Fault("limit of a small stress in booms", B + "lumps.py", "_LOW = 0.1", "_LOW = 0.6"),
    Fault("parts of an arc not divided again", B + "lumps.py", "_DEPTH = 6", "_DEPTH = 0"),
    Fault("range of fillets", B + "joints.py", "and 0.5 * thick <= radius", "and 0.4 * thick <= radius"),
    Fault("range of tees", B + "corner_terms.py", "TEE_RANGE = (0.5,", "TEE_RANGE = (0.45,"),
    Fault("range of a cell's corners", B + "corner_terms.py", "(1.0, 160.0, 3.0)", "(1.0, 165.0, 3.0)"),
    Fault("torque left to walls", B + "solution.py", "torque - 2.0 * twist", "torque - 2.1 * twist"),
    Fault("skins of lumped walls", B + "lumped.py", "replace(wall, direct_share=0.0)", "replace(wall)"),
    Fault(
        "own booms in I_w",
        B + "lumped.py",
        "base.graph.boom * base.warp",
        "0.9 * base.graph.boom * base.warp",
    ),
    Fault("stiffness of a flat section", B + "midline.py", "mass.xx <= flat", "mass.yy <= flat"),
    Fault("extremes along an arc", B + "flow.py", "+ 0.5 * math.pi - float", "+ 0.1 * math.pi - float"),
    Fault(
        "area of the cells",
        B + "network.py",
        "return 0.5 * self.round_cells",
        "return 0.51 * self.round_cells",
    ),
    Fault("first guess taken for the zero", B + "lumps.py", "if there == 0.0 or", "if there != 0.0 or"),
    Fault("a wall skipped at the first point", B + "cells.py", "= [(first, -1, 0)]", "= [(first, 1, 0)]"),
    Fault("search of a largest stress", B + "stress.py", "at[max(row - 1, 0)]", "at[max(row - 1, 1)]"),
    Fault(
        "centre of a tapered strip",
        B + "own_axis.py",
        "p.e[:, None] * p.t**3 * p.ds\n    origin",
        "p.e[:, None] * p.t**2 * p.ds\n    origin",
    ),
    Fault(
        "place of a cut beside a boom",
        B + "working.py",
        "first + (last - first) * at, wall",
        "first + last * at, wall",
    ),
    Fault("series of a thick arc", B + "thick_torsion.py", "11.0 * x**4 / 315.0", "11.0 * x**4 / 305.0"),
    Fault(
        "circle in which walls leave",
        B + "cells.py",
        "0.25 * near[start] * curvature",
        "0.0 * near[start] * curvature",
    ),
    Fault("flexibility along a taper", B + "network.py", "/ np.log1p(safe))", "* np.log1p(safe))"),
    Fault(
        "thickness at the end of a taper",
        B + "joints.py",
        "leaving), wall.thickness[1]",
        "leaving), wall.thickness[0]",
    ),
    Fault(
        "major axis of symmetry",
        B + "inertia.py",
        "self.xx > self.yy else math.pi / 2",
        "self.xx < self.yy else math.pi / 2",
    ),
    Fault("inertia of nothing", B + "inertia.py", "origin, 0.0, 0.0, 0.0,", "origin, 1.0, 1.0, 0.0,"),
)

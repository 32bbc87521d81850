"""Deliberate faults in fe_models."""

from __future__ import annotations

from fault import Fault

F = "fe_models/"
FE = (
    Fault("gradient of the elements", F + "element.py", "dy = j * x**i", "dy = x**i"),
    Fault("order of quadrature too low", F + "element.py", "_quadrature(order + 1)", "_quadrature(order)"),
    Fault(
        "element stiffness",
        F + "space.py",
        "total = metric.sum(axis=1) / ",
        "total = 1.01 * metric.sum(axis=1) / ",
    ),
    Fault(
        "curved sides as chords", F + "space.py", "    _follow(places, mesh, el, centre)\n    for", "    for"
    ),
    Fault(
        "curved sides of too low a degree",
        F + "space.py",
        "share[:, None] ** degree",
        "share[:, None] ** el.order",
    ),
    Fault(
        "missing constant of a hole",
        F + "stress_function.py",
        "unknown == -1 - i] = i - 1",
        "unknown == -1 - i] = -1",
    ),
    Fault(
        "lost jump round a hole",
        F + "stress_function.py",
        "jump = start_jumps(net, change[:, -1], flux)[:, None] + change",
        "jump = change",
    ),
    Fault(
        "lost jump between materials",
        F + "stress_function.py",
        "(on.e[net.left] - on.e[net.right])",
        "(0.0 * on.e[net.left])",
    ),
    Fault(
        "traction on the boundary", F + "stress_function.py", "rate = 0.5 * (slopes", "rate = 0.4 * (slopes"
    ),
    Fault("sign of the arm", F + "fields.py", "[arm, still, still])", "[-arm, still, still])"),
    Fault(
        "sign in the curl",
        F + "fields.py",
        "[slope[..., 1], -slope[..., 0]]",
        "[slope[..., 1], slope[..., 0]]",
    ),
    Fault("particular stress", F + "fields.py", "particular = [-0.5 *", "particular = [-0.4 *"),
    Fault(
        "moduli left out of the load",
        F + "fields.py",
        "space.load(moduli.e[:, None] * (p @ s))",
        "space.load(p @ s)",
    ),
    Fault("g where 1/g belongs", F + "fields.py", "1.0 / moduli.g, on.unknown)", "moduli.g, on.unknown)"),
    Fault("only one pass of correction", F + "fields.py", "PASSES = 2", "PASSES = 0"),
    Fault(
        "shear slopes",
        F + "fields.py",
        "np.array([[self.yy, self.xy], [self.xy, self.xx]])",
        "np.array([[self.yy, 0.0], [0.0, self.xx]])",
    ),
    Fault("mesh's centroid", F + "fields.py", "Inertia(area, centre + shift", "Inertia(area, centre - shift"),
    Fault(
        "one side of J only",
        F + "intervals.py",
        "around(high - 0.5 * gap, 0.5 * gap",
        "around(high, 0.0 * gap",
    ),
    Fault("x_s and y_s exchanged", F + "intervals.py", "((1, 1.0), (0, -1.0))", "((1, 1.0), (0, 1.0))"),
    Fault(
        "gap taken off for the shear area",
        F + "intervals.py",
        "most = energy + float(fields.gap",
        "most = energy - float(fields.gap",
    ),
    Fault(
        "pole of the warping function", F + "intervals.py", "potential - (y_s * on", "potential + (y_s * on"
    ),
    Fault(
        "mean of the warping function", F + "intervals.py", "np.asarray(local - mean)", "np.asarray(local)"
    ),
    Fault(
        "shear centre's error bar",
        F + "intervals.py",
        "half = 0.5 * float(np.sqrt(twist",
        "half = 1e-6 * float(np.sqrt(twist",
    ),
    Fault(
        "weights across the wall",
        F + "recovery.py",
        "weights = 0.5 * w * ((high",
        "weights = 0.49 * w * ((high",
    ),
    Fault(
        "closing error left out",
        F + "recovery.py",
        "(scale + closing)[:, None]",
        "(scale + 0.0 * closing)[:, None]",
    ),
    Fault("anticlastic strain", F + "poisson.py", "-nu / (2.0 * (1.0 + nu))", "-nu / (1.9 * (1.0 + nu))"),
    Fault("mean rotation", F + "poisson.py", "(slope + np.linalg", "(slope - np.linalg"),
    Fault("Steiner's term", F + "quantities.py", "(m.second - steiner)", "(m.second + m.area)"),
    Fault("sense of the principal angle", F + "quantities.py", "np.arctan2(-2.0 * xy", "np.arctan2(2.0 * xy"),
    Fault(
        "lost grading at corners",
        F + "grading.py",
        "return float(scale * max(SMALLEST, share ** (alpha / (2.0 * np.pi))))",
        "return float(scale)",
    ),
    Fault(
        "half thickness",
        F + "band.py",
        "return 0.5 * self.thickness[0] + self.slope",
        "return 0.49 * self.thickness[0] + self.slope",
    ),
    Fault("boom lost", F + "mesh.py", "cluster.boom / area", "0.0 * area"),
    Fault("lost corners", F + "chain.py", "MITRE_LIMIT = 4.0", "MITRE_LIMIT = 0.5"),
    Fault(
        "half an error bar of I_w",
        F + "intervals.py",
        "around(value, abs(value - lower)",
        "around(value, 0.5 * abs(value - lower)",
    ),
    Fault(
        "bounds met the wrong way",
        F + "intervals.py",
        "max(self.low, other.low)",
        "min(self.low, other.low)",
    ),
    Fault("no kinematic flow", F + "recovery.py", "return made[0], made[1]", "return made[0], made[0]"),
    Fault(
        "centroid of the mesh taken for the outline's",
        F + "quantities.py",
        "section.centroid + shift, 0.0",
        "section.centroid - shift, 0.0",
    ),
)

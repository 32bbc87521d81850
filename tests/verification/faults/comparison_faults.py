"""Deliberate faults in crosscheck/comparison."""

from __future__ import annotations

from fault import Fault

C = "crosscheck/comparison/"
COMPARISON = (
    Fault(
        "error bar helps", C + "verdicts.py", "d + uncertainty <= criterion", "d - uncertainty <= criterion"
    ),
    Fault(
        "never inconclusive", C + "verdicts.py", "d - uncertainty > criterion", "d + uncertainty > criterion"
    ),
    Fault("effect turned round", C + "verdicts.py", "abs(theory) > abs(fe)", "abs(theory) < abs(fe)"),
    Fault("factor turned round", C + "verdicts.py", "return fe / theory, None", "return theory / fe, None"),
    Fault("yardstick of I_w", C + "verdicts.py", "torsion * extent**2", "torsion * extent"),
    Fault(
        "yardstick of places", C + "verdicts.py", "return Yardstick(extent)", "return Yardstick(2.0 * extent)"
    ),
    Fault(
        "E and G exchanged",
        C + "models.py",
        "own.E / base.E, own.G / base.G",
        "own.G / base.G, own.E / base.E",
    ),
    Fault(
        "sign of an arm",
        C + "load_case.py",
        "(x_p - x) * vy - (y_p - y) * vx",
        "(x_p - x) * vy + (y_p - y) * vx",
    ),
    Fault("sign of a difference", C + "rows.py", "else theory - fe\n", "else fe - theory\n"),
    Fault(
        "G left out of the twist",
        C + "load_rows.py",
        "float(flow.torque_about_shear_centre) / (g * j)",
        "float(flow.torque_about_shear_centre) / j",
    ),
    Fault(
        "FE's twist without G",
        C + "load_case.py",
        "value / (shear_modulus * torsion_constant.value)",
        "value / torsion_constant.value",
    ),
    Fault(
        "half an error bar",
        C + "result.py",
        "max(self.high - self.value, self.value - self.low, 0.0)",
        "0.5 * max(self.high - self.value, self.value - self.low, 0.0)",
    ),
    Fault("one load lost", C + "models.py", "moment=load.moment,\n        bimoment", "bimoment"),
    Fault(
        "torque's flow left out",
        C + "flow_comparison.py",
        "(*case.shear, torque.value)",
        "(*case.shear, 0.0)",
    ),
)

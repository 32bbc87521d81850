"""Equations of the dossier in words: text alternative beside the typeset form in ``equations.typ``."""

from __future__ import annotations

EQUATIONS: dict[str, str] = {
    "bending": "[Iyy Ixy; Ixy Ixx][a b] = [My Mx]; sigma = e (N/A + a x + b y + B omega/I_w)",
    "flow": "[Iyy Ixy; Ixy Ixx][a b] = [Vx Vy]; dq/ds = -e t (a x + b y)",
    "closing": "for every cell, under shear through the shear centre: integral round the cell of q/(g "
    "t) ds = 0",
    "torsion": "F c = 2 A_m; J = sum over cells of 2 A_m c + sum over open walls of the integral of g "
    "t^3/3 ds",
    "torque": "T_sc = T + (x_p - x_s) Vy - (y_p - y_s) Vx",
    "centre": "x_s = x_c + integral of q p ds for unit Vy; y_s = y_c - integral of q p ds for unit Vx",
    "warping": "d omega/ds = q_T/(g t) - p; integral of e omega t ds = 0; I_w = integral of e omega^2 t ds",
    "shear_area": "1/A_V = integral of q^2/(g t) ds for unit shear without twist",
    "surface": "tau_T = g t T_sc/J at the faces of walls in no cell",
    "kinematic": "J is at most the minimum over omega of the integral of g |grad omega + R|^2 dA, R = "
    "(-y, x)",
    "static": "J is at least the integral of (2 R.s - |s|^2/g) dA, s = curl phi = (phi_y, -phi_x)",
    "gap": "J_high - J_low = integral of |k - s|^2/g dA, k = g (grad omega + R)",
    "flexure": "div tau = -e (a x + b y); tau.n = 0 on every boundary; nu = 0",
    "centre_fe": "L = half the integral of R.(k_V + s_V) dA, plus or minus half of gamma_T gamma_V; "
    "x_s = x_c + L of unit Vy; y_s = y_c - L of unit Vx",
    "verdict": "d + u <= c: within; d - u > c: outside; else inconclusive",
    "index": "GCI = F_s |f1 - f2|/(r^p - 1), r = sqrt(N1/N2)",
}

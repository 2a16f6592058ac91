"""Pin-connected plates by ASME BTH-1, nominal: the design factor N_d and the 1.20 beside it are set to 1.

Symbols are the standard's. Lengths in mm, stresses in MPa, forces in N. Equations from memory; the test is a worked number.
"""

from __future__ import annotations

import numpy as np

from parts.design import Floats

BTH = "ASME BTH-1-2020 §3-3.3 (equations from memory)"

Number = Floats | float


def clearance_factor(d_p: Number, d_h: Number) -> Floats:
    """C_r = 1 − 0.275 √(1 − D_p²/D_h²): what a pin looser in its hole takes off; 1 where the pin fills the hole.

    For D_p/D_h from 0.9. Source: ASME BTH-1 §3-3.3.1, equation 3-46.
    """
    ratio = np.minimum(np.asarray(d_p, dtype=float) / np.asarray(d_h, dtype=float), 1.0)
    return np.asarray(1.0 - 0.275 * np.sqrt(1.0 - ratio**2))


def effective_width(b_e: Number, t: Number, d_h: Number, f_y: Number, f_u: Number) -> Floats:
    """b_eff: the least of b_e (beside the hole, to the edge), 4t, and 0.6 b_e (F_u/F_y) √(D_h/b_e).

    Source: ASME BTH-1 §3-3.3.1, equations 3-47 and 3-48.
    """
    width = np.asarray(b_e, dtype=float)
    by_strength = 0.6 * np.asarray(f_u) / np.asarray(f_y) * np.sqrt(np.asarray(d_h) * width)
    return np.asarray(np.minimum(np.minimum(width, 4.0 * np.asarray(t)), by_strength))


def tensile_strength(c_r: Number, f_u: Number, t: Number, b_eff: Number) -> Floats:
    """P_t = C_r F_u 2 t b_eff. Source: ASME BTH-1 §3-3.3.1, equation 3-45 without 1.20 N_d."""
    return np.asarray(np.asarray(c_r) * f_u * 2.0 * t * b_eff)


def single_plane_strength(c_r: Number, f_u: Number, t: Number, r: Number, d_h: Number, b_e: Number) -> Floats:
    """P_b = C_r F_u [1.13 (R − D_h/2) + 0.92 b_e/(1 + b_e/D_h)] t, R from the hole's centre to the edge along the load.

    Source: ASME BTH-1 §3-3.3.1, equation 3-49 without 1.20 N_d.
    """
    beside, hole = np.asarray(b_e, dtype=float), np.asarray(d_h, dtype=float)
    ahead = 1.13 * (np.asarray(r) - hole / 2.0)
    return np.asarray(np.asarray(c_r) * f_u * (ahead + 0.92 * beside / (1.0 + beside / hole)) * t)


def shear_strength(f_u: Number, t: Number, a: Number, d_p: Number, d_h: Number) -> Floats:
    """P_v = 0.70 F_u A_v, A_v = 2 [a + D_p/2 (1 − cos φ)] t with φ = 55° D_p/D_h; a from the hole's edge along the load.

    Source: ASME BTH-1 §3-3.3.1, equations 3-50 to 3-52 without 1.20 N_d.
    """
    pin = np.asarray(d_p, dtype=float)
    phi = np.radians(55.0 * np.minimum(pin / np.asarray(d_h), 1.0))
    return np.asarray(0.70 * np.asarray(f_u) * 2.0 * (np.asarray(a) + pin / 2.0 * (1.0 - np.cos(phi))) * t)


def bearing_strength(f_y: Number, t: Number, d_p: Number) -> Floats:
    """F_p D_p t with F_p = 1.25 F_y, joints that do not turn. Source: ASME BTH-1 §3-3.3.4, equation 3-53 without N_d."""
    return np.asarray(1.25 * np.asarray(f_y) * t * d_p)


def turning_bearing_strength(f_y: Number, t: Number, d_p: Number) -> Floats:
    """F_p D_p t with F_p = 0.63 F_y, joints that turn under load many times. Source: ASME BTH-1 §3-3.3.4, equation 3-54."""
    return np.asarray(0.63 * np.asarray(f_y) * t * d_p)

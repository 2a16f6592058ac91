"""Eyes that are pulled at an angle: the interaction of Melcon and Hoblit, on first yield. mm, MPa, N."""

from __future__ import annotations

import math

import numpy as np

from parts.design import Floats

MELCON_HOBLIT = "Melcon and Hoblit 1953; NASA TM X-73305, lugs (curves read at second hand)"

Number = Floats | float

# Transverse yield: efficiency over A_av/A_br, one curve for aluminium and steel alloys. Read at second hand from the
# published chart; another reading of the same chart differs by no more than 0.03 (tests/loads/test_eye_rules.py).
_RATIO = (0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.1, 1.2, 1.3, 1.4)
_TRANSVERSE = (0.0, 0.12, 0.25, 0.38, 0.50, 0.61, 0.72, 0.81, 0.90, 0.97, 1.03, 1.10, 1.17, 1.23, 1.28)
# Axial yield: factor on (F_ty/F_tu) × ultimate over ultimate/(A_br F_tu)
_OVER = (1.0, 1.5, 2.0, 2.5, 3.0)
_YIELD = (1.0, 1.0, 0.93, 0.82, 0.71)


def average_area_ratio(side: Number, ahead: Number, d: Number) -> Floats:
    """A_av/A_br of an eye, A_av = 6/(3/A1 + 1/A2 + 1/A3 + 1/A4) with the thickness left out of all of them.

    A1, A4: through the hole's edge 45° off the transverse load, h = side + d/2 − d/√8. A2 beside the hole, A3 the least
    radial section. ``side`` and ``ahead`` from the hole's edge (mm). Source: NASA TM X-73305, transversely loaded lugs.
    """
    beside = np.maximum(np.asarray(side, dtype=float), 1e-9)
    least = np.maximum(np.minimum(beside, ahead), 1e-9)
    corner = beside + np.asarray(d) * (0.5 - math.sqrt(0.125))
    return np.asarray(6.0 / (4.0 / corner + 1.0 / beside + 1.0 / least) / d)


def transverse_yield(side: Number, ahead: Number, d: Number, t: Number, f_y: Number) -> Floats:
    """P_try = K_try d t F_ty of an eye loaded across its axis. K_try runs to A_av/A_br = 1.4 and is held from there on."""
    k = np.interp(average_area_ratio(side, ahead, d), _RATIO, _TRANSVERSE)
    return np.asarray(k * np.asarray(d) * t * f_y)


def axial_yield(ultimate: Number, d: Number, t: Number, f_y: Number, f_u: Number) -> Floats:
    """P_ya = C (F_ty/F_tu) P_u of an eye pulled along its axis, C by P_u/(d t F_tu); C is never taken above 1.

    The published C is 1.1 where P_u/(d t F_tu) is below 1.
    """
    c = np.interp(np.asarray(ultimate) / (np.asarray(d) * t * f_u), _OVER, _YIELD)
    return np.asarray(c * np.asarray(f_y) / f_u * ultimate)


def oblique_use(axial: Floats, transverse: Floats, axial_capacity: Number, transverse_capacity: Number) -> Floats:
    """(R_a^1.6 + R_tr^1.6)^(1/1.6): the share of the load at which the eye yields, all parts growing together.

    ``axial`` is the part that pulls the eye away from its body, ``transverse`` the part across it, both over crank angle.
    Where the force pushes towards the body (beyond 90°) its axial part is left to bearing, the transverse part stands alone.
    Source: Melcon and Hoblit, 1953: R_a^1.6 + R_tr^1.6 = 1 from 0° to 90° off the axis.
    """
    r_a = np.maximum(axial, 0.0) / axial_capacity
    r_tr = np.abs(transverse) / transverse_capacity
    return np.asarray((r_a**1.6 + r_tr**1.6) ** 0.625)

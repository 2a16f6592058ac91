"""Elastic stress concentration: holes in strips, eyes on pins, shoulders and grooves of round bars.

Each factor is the largest stress over the nominal stress of the net section that its docstring names. All functions take
numbers or arrays of one shape, lengths in mm, and raise ``ValueError`` outside the range of their curve.
"""

from __future__ import annotations

import numpy as np

from parts.design import Floats

PETERSON = "Pilkey, Peterson's Stress Concentration Factors, 2nd ed."

Row = tuple[float, float, float]
# each row: constant, times √(h/r), times h/r; four rows for the powers 0 to 3 of 2h/D
_SHOULDER_TENSION: dict[tuple[float, float], tuple[Row, ...]] = {
    (0.1, 2.0): (
        (0.926, 1.157, -0.099), (0.012, -3.036, 0.961), (-0.302, 3.977, -1.744), (0.365, -2.098, 0.878),
    ),
    (2.0, 20.0): (
        (1.200, 0.860, -0.022), (-1.805, -0.346, -0.038), (2.198, -0.486, 0.165), (-0.593, -0.028, -0.106),
    ),
}  # fmt: skip
_SHOULDER_BENDING: dict[tuple[float, float], tuple[Row, ...]] = {
    (0.1, 2.0): (
        (0.947, 1.206, -0.131), (0.022, -3.405, 0.915), (0.869, 1.777, -0.555), (-0.810, 0.422, -0.260),
    ),
    (2.0, 20.0): (
        (1.232, 0.832, -0.008), (-3.813, 0.968, -0.260), (7.423, -4.868, 0.869), (-3.839, 3.070, -0.600),
    ),
}  # fmt: skip
_SHOULDER_TORSION: dict[tuple[float, float], tuple[Row, ...]] = {
    (0.25, 4.0): (
        (0.905, 0.783, -0.075), (-0.437, -1.969, 0.553), (1.557, 1.073, -0.578), (-1.061, 0.171, 0.086),
    ),
}  # fmt: skip
_GROOVE_TENSION: dict[tuple[float, float], tuple[Row, ...]] = {
    (0.1, 2.0): (
        (0.890, 2.208, -0.094), (-0.923, -6.678, 1.638), (2.893, 6.448, -2.516), (-1.912, -1.944, 0.963),
    ),
    (2.0, 50.0): (
        (1.037, 1.967, 0.002), (-2.679, -2.980, -0.053), (3.090, 2.124, 0.165), (-0.424, -1.153, -0.106),
    ),
}  # fmt: skip
_GROOVE_BENDING: dict[tuple[float, float], tuple[Row, ...]] = {
    (0.25, 2.0): (
        (0.594, 2.958, -0.520), (0.422, -10.545, 2.692), (0.501, 14.375, -4.486), (-0.613, -6.573, 2.177),
    ),
    (2.0, 50.0): (
        (0.965, 1.926, 0.0), (-2.773, -4.414, -0.017), (4.785, 4.681, 0.096), (-1.995, -2.241, -0.074),
    ),
}  # fmt: skip
_GROOVE_TORSION: dict[tuple[float, float], tuple[Row, ...]] = {
    (0.25, 2.0): (
        (0.966, 1.056, -0.022), (-0.192, -4.037, 0.674), (0.808, 5.321, -1.231), (-0.567, -2.364, 0.566),
    ),
    (2.0, 50.0): (
        (1.089, 0.924, 0.018), (-1.504, -2.141, -0.047), (2.486, 2.289, 0.091), (-1.056, -1.104, -0.059),
    ),
}  # fmt: skip


def _within(value: Floats | float, low: float, high: float, what: str) -> Floats:
    found = np.asarray(value, dtype=float)
    if not bool(np.all((found >= low - 1e-9) & (found <= high + 1e-9))):
        raise ValueError(f"{what} is {found}; the curve runs from {low:g} to {high:g}")
    return found


def hole_in_strip_tension(d: Floats | float, width: Floats | float) -> Floats:
    """K_tn of a round hole d in the middle of a strip in tension, on F/((H − d) t); 0 ≤ d/H < 1.

    2 + (1 − d/H)³. Source: Heywood's fit of Howland's solution, in Peterson's Stress Concentration Factors with the chart
    for a hole in a finite-width element (from memory; its test holds it to Howland's values).
    """
    ratio = _within(np.asarray(d) / np.asarray(width), 0.0, 0.999, "hole over width")
    return np.asarray(2.0 + (1.0 - ratio) ** 3)


def hole_in_strip_bending(d: Floats | float, width: Floats | float) -> Floats:
    """K_tn of a round hole d in the middle of a strip bent in its plane, at the hole's edge, on 6 M d/((H³ − d³) t).

    2 for 0 ≤ d/H ≤ 0.6. Up to d/H of about a half the strip's own edge, with 6 M H/((H³ − d³) t), is stressed more.
    Source: Howland and Stevenson 1933 and Heywood 1952, in Peterson's Stress Concentration Factors (from memory; a finite
    element solution agrees).
    """
    ratio = _within(np.asarray(d) / np.asarray(width), 0.0, 0.6, "hole over width")
    return np.full_like(ratio, 2.0)


def pin_loaded_strip(d: Floats | float, width: Floats | float) -> Floats:
    """K_tn of a hole d that a neat pin pulls at, in a strip whose end is at least a width away, on F/((H − d) t).

    12.882 − 52.714 d/H + 89.762 (d/H)² − 51.667 (d/H)³ for 0.15 ≤ d/H ≤ 0.75.
    Source: Pilkey, Formulas for Stress, Strain, and Structural Matrices, table 6-1, after Frocht and Hill (from memory).
    """
    x = _within(np.asarray(d) / np.asarray(width), 0.15, 0.75, "hole over width")
    return np.asarray(12.882 + x * (-52.714 + x * (89.762 - 51.667 * x)))


def pin_loaded_eye(d: Floats | float, width: Floats | float) -> Floats:
    """K_tn of an eye with a round end about its hole d, pulled by a neat pin, on F/((W − d) t); 0.25 ≤ d/W ≤ 0.65.

    0.85 + 0.95 W/d. Source: Heywood, Designing against Fatigue, 1962, lugs with round ends (from memory; a finite element
    solution with a neat pin agrees within 7 %). A square end a width away has 0.6 in place of 0.85.
    """
    x = _within(np.asarray(d) / np.asarray(width), 0.25, 0.65, "hole over width")
    return np.asarray(0.85 + 0.95 / x)


def _polynomial(table: dict[tuple[float, float], tuple[Row, ...]], h: Floats, r: Floats, large: Floats) -> Floats:
    """C1 + C2 (2h/D) + C3 (2h/D)² + C4 (2h/D)³, C = a + b √(h/r) + c h/r, the rows by h/r."""
    low, high = min(key[0] for key in table), max(key[1] for key in table)
    depth = _within(np.asarray(h) / np.asarray(r), low, high, "depth over radius")
    x = _within(2.0 * np.asarray(h) / np.asarray(large), 0.0, 0.999, "twice the depth over the diameter")
    total = np.zeros(np.broadcast_shapes(depth.shape, x.shape))
    for (_, upper), rows in sorted(table.items(), reverse=True):
        part = sum((a + b * np.sqrt(depth) + c * depth) * x**i for i, (a, b, c) in enumerate(rows))
        total = np.where(depth <= upper + 1e-9, part, total)
    return np.asarray(total)


def _shoulder(table: dict[tuple[float, float], tuple[Row, ...]], large: object, small: object, r: object) -> Floats:
    big, little = np.asarray(large, dtype=float), np.asarray(small, dtype=float)
    return _polynomial(table, (big - little) / 2.0, np.asarray(r, dtype=float), big)


def shoulder_tension(large: Floats | float, small: Floats | float, r: Floats | float) -> Floats:
    """K_t of a round bar stepped from D to d with fillet r, pulled, on 4F/(π d²); 0.1 ≤ h/r ≤ 20, h = (D − d)/2.

    Source: Peterson, stepped bar of circular section with shoulder fillet, tension; curve fit of table 6-1 in Pilkey,
    Formulas for Stress, Strain, and Structural Matrices.
    """
    return _shoulder(_SHOULDER_TENSION, large, small, r)


def shoulder_bending(large: Floats | float, small: Floats | float, r: Floats | float) -> Floats:
    """K_t of a round bar stepped from D to d with fillet r, bent, on 32M/(π d³); 0.1 ≤ h/r ≤ 20. Source: as for tension."""
    return _shoulder(_SHOULDER_BENDING, large, small, r)


def shoulder_torsion(large: Floats | float, small: Floats | float, r: Floats | float) -> Floats:
    """K_ts of a round bar stepped from D to d with fillet r, twisted, on 16T/(π d³); 0.25 ≤ h/r ≤ 4. Source: as above."""
    return _shoulder(_SHOULDER_TORSION, large, small, r)


def groove_tension(large: Floats | float, small: Floats | float, r: Floats | float) -> Floats:
    """K_t of a U-shaped groove round a bar D, bottom d, root radius r, pulled, on 4F/(π d²); 0.1 ≤ h/r ≤ 50.

    For a retaining ring's flat-bottomed groove the radius of its corners: on the safe side, as a wider groove is milder.
    Source: Peterson, circular shaft with U-shaped groove; curve fit of table 6-1 in Pilkey, Formulas for Stress, Strain, and
    Structural Matrices.
    """
    return _shoulder(_GROOVE_TENSION, large, small, r)


def groove_bending(large: Floats | float, small: Floats | float, r: Floats | float) -> Floats:
    """K_t of a U-shaped groove round a bar, bent, on 32M/(π d³); 0.25 ≤ h/r ≤ 50. Source: as for tension."""
    return _shoulder(_GROOVE_BENDING, large, small, r)


def groove_torsion(large: Floats | float, small: Floats | float, r: Floats | float) -> Floats:
    """K_ts of a U-shaped groove round a bar, twisted, on 16T/(π d³); 0.25 ≤ h/r ≤ 50. Source: as for tension."""
    return _shoulder(_GROOVE_TORSION, large, small, r)

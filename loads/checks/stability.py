"""Struts and thin beams: columns by Euler and Johnson, a column that overhangs its support, sideways buckling of a strip."""

from __future__ import annotations

import math

import numpy as np

from parts.design import Floats

Number = Floats | float

# effective length factor out of the disc's plane: the crank pin's joint holds one end, nothing but the chain the other
FREE_END = 2.0


def column_stress(slenderness: Number, f_y: Number, modulus: float) -> Floats:
    """Critical stress (MPa) of a column: Euler above the transition slenderness, Johnson's parabola below it.

    ``slenderness`` is K L / r. σ = π² E / λ² for λ ≥ sqrt(2 π² E / f_y), else f_y − f_y² λ² / (4 π² E).
    Source: Shigley's Mechanical Engineering Design, columns with central loading (Euler and J. B. Johnson formulas).
    """
    slender = np.asarray(slenderness, dtype=float)
    f_y = np.asarray(f_y, dtype=float)
    euler = math.pi**2 * modulus / np.maximum(slender, 1e-9) ** 2
    johnson = f_y - f_y**2 * slender**2 / (4.0 * math.pi**2 * modulus)
    return np.asarray(np.where(slender >= np.sqrt(2.0 * math.pi**2 * modulus / f_y), euler, johnson))


def overhang_factor(held: float) -> float:
    """K of a column hinged at one end, held sideways at ``held`` of its length and free at the other; 0 < held ≤ 1.

    kL = π/K is the least root of (1/kd − cot kd) tan ka = 1, d the held part and a the free one; 1 ≤ K < 2. The thrust keeps
    its direction. Source: stability of a beam on two supports with an overhang (Timoshenko and Gere, Theory of Elastic
    Stability, chapter 2), worked out here; its limits are a hinged column and one clamped at its foot.
    """
    d, a = held, 1.0 - held
    if a < 1e-6:
        return 1.0
    low, high = math.pi / 2.0, math.pi
    for _ in range(40):
        u = (low + high) / 2.0
        # past the first pole of the tangent, or of the cotangent, it has buckled
        gone = u * a >= math.pi / 2.0 or (1.0 / (u * d) - 1.0 / math.tan(u * d)) * math.tan(u * a) >= 1.0
        low, high = (low, u) if gone else (u, high)
    return math.pi / low


def lateral_moment(length: Number, depth: Number, thickness: Number, f_y: Number, modulus: float) -> Floats:
    """Moment (N·mm) at which a flat bar bent in its plane gives way sideways, no more than that of first yield W f_y.

    M = f_y W up to L d/t² = 0.08 E/f_y; (1.52 − 0.274 (L d/t²) f_y/E) f_y W up to 1.9 E/f_y; 1.9 E/(L d/t²) W beyond;
    C_b = 1. ``length`` is between points held against twist; twice the length of a bar with a free end. mm, MPa.
    Source: AISC 360-16 §F11.2, equations F11-2 to F11-4 (which go up to the plastic moment).
    """
    slender = np.asarray(length, dtype=float) * depth / np.asarray(thickness) ** 2
    w = np.asarray(thickness) * np.asarray(depth) ** 2 / 6.0
    inelastic = (1.52 - 0.274 * slender * f_y / modulus) * f_y
    elastic = 1.9 * modulus / np.maximum(slender, 1e-12)
    stress = np.where(slender <= 1.9 * modulus / np.asarray(f_y), inelastic, elastic)
    return np.asarray(np.minimum(stress, f_y) * w)


def grown(thrust: Number, critical: Number, target: float) -> Floats:
    """1/(1 − target N/N_E): by how much the bending of a strut grows under its thrust, all loads ``target`` times as large.

    Infinite from the critical load on. Source: Shigley, columns with eccentric loading; Timoshenko and Gere, Theory of
    Elastic Stability, §1.11 (amplification).
    """
    left = 1.0 - target * np.asarray(thrust, dtype=float) / np.asarray(critical)
    return np.where(left > 1e-6, 1.0 / np.maximum(left, 1e-6), 1e6)

"""The swing link between its eyes: the section at the stop, and the link as a strut near the hold."""

from __future__ import annotations

import math

import numpy as np

from loads.checks.context import BEAM, Context, length_of
from loads.records import Check
from parts.design import Floats


def rectangle_torsion_stress(torsion: Floats, long: float, short: float) -> Floats:
    """Greatest shear stress (MPa) of a rectangle in torsion (N·mm), sides in mm: T (3 + 1.8 short/long) / (long short²).

    Within 0.3 % to 5 % of the exact series. Source: Young and Budynas, Roark's Formulas for Stress and Strain, table for
    torsion of a solid rectangular section, short form (from memory).
    """
    return np.asarray(torsion * (3.0 + 1.8 * short / long) / (long * short**2))


def section_stress(
    axial: Floats, in_plane: Floats, out_of_plane: Floats, torsion: Floats, width: float, thickness: float
) -> Floats:
    """Equivalent stress (MPa) at the worst corner of the link's section.

    Axial force (N) with bending about both axes (N·mm) by beam theory, torsion added by distortion energy as if its
    greatest stress stood at that corner (on the safe side). Width across the link and thickness in mm.
    """
    normal = np.abs(axial) / (width * thickness)
    normal = normal + 6.0 * np.abs(in_plane) / (thickness * width**2)
    normal = normal + 6.0 * np.abs(out_of_plane) / (width * thickness**2)
    shear = rectangle_torsion_stress(np.abs(torsion), max(width, thickness), min(width, thickness))
    return np.asarray(np.sqrt(normal**2 + 3.0 * shear**2))


def column_stress(slenderness: Floats | float, f_y: Floats | float, modulus: float) -> Floats:
    """Critical stress (MPa) of a column: Euler above the transition slenderness, Johnson's parabola below it.

    ``slenderness`` is K L / r. σ = π² E / λ² for λ ≥ sqrt(2 π² E / f_y), else f_y − f_y² λ² / (4 π² E).
    Source: Shigley's Mechanical Engineering Design, columns with central loading (Euler and J. B. Johnson formulas).
    """
    slender = np.asarray(slenderness, dtype=float)
    f_y = np.asarray(f_y, dtype=float)
    euler = math.pi**2 * modulus / np.maximum(slender, 1e-9) ** 2
    johnson = f_y - f_y**2 * slender**2 / (4.0 * math.pi**2 * modulus)
    return np.asarray(np.where(slender >= np.sqrt(2.0 * math.pi**2 * modulus / f_y), euler, johnson))


# effective length factor out of the disc's plane: the crank pin's joint holds one end, nothing but the chain the other
FREE_END = 2.0


def check(c: Context) -> list[Check]:
    """Section at the stop in axial force with bending; strut about both axes."""
    link, targets = c.sizes.link, c.design.targets
    m = c.design.mechanism
    w, t, material = link.width, link.thickness, link.material
    f_y = material.yield_strength(t)
    pull = c.site("swing_link", "chain_pin_eye")
    push = c.site("swing_link", "stop_flank")
    # on the chain pin's side of the stop, where the moment about z is greatest
    bending = pull.force[1] * (m.link_length - m.stop_reach)
    stress = section_stress(pull.force[0], bending, pull.moment[1], pull.moment[0], w, t)
    rows = [
        c.worst_check(
            "swing_link",
            "stop_flank",
            "axial force with bending",
            stress,
            f_y,
            "MPa",
            targets.yield_,
            "N/A + M/W about both axes, torsion by distortion energy, section w t",
            BEAM,
        )
    ]
    shear = np.maximum(np.abs(pull.force[1]), np.abs(push.force[1] + pull.force[1]))
    rows.append(
        c.worst_check(
            "swing_link",
            "stop_flank",
            "shear",
            1.5 * shear / (w * t),
            f_y / math.sqrt(3.0),
            "MPa",
            targets.yield_,
            "1.5 V/A against f_y/√3",
            BEAM,
        )
    )
    push_in = np.maximum(0.0, -pull.force[0])
    for axis, depth, k in (("about the thin side", t, FREE_END), ("in the plane of the disc", w, 1.0)):
        slenderness = k * m.link_length / (depth / math.sqrt(12.0))
        capacity = float(column_stress(slenderness, f_y, material.youngs_modulus)) * w * t
        rows.append(
            c.worst_check(
                "swing_link",
                "between the pins",
                f"strut {axis}",
                push_in,
                capacity,
                "N",
                targets.yield_,
                f"Euler or Johnson, K = {k:g}, K L/r = {slenderness:.0f}",
                "Shigley, columns with central loading",
            )
        )
    if float(np.max(length_of(pull.moment))) > 0.0:
        rows.append(_offset_strut(c, push_in, np.abs(pull.moment[1])))
    return rows


def _offset_strut(c: Context, thrust: Floats, moment: Floats) -> Check:
    """The chain hangs outboard: thrust and its couple, the couple grown by the thrust (secant formula's linear form)."""
    link, m = c.sizes.link, c.design.mechanism
    w, t, material = link.width, link.thickness, link.material
    f_y = material.yield_strength(t)
    slenderness = FREE_END * m.link_length * math.sqrt(12.0) / t
    euler = math.pi**2 * material.youngs_modulus * w * t / slenderness**2
    growth = 1.0 / np.maximum(1.0 - c.design.targets.yield_ * thrust / euler, 1e-6)
    stress = thrust / (w * t) + growth * 6.0 * moment / (w * t**2)
    return c.worst_check(
        "swing_link",
        "between the pins",
        "strut with the chain's offset couple",
        np.where(thrust > 0.0, stress, 0.0),
        f_y,
        "MPa",
        c.design.targets.yield_,
        "N/A + M/W / (1 − target N/N_E)",
        "Shigley, columns with eccentric loading",
    )

"""The swing link from pin to pin: its sections, net at the eyes, and the link as a strut and a thin beam near the hold."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from loads.checks.concentration import pin_loaded_eye
from loads.checks.context import BEAM, Context, rule_note
from loads.checks.link_sections import LinkShape, internal, net_sections, places, section_shear, section_stresses
from loads.checks.stability import FREE_END, column_stress, grown, lateral_moment, overhang_factor
from loads.members import in_link_frame
from loads.records import Check
from parts.design import Floats

__all__ = ["FREE_END", "check", "column_stress", "link_rules", "rectangle_torsion_stress", "section_stress"]

ECCENTRIC = "Shigley, columns with eccentric loading"


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


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule of the link: demand over crank angle (n) and capacity, and where along the link (n) if it asks for that."""

    site: str
    check: str
    demand: Floats
    capacity: float
    unit: str
    method: str
    source: str
    x: Floats | None = None


def link_rules(
    shape: LinkShape, f_y: float, modulus: float, target: float, pull: Floats, couple: Floats, stop: Floats
) -> list[Rule]:
    """Every rule of the link under chain pin, chain's couple and stop (each (3, n) in the link frame, on the link).

    ``target`` is the factor by which loads may grow where bending grows faster than they do. mm, N, N·mm, MPa.
    """
    w, t, length = shape.width, shape.thickness, shape.length
    # on the chain pin's side of the stop, where the moment about z is greatest
    bending = pull[1] * (length - shape.reach)
    thrust = np.maximum(0.0, -pull[0])
    rules = [
        Rule("stop_flank", "axial force with bending", section_stress(pull[0], bending, couple[1], couple[0], w, t), f_y,
             "MPa", "N/A + M/W about both axes, torsion by distortion energy, section w t", BEAM),
        *_sections(shape, f_y, pull, couple, stop),
    ]  # fmt: skip
    k_plane = overhang_factor(shape.reach / length)
    loads = []
    for axis, depth, k in (("about the thin side", t, FREE_END), ("in the plane of the disc", w, k_plane)):
        slenderness = k * length / (depth / math.sqrt(12.0))
        capacity = float(column_stress(slenderness, f_y, modulus)) * w * t
        loads.append((capacity, math.pi**2 * modulus * w * t / slenderness**2))
        how = f"Euler or Johnson, K = {k:.3g}, K L/r = {slenderness:.0f}"
        rules.append(
            Rule(
                "between the pins", f"strut {axis}", thrust, capacity, "N", how, "Shigley, columns with central loading"
            )
        )
    (column, euler_thin), (_, euler_plane) = loads
    out = grown(thrust, euler_thin, target) * 6.0 * np.abs(couple[1]) / (w * t**2)
    if bool(np.any(couple != 0.0)):
        rules.append(
            Rule("between the pins", "strut with the chain's offset couple",
                 np.where(thrust > 0.0, thrust / (w * t) + out, 0.0), f_y, "MPa", "N/A + M/W / (1 − target N/N_E)",
                 ECCENTRIC)
        )  # fmt: skip
    within = grown(thrust, euler_plane, target) * 6.0 * np.abs(bending) / (t * w**2)
    rules.append(
        Rule("between the pins", "strut with bending", np.where(thrust > 0.0, thrust / (w * t) + within + out, 0.0), f_y,
             "MPa", "N/A + M/W / (1 − target N/N_E) about both axes, M at the stop", ECCENTRIC)
    )  # fmt: skip
    if t < w:
        limit = float(lateral_moment(FREE_END * length, w, t, f_y, modulus))
        rules.append(
            Rule("between the pins", "lateral buckling", thrust / column + np.abs(bending) / limit, 1.0, "1",
                 f"N/N_cr + M/M_cr = 1, M_cr of a flat bar {FREE_END * length:.4g} mm between holds against twist",
                 "AISC 360-16 §F11.2; Timoshenko and Gere, Theory of Elastic Stability, chapter 6")
        )  # fmt: skip
    return rules


def _sections(shape: LinkShape, f_y: float, pull: Floats, couple: Floats, stop: Floats) -> list[Rule]:
    """Net sections from pin to pin: the worst about either eye, and the worst of all in shear."""
    x = places(shape)
    cut = net_sections(shape, x)
    inside = internal(shape, x, pull, couple, stop)
    stress, shear = section_stresses(shape, cut, inside), section_shear(cut, inside)
    at_crank = np.flatnonzero(x <= max(shape.crank_hole, shape.sink_diameter) / 2.0 + 1e-9)
    at_chain = np.flatnonzero(x >= shape.length - shape.chain_hole / 2.0 - 1e-9)
    rules = []
    for site, rows in (
        ("crank_pin_eye", at_crank),
        ("chain_pin_eye", at_chain),
        ("between the pins", np.arange(x.size)),
    ):
        k = rows[np.argmax(stress[rows], axis=0)]
        worst = np.take_along_axis(stress, k[None, :], axis=0)[0]
        name = "worst section" if site == "between the pins" else "net section"
        how = "N/A + M/W about both axes, torsion by distortion energy, less hole and sink"
        rules.append(Rule(site, name, worst, f_y, "MPa", how, BEAM, x[k]))
    k = np.argmax(shear, axis=0)
    worst = np.take_along_axis(shear, k[None, :], axis=0)[0]
    rules.append(Rule("stop_flank", "shear", worst, f_y / math.sqrt(3.0), "MPa", "1.5 V/A against f_y/√3", BEAM, x[k]))
    return rules


def link_shape(c: Context) -> LinkShape:
    m, z = c.design.mechanism, c.sizes
    sunk = z.link.counterbore_depth > 0.0
    return LinkShape(
        m.link_length, m.stop_reach, z.link.width, z.link.thickness, z.crank_pin.diameter, z.chain_pin.diameter,
        z.link.counterbore_diameter if sunk else 0.0, z.link.counterbore_depth if sunk else 0.0,
    )  # fmt: skip


def check(c: Context) -> list[Check]:
    """Sections from pin to pin, strut about both axes and with bending, sideways buckling."""
    link, targets = c.sizes.link, c.design.targets
    shape, f_y = link_shape(c), link.material.yield_strength(link.thickness)
    pull, stop = c.site("swing_link", "chain_pin_eye"), c.site("swing_link", "stop_flank")
    rules = link_rules(
        shape,
        f_y,
        link.material.youngs_modulus,
        targets.yield_,
        pull.force,
        pull.moment,
        stop.force + in_link_frame(c.past, c.members.inertia_on_link),
    )
    peaks = {
        "crank_pin_eye": _peak(shape.crank_hole, shape, link.thickness - link.counterbore_depth,
                               -c.site("swing_link", "crank_pin_eye").force[0]),
        "chain_pin_eye": _peak(shape.chain_hole, shape, link.thickness, pull.force[0]),
    }  # fmt: skip
    rows = []
    for rule in rules:
        how = rule.method
        if rule.x is not None:
            i = int(np.argmax(rule.demand))
            how += f"; at {float(rule.x[i]):.4g} mm of {shape.length:.4g} from the crank pin"
        note = peaks.get(rule.site, "") if rule.check != "lateral buckling" else rule_note(link.material)
        rows.append(
            c.worst_check(
                "swing_link", rule.site, rule.check, rule.demand, rule.capacity, rule.unit, targets.yield_, how,
                rule.source, note,
            )
        )  # fmt: skip
    return rows


def _peak(d: float, shape: LinkShape, thickness: float, outward: Floats) -> str:
    """What concentration makes of the pull at an eye's edge, in words: a stress for fatigue, not for the static target."""
    pull = max(0.0, float(np.max(outward)))
    if not 0.25 <= d / shape.width <= 0.65 or pull == 0.0 or thickness <= 0.0:
        return ""
    k_t = float(pin_loaded_eye(d, shape.width))
    peak = k_t * pull / ((shape.width - d) * thickness)
    return (
        f"peak at the hole's edge {peak:.0f} MPa, K_t = {k_t:.3g} on the net section (Heywood, lugs with round ends, from "
        "memory): for fatigue, the static target goes by the nominal stress"
    )

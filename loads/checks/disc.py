"""The crank disc: its bolts to the drive's hub as an elastic group, and its sections between the holes."""

from __future__ import annotations

import math

import numpy as np

from loads.checks.bolts import surface_pressure_limit
from loads.checks.context import BEAM, Context, rule_note
from loads.checks.link import section_stress
from loads.practice import source, value
from loads.records import Check
from parts.design import Floats
from parts.hardware import CapScrew, cap_screw, property_class_source
from parts.making import flipped, turn_of
from parts.outline import Plate
from parts.places import crank_pin, stop_middle

EN_BOLTS = "EN 1993-1-8:2005 table 3.4"
STATIONS = 7  # chords between bore and pin hole


def hub_bolt_forces(force: Floats, moment: Floats, radius: float, angles: Floats) -> tuple[Floats, Floats]:
    """Shear and tension (k, n) of k bolts on one circle, in N, under force (3, n) and moment (3, n) about its middle.

    V_i = F/k + M_z r/(k r²) across r_i, N_i = (M_x y_i − M_y x_i)/(k r²/2): elastic group that turns about its middle,
    faces held together by preload. N, N·mm, mm, rad; k ≥ 3 evenly spaced. Source: statics of an elastic bolt group
    (Shigley, shear joints with eccentric loading), the axis of tilting through the middle.
    """
    k = len(angles)
    x, y = radius * np.cos(angles)[:, None], radius * np.sin(angles)[:, None]
    turning = moment[2] / (k * radius**2)
    shear = np.hypot(force[0] / k - turning * y, force[1] / k + turning * x)
    tension = (moment[0] * y - moment[1] * x) / (k * radius**2 / 2.0)
    return np.asarray(shear), np.asarray(np.maximum(tension, 0.0))


def bolt_yield_use(tension: Floats | float, shear: Floats | float, a_s: float, f_y: float) -> Floats:
    """Use of a bolt's yield strength: sqrt(N² + 3 V²)/(A_s f_y); N, mm², MPa. Source: distortion energy."""
    return np.asarray(np.hypot(tension, math.sqrt(3.0) * np.asarray(shear)) / (a_s * f_y))


def bolt_rupture_use(tension: Floats | float, shear: Floats | float, a_s: float, f_ub: float) -> Floats:
    """Use of a bolt by V/F_v,R + N/(1.4 F_t,R) or N/F_t,R, whichever is more; N, mm², MPa.

    F_v,R = 0.6 f_ub A_s (thread in the shear plane, class 8.8), F_t,R = 0.9 f_ub A_s, γM2 = 1.
    Source: EN 1993-1-8:2005 table 3.4.
    """
    shear_use, tension_use = np.asarray(shear) / (0.6 * f_ub * a_s), np.asarray(tension) / (0.9 * f_ub * a_s)
    return np.asarray(np.maximum(shear_use + tension_use / 1.4, tension_use))


def bolt_bearing(t: float, d: float, d_0: float, e: float, f_u: float, f_ub: float) -> float:
    """F_b,R = k_1 α_b f_u d t in N, γM2 = 1: bolt d in a hole d_0, plate t, e to the nearest edge or hole; mm, MPa.

    α_b = min(e/(3 d_0), f_ub/f_u, 1), k_1 = min(2.8 e/d_0 − 1.7, 2.5), not below 0. Source: EN 1993-1-8:2005 table 3.4,
    e taken for e_1 and e_2 both.
    """
    alpha = min(e / (3.0 * d_0), f_ub / f_u, 1.0)
    return max(0.0, min(2.8 * e / d_0 - 1.7, 2.5)) * alpha * f_u * d * t


def head_pressure(screw: CapScrew, force: Floats | float) -> Floats:
    """Pressure (MPa) under a cap screw's head: F over the ring between head and clearance hole; N, mm. Statics."""
    return np.asarray(np.asarray(force) * 4.0 / (math.pi * (screw.head_diameter**2 - screw.clearance_hole**2)))


def preload(screw: CapScrew) -> float:
    """F_p,C = 0.7 f_ub A_s in N. Source: EN 1993-1-8:2005 §3.6.1(2)."""
    return value("bolts", "preload") * value("bolts", "ultimate") * screw.stress_area


def net_chords(at: Floats, rim: float, t: float, holes: Floats) -> Floats:
    """Net width (mm) of a disc along chords ``at`` mm from its middle: section area over thickness.

    ``holes`` (m, 4): along the normal of the chords, across it, diameter, depth; ``rim`` and ``t`` the disc's diameter
    and thickness. Geometry.
    """
    whole = 2.0 * np.sqrt(np.maximum((rim / 2.0) ** 2 - at**2, 0.0))
    off = at[:, None] - holes[:, 0]
    cut = 2.0 * np.sqrt(np.maximum((holes[:, 2] / 2.0) ** 2 - off**2, 0.0))
    return np.asarray(np.maximum(whole - cut @ (holes[:, 3] / t), 1e-3))


def chord_stress(
    force: Floats, moment: Floats, center: tuple[float, float], hole: float, bore: float, rim: float, t: float,
    holes: Floats,
) -> Floats:  # fmt: skip
    """Greatest equivalent stress (MPa) over the chords between bore and a loaded hole, over crank angle (n).

    Force (3, n) and moment (3, n) act at ``center`` in the middle of the thickness; each chord carries all of it as a
    beam of its net width, whatever the bolts beyond the chord take. ``holes`` (m, 4): x, y, diameter, depth, mm.
    Source: beam theory, as ``section_stress``.
    """
    reach = math.hypot(*center)
    ex, ey = center[0] / reach, center[1] / reach
    at = np.linspace(min(bore / 2.0, reach - hole / 2.0), reach - hole / 2.0, STATIONS)
    turned = np.stack(
        [holes[:, 0] * ex + holes[:, 1] * ey, holes[:, 1] * ex - holes[:, 0] * ey, holes[:, 2], holes[:, 3]]
    )
    widths = net_chords(at, rim, t, turned.T)
    along, across = force[0] * ex + force[1] * ey, force[1] * ex - force[0] * ey
    torsion, bending = moment[0] * ex + moment[1] * ey, moment[1] * ex - moment[0] * ey
    worst = np.zeros_like(along)
    for x, width in zip(at, widths, strict=True):
        stress = section_stress(along, across * (reach - x) + moment[2], bending, torsion, float(width), t)
        worst = np.maximum(worst, stress)
    return np.asarray(worst)


def holes_of(plate: Plate) -> Floats:
    """Holes and counterbores as rows (x, y, diameter, depth); a counterbore counts beyond its hole."""
    rows = [(*h.center, h.diameter, plate.thickness) for h in plate.holes]
    at = {h.center: h.diameter for h in plate.holes}
    for sink in plate.counterbores:
        rows.append((*sink.center, sink.diameter, sink.depth))
        rows.append((*sink.center, at.get(sink.center, 0.0), -sink.depth))
    return np.array(rows)


def least_edge(plate: Plate, name: str, rim: float) -> float:
    """Distance (mm) from the middle of a hole of a disc to the rim or the nearest other hole's edge."""
    x, y = next(h.center for h in plate.holes if h.name == name)
    others = [math.hypot(h.center[0] - x, h.center[1] - y) - h.diameter / 2.0 for h in plate.holes if h.name != name]
    return max(0.0, min(rim / 2.0 - math.hypot(x, y), *others))


def check(c: Context) -> list[Check]:
    """Hub bolts, what they press on, and the sections towards crank pin and stop."""
    disc, targets = c.sizes.disc, c.design.targets
    plate, screw = c.plate("crank_disc"), cap_screw(disc.bolt_thread)
    hub = c.site("crank_disc", "hub_face")
    bolts = [h for h in plate.holes if h.name.startswith("hub_bolt_hole")]
    angles = np.array([math.atan2(h.center[1], h.center[0]) for h in bolts])
    shear, tension = hub_bolt_forces(hub.force, hub.moment, disc.bolt_circle / 2.0, angles)
    f_y, f_u = disc.material.yield_strength(disc.thickness), disc.material.ultimate_strength(disc.thickness)
    f_ub, floor = value("bolts", "ultimate"), disc.thickness - disc.counterbore_depth
    edge = min(least_edge(plate, h.name, disc.outer_diameter) for h in bolts)
    note = rule_note(disc.material)
    bearable = surface_pressure_limit(disc.material, disc.thickness)
    share = bearable / f_u
    head = head_pressure(screw, preload(screw) + np.max(tension, axis=0))
    rows = [
        c.worst_check(
            "crank_disc", "hub_face", "hub bolt yield",
            np.max(bolt_yield_use(tension, shear, screw.stress_area, screw.yield_strength), axis=0), 1.0, "1",
            targets.yield_, "sqrt(N² + 3 V²) against A_s f_y, elastic bolt group", property_class_source(),
        ),
        c.worst_check(
            "crank_disc", "hub_face", "hub bolt rupture",
            np.max(bolt_rupture_use(tension, shear, screw.stress_area, f_ub), axis=0), 1.0, "1",
            targets.ultimate, "V/F_v,R + N/(1.4 F_t,R) = 1", f"{EN_BOLTS}; {property_class_source()}",
        ),
        c.worst_check(
            "crank_disc", "hub_bolt_hole", "bearing of the hub bolts", np.max(shear, axis=0),
            bolt_bearing(floor, screw.diameter, disc.bolt_hole, edge, f_u, f_ub), "N", targets.ultimate,
            "k_1 α_b f_u d t under the head's sink", EN_BOLTS, note,
        ),
        c.worst_check(
            "crank_disc", "hub_bolt_sink", "pressure under the bolt heads", head, bearable, "MPa", 1.0,
            f"preload 0.7 f_ub A_s and tension on the ring under the head, p_G = {share:.2g} R_m",
            f"{source('bolt_seat')}; {source('bolts')}",
        ),
    ]  # fmt: skip
    holes = holes_of(plate)
    turn, stop = turn_of(c.design), c.sizes.stop
    for name, center, d in (
        ("crank_pin_hole", flipped(crank_pin(c.design), turn), c.sizes.crank_pin.diameter),
        ("stop_seat", flipped(stop_middle(c.design, c.sizes), turn), max(stop.diameter, stop.length, stop.width)),
    ):
        site = c.site("crank_disc", name)
        stress = chord_stress(site.force, site.moment, center, d, disc.bore, disc.outer_diameter, disc.thickness, holes)
        rows.append(
            c.worst_check(
                "crank_disc", name, "section between the holes", stress, f_y, "MPa", targets.yield_,
                "N/A + M/W about both axes with torsion, net chords between the hole and the bore", BEAM, note,
            )
        )  # fmt: skip
    return rows

"""Eyes: net tension, tear-out and bearing around the pin holes, with the real edge distances of the outlines."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from loads.checks import bth, oblique
from loads.checks.context import AISC_D5, EN_PINS, Context, length_of, rule_note
from loads.records import Check
from parts.contact_lengths import chain_pin_in_link, crank_pin_in_link, pin_in_disc
from parts.design import Floats, Material
from parts.fits import covers, interference
from parts.shape import edge_distance

CHAINS_OWN_PIN = "H8/h9"  # what the chain's maker holds its pins to; common practice, no source
LEAST_A = 1.33  # of b_e, that a must be at least: AISC 360-16 §D5.2; b_e counts up to what meets it


def effective_width(t: Floats | float, b: Floats | float) -> Floats:
    """b_e = 2t + 16 mm, not more than the width b beside the hole, measured across the force. All in mm.

    Source: AISC 360-16 §D5.1(a), equation D5-1 (0.63 in in its US form).
    """
    return np.minimum(2.0 * np.asarray(t) + 16.0, b)


def tensile_rupture(t: Floats | float, b_e: Floats | float, f_u: Floats | float) -> Floats:
    """P_n = F_u (2 t b_e) in N; mm and MPa. Source: AISC 360-16 equation D5-1."""
    return np.asarray(2.0 * np.asarray(t) * b_e * f_u)


def shear_rupture(t: Floats | float, a: Floats | float, d: Floats | float, f_u: Floats | float) -> Floats:
    """P_n = 0.6 F_u A_sf in N, A_sf = 2t(a + d/2): a from the hole's edge to the part's along the force, d the pin's.

    mm and MPa. Source: AISC 360-16 equation D5-2.
    """
    return np.asarray(0.6 * np.asarray(f_u) * 2.0 * np.asarray(t) * (np.asarray(a) + np.asarray(d) / 2.0))


def static_bearing(t: Floats | float, d: Floats | float, f_y: Floats | float) -> Floats:
    """R_n = 1.8 F_y t d in N, for joints that do not turn; mm and MPa. Source: AISC 360-16 equation J7-1."""
    return np.asarray(1.8 * np.asarray(f_y) * np.asarray(t) * np.asarray(d))


def bearing(t: Floats | float, d: Floats | float, f_y: Floats | float) -> Floats:
    """F_b,R = 1.5 t d f_y in N, f_y the lower of pin and plate; mm and MPa.

    Source: EN 1993-1-8:2005 table 3.10, γM0 set to 1.
    """
    return np.asarray(1.5 * np.asarray(t) * np.asarray(d) * np.asarray(f_y))


def turning_bearing(t: Floats | float, d: Floats | float, f_y: Floats | float) -> Floats:
    """F_b,R,ser = 0.6 t d f_y in N for a pin that is to be replaceable; mm and MPa.

    Source: EN 1993-1-8:2005 table 3.10, γM6,ser = 1. Used here for every joint that turns under load.
    """
    return np.asarray(0.6 * np.asarray(t) * np.asarray(d) * np.asarray(f_y))


def gross_yield(t: Floats | float, width: Floats | float, f_y: Floats | float) -> Floats:
    """P_n = F_y A_g in N; mm and MPa. Source: AISC 360-16 §D5.1(c) with equation D2-1."""
    return np.asarray(np.asarray(f_y) * np.asarray(t) * np.asarray(width))


def end_pressed_force(force: Floats, moment: Floats, t: Floats | float) -> Floats:
    """Force (N) that, spread evenly over ``t`` mm, presses as hard as force and couple do at the worse end of the hole.

    A stiff pin in a hole of length t presses with F/t in the middle and F/t ± 6 (z × M)/t² at its ends; F and M (3, n) are
    the pin's force on the part and its moment about the middle of the hole. ``t`` of shape (...) gives (..., n); where
    nothing touches a load is infinite. Source: statics of a stiff pin, as for a pin held at one end in Roloff/Matek,
    Maschinenelemente (from memory).
    """
    length = np.asarray(t, dtype=float)[..., None]
    touches = length > 0.0
    k = 6.0 / np.where(touches, length, 1.0)
    worse = np.maximum(
        np.hypot(force[0] - k * moment[1], force[1] + k * moment[0]),
        np.hypot(force[0] + k * moment[1], force[1] - k * moment[0]),
    )
    return np.where(touches, worse, np.where(worse > 0.0, np.inf, 0.0))


@dataclass(frozen=True, slots=True)
class Eye:
    """One eye: where its hole is, what it is made of, and the direction in which the rest of the part lies (rad)."""

    part: str
    plate: str
    hole: str
    thickness: float  # that carries
    touch: float  # over which pin and hole really touch
    pin_diameter: float
    play: float  # most by which the hole is larger than the pin
    pin_yield: float
    material: Material
    plate_thickness: float  # which the material's strength goes by
    body: float | None  # direction from the hole to the rest of the part, in the part frame; None: along the force
    turns: bool
    oblique: bool = False  # a lug proper, whose force turns across it


@dataclass(frozen=True, slots=True)
class Around:
    """Material from a hole's edge (mm): along the force, across the eye's axis, and along it away from the body."""

    along: Floats
    side: Floats | float
    ahead: Floats | float


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule's capacity (N) of an eye against the pull along its axis, or against the whole force."""

    check: str
    of_pull: bool
    by_yield: bool
    capacity: Floats
    method: str
    source: str


def eye_rules(t: float, d: float, play: float, f_y: float, f_u: float, around: Around) -> list[Rule]:
    """AISC §D5 and BTH-1 §3-3.3 side by side, but for bearing: carrying thickness t, pin d and play in mm, MPa."""
    hole = d + play
    side, ahead = np.asarray(around.side, dtype=float), np.asarray(around.ahead, dtype=float)
    b_e = effective_width(t, np.minimum(side, ahead / LEAST_A))
    c_r, b_eff = bth.clearance_factor(d, hole), bth.effective_width(side, t, hole, f_y, f_u)
    loose = f"C_r = {float(c_r):.4g}"
    rows = [
        ("net tension", True, False, tensile_rupture(t, b_e, f_u), "F_u 2 t b_e, b_e = 2t + 16 mm ≤ b, a/1.33", AISC_D5),
        ("net tension, BTH-1", True, False, bth.tensile_strength(c_r, f_u, t, b_eff),
         f"C_r F_u 2 t b_eff, b_eff ≤ 4t, 0.6 b_e F_u/F_y √(D_h/b_e), N_d = 1; {loose}", bth.BTH),
        ("single-plane fracture, BTH-1", True, False,
         bth.single_plane_strength(c_r, f_u, t, ahead + hole / 2.0, hole, side),
         f"C_r F_u [1.13 (R − D_h/2) + 0.92 b_e/(1 + b_e/D_h)] t, N_d = 1; {loose}", bth.BTH),
        ("gross yield", True, True, gross_yield(t, 2.0 * side + d, f_y), "F_y t (2b + d)", AISC_D5),
        ("tear-out", False, False, shear_rupture(t, around.along, d, f_u), "0.6 F_u 2t(a + d/2), a along the force",
         AISC_D5),
        ("tear-out, BTH-1", False, False, bth.shear_strength(f_u, t, around.along, d, hole),
         "0.70 F_u 2t [a + D_p/2 (1 − cos φ)], φ = 55° D_p/D_h, a along the force, N_d = 1", bth.BTH),
    ]  # fmt: skip
    return [Rule(*row) for row in rows]


def bearing_rules(t: Floats | float, d: Floats | float, f_y: Floats | float, turns: bool) -> list[Rule]:
    """Bearing by EN 1993-1-8 and by BTH-1, and by AISC where the joint does not turn. Touching length t, pin d (mm)."""
    if turns:
        return [
            Rule("bearing", False, True, turning_bearing(t, d, f_y), "0.6 t d f_y, a joint that turns", EN_PINS),
            Rule("bearing, BTH-1", False, True, bth.turning_bearing_strength(f_y, t, d),
                 "0.63 F_y D_p t, a joint that turns under load, N_d = 1", bth.BTH),
        ]  # fmt: skip
    return [
        Rule("bearing", False, True, bearing(t, d, f_y), "1.5 t d f_y, a joint that does not turn", EN_PINS),
        Rule("bearing, BTH-1", False, True, bth.bearing_strength(f_y, t, d), "1.25 F_y D_p t, N_d = 1", bth.BTH),
        Rule("bearing, AISC", False, True, static_bearing(t, d, f_y), "1.8 F_y t d", "AISC 360-16 §J7"),
    ]


def eye_oblique_use(
    t: float, d: float, play: float, f_y: float, f_u: float, around: Around, pull: Floats, across: Floats
) -> Floats:
    """Melcon and Hoblit's use of an eye over crank angle, its axial capacity the least that the other rules give."""
    straight = Around(np.asarray(around.ahead, dtype=float), around.side, around.ahead)
    ultimate = np.min([r.capacity for r in eye_rules(t, d, play, f_y, f_u, straight) if not r.by_yield], axis=0)
    return oblique.oblique_use(
        pull,
        across,
        np.maximum(oblique.axial_yield(ultimate, d, t, f_y, f_u), 1e-9),
        np.maximum(oblique.transverse_yield(around.side, around.ahead, d, t, f_y), 1e-9),
    )


def eye_checks(c: Context, eye: Eye, force: Floats, moment: Floats) -> list[Check]:
    """All rules for an eye under forces and couples (3, n) of the pin on it, in the part frame.

    Tear-out and bearing take the whole force in its own direction, with the edge distance that the outline has there;
    tension takes the part of it that points away from the rest of the part, across which the section is cut. Where it
    points towards the rest of the part nothing of the eye is pulled: bearing and, for its part across, the oblique load.
    """
    size = length_of(force)
    along = np.arctan2(force[1], force[0])
    outward = along if eye.body is None else np.asarray(eye.body + math.pi)
    pull = size if eye.body is None else np.maximum(0.0, size * np.cos(along - outward))
    around = _around(c, eye, along, outward)
    f_y, f_u = eye.material.yield_strength(eye.plate_thickness), eye.material.ultimate_strength(eye.plate_thickness)
    t, d, targets, note = eye.thickness, eye.pin_diameter, c.design.targets, rule_note(eye.material)
    rows = []
    for rule in eye_rules(t, d, eye.play, f_y, f_u, around):
        demand, target = pull if rule.of_pull else size, targets.yield_ if rule.by_yield else targets.ultimate
        rows.append(
            c.worst_check(
                eye.part, eye.hole, rule.check, demand, rule.capacity, "N", target, rule.method, rule.source, note
            )
        )
    if eye.oblique:
        use = eye_oblique_use(t, d, eye.play, f_y, f_u, around, pull, size * np.sin(along - outward))
        how = "R_a^1.6 + R_tr^1.6 = 1 on yield, to 90° off the axis; beyond, R_a = 0 and the axial part is bearing's"
        rows.append(
            c.worst_check(
                eye.part, eye.hole, "oblique load", use, 1.0, "1", targets.yield_, how, oblique.MELCON_HOBLIT, note
            )
        )
    pressed = end_pressed_force(force, moment, eye.touch)
    where = f"; t = {eye.touch:.4g} mm that touch"
    if float(np.max(length_of(moment))) > 0.0:
        where += ", force at the harder pressed end, |F ± 6 (z × M)/t|"
    for rule in bearing_rules(eye.touch, d, min(f_y, eye.pin_yield), eye.turns):
        rows.append(
            c.worst_check(
                eye.part, eye.hole, rule.check, pressed, rule.capacity, "N", targets.yield_, rule.method + where,
                rule.source, note,
            )
        )  # fmt: skip
    return rows


def _around(c: Context, eye: Eye, along: Floats, outward: Floats) -> Around:
    """What the plate's outline and other holes leave around an eye, all directions met in one go.

    A direction that stays the same all the way is met once, and its room is one element long.
    """
    plate = c.plate(eye.plate)
    hole = next(h for h in plate.holes if h.name == eye.hole)
    force, out = _once(along), _once(outward)
    directions = np.round(np.concatenate([force, out + math.pi / 2.0, out - math.pi / 2.0, out]), 12)
    met = edge_distance(plate, hole.center, directions, holes=True, skip=(eye.hole,)) - hole.diameter / 2.0
    # a ray that meets no edge starts outside the part: a hole there has no material round it
    room = np.where(np.isfinite(met), np.maximum(met, 0.0), 0.0)
    n, k = force.size, out.size
    left, right, ahead = room[n : n + k], room[n + k : n + 2 * k], room[n + 2 * k :]
    return Around(room[:n], np.minimum(left, right), ahead)


def _once(angles: Floats) -> Floats:
    several = np.atleast_1d(angles)
    return several[:1] if np.all(several == several[0]) else several


def largest_play(fit: str, nominal: float) -> float:
    """Most by which a hole is larger than its pin (mm) in a fit such as "H8/f7"; 0 in a press fit or beyond the tables."""
    return max(0.0, -interference(fit, nominal)[0]) if covers(nominal) else 0.0


def check(c: Context) -> list[Check]:
    """Link at both ends, chain end at both ends, disc at the crank pin."""
    z = c.sizes
    crank_pin, chain_pin, link, end = z.crank_pin, z.chain_pin, z.link, z.chain_end
    crank_yield = crank_pin.material.yield_strength(crank_pin.diameter)
    chain_yield = chain_pin.material.yield_strength(chain_pin.diameter)
    in_sink = max(0.0, link.thickness - link.counterbore_depth)
    along_x = np.zeros_like(c.members.torque)
    tension = np.stack([length_of(c.members.chain_on_pin), along_x, along_x])
    meat = end.width - 2.0 * sum(b - a for a, b in end.slots)
    none = np.zeros_like(tension)
    headed = c.stack.crank_pin_headed
    in_link = crank_pin_in_link(crank_pin.diameter, link.thickness, link.counterbore_depth, headed)
    at_chain = chain_pin_in_link(chain_pin.diameter, link.thickness)
    in_disc = pin_in_disc(crank_pin.diameter, z.disc.thickness)
    end_yield = end.material.yield_strength(end.width)
    disc_hole, crank_eye = c.site("crank_disc", "crank_pin_hole"), c.site("swing_link", "crank_pin_eye")
    chain_eye = c.site("swing_link", "chain_pin_eye")
    t = z.disc.thickness
    fits, crank_d, chain_d = z.fits, crank_pin.diameter, chain_pin.diameter
    middle = chain_pin.middle_diameter
    held, runs = largest_play(fits.crank_pin_disc, crank_d), largest_play(fits.crank_pin_link, crank_d)
    pressed, hangs = largest_play(fits.chain_pin_link, chain_d), largest_play(fits.chain_end, middle)
    own = largest_play(CHAINS_OWN_PIN, end.pin_diameter)
    disc, steel = z.disc.material, link.material
    plate, far_hole = c.design.far_end.part, c.design.far_end.far_hole
    # fmt: off
    eyes = [
        (Eye("crank_disc", "crank_disc", "crank_pin_hole", t, in_disc, crank_d, held, crank_yield, disc, t, math.pi, False),
         disc_hole.force, disc_hole.moment),
        (Eye("swing_link", "swing_link", "crank_pin_eye", in_sink, in_link, crank_d, runs, crank_yield, steel,
             link.thickness, 0.0, True, oblique=True),
         crank_eye.force, crank_eye.moment),
        (Eye("swing_link", "swing_link", "chain_pin_eye", link.thickness, at_chain, chain_d, pressed, chain_yield, steel,
             link.thickness, math.pi, False, oblique=True),
         chain_eye.force, chain_eye.moment),
        (Eye(plate, plate, "chain_pin_eye", end.width, end.width, middle, hangs, chain_yield, end.material,
             end.width, 0.0, True),
         -tension, none),
        (Eye(plate, plate, far_hole, meat, meat, end.pin_diameter, own, end_yield, end.material, end.width,
             math.pi, False),
         tension, none),
    ]
    # fmt: on
    return [row for eye, force, moment in eyes for row in eye_checks(c, eye, force, moment)] + _stop_seat(c)


def _stop_seat(c: Context) -> list[Check]:
    """A post in the disc: bearing with the moment that it brings."""
    stop, disc = c.sizes.stop, c.sizes.disc
    if stop.style != "post":
        return []
    site = c.site("crank_disc", "stop_seat")
    t = pin_in_disc(stop.diameter, disc.thickness)
    weaker = min(disc.material.yield_strength(disc.thickness), stop.material.yield_strength(stop.diameter))
    how = f"1.5 t d f_y, t = {t:.4g} mm that touch, force at the harder pressed end, |F ± 6 (z × M)/t|"
    return [
        c.worst_check(
            "crank_disc",
            "stop_seat",
            "bearing",
            end_pressed_force(site.force, site.moment, t),
            bearing(t, stop.diameter, weaker),
            "N",
            c.design.targets.yield_,
            how,
            EN_PINS,
            rule_note(disc.material),
        )
    ]

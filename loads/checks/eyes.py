"""Eyes: net tension, tear-out and bearing around the pin holes, with the real edge distances of the outlines."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from loads.checks.context import AISC_D5, EN_PINS, Context, length_of, rule_note
from loads.records import Check
from parts.design import Floats, Material
from parts.shape import edge_distance


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


@dataclass(frozen=True, slots=True)
class Eye:
    """One eye: where its hole is, what it is made of, and the direction in which the rest of the part lies (rad)."""

    part: str
    plate: str
    hole: str
    thickness: float  # that bears
    pin_diameter: float
    pin_yield: float
    material: Material
    plate_thickness: float  # which the material's strength goes by
    body: float | None  # direction from the hole to the rest of the part, in the part frame; None: along the force
    turns: bool


def eye_checks(c: Context, eye: Eye, force: Floats) -> list[Check]:
    """Net tension, tear-out and bearing of an eye under forces (3, n) of the pin on it, in the part frame.

    Tear-out and bearing take the whole force in its own direction, with the edge distance that the outline has there;
    net tension takes the part of it that points away from the rest of the part, across which the section is cut.
    """
    plate = c.plate(eye.plate)
    hole = next(h for h in plate.holes if h.name == eye.hole)
    size = length_of(force)
    along = np.arctan2(force[1], force[0])
    radius = hole.diameter / 2.0
    f_y, f_u = eye.material.yield_strength(eye.plate_thickness), eye.material.ultimate_strength(eye.plate_thickness)
    edge = edge_distance(plate, hole.center, along, holes=True, skip=(eye.hole,)) - radius
    tear = shear_rupture(eye.thickness, np.maximum(edge, 0.0), eye.pin_diameter, f_u)
    if eye.body is None:
        outward, pull = along, size
    else:
        outward = np.full_like(along, eye.body + math.pi)
        pull = np.maximum(0.0, size * np.cos(along - outward))
    sides = [
        edge_distance(plate, hole.center, outward + s * math.pi / 2.0, holes=True, skip=(eye.hole,)) - radius
        for s in (1.0, -1.0)
    ]
    b_e = effective_width(eye.thickness, np.maximum(np.minimum(*sides), 0.0))
    net = tensile_rupture(eye.thickness, b_e, f_u)
    weaker = min(f_y, eye.pin_yield)
    t, targets = eye.thickness, c.design.targets
    note = rule_note(eye.material)
    if eye.turns:
        press, how = turning_bearing(t, eye.pin_diameter, weaker), "0.6 t d f_y, a joint that turns"
    else:
        press, how = bearing(t, eye.pin_diameter, weaker), "1.5 t d f_y, a joint that does not turn"
    return [
        c.worst_check(
            eye.part,
            eye.hole,
            "net tension",
            pull,
            net,
            "N",
            targets.ultimate,
            "F_u 2 t b_e, b_e = 2t + 16 mm ≤ b",
            AISC_D5,
            note,
        ),
        c.worst_check(
            eye.part,
            eye.hole,
            "tear-out",
            size,
            tear,
            "N",
            targets.ultimate,
            "0.6 F_u 2t(a + d/2), a along the force",
            AISC_D5,
            note,
        ),
        c.worst_check(eye.part, eye.hole, "bearing", size, press, "N", targets.yield_, how, EN_PINS, note),
    ]


def check(c: Context) -> list[Check]:
    """Link at both ends, chain end at both ends, disc at the crank pin."""
    z = c.sizes
    crank_pin, chain_pin, link, end = z.crank_pin, z.chain_pin, z.link, z.chain_end
    crank_yield = crank_pin.material.yield_strength(crank_pin.diameter)
    chain_yield = chain_pin.material.yield_strength(chain_pin.diameter)
    in_sink = link.thickness - link.counterbore_depth
    along_x = np.zeros_like(c.members.torque)
    tension = np.stack([length_of(c.members.chain_on_pin), along_x, along_x])
    meat = end.width - 2.0 * sum(b - a for a, b in end.slots)
    eyes = [
        (
            Eye(
                "crank_disc",
                "crank_disc",
                "crank_pin_hole",
                z.disc.thickness,
                crank_pin.diameter,
                crank_yield,
                z.disc.material,
                z.disc.thickness,
                math.pi,
                False,
            ),
            c.site("crank_disc", "crank_pin_hole").force,
        ),
        (
            Eye(
                "swing_link",
                "swing_link",
                "crank_pin_eye",
                in_sink,
                crank_pin.diameter,
                crank_yield,
                link.material,
                link.thickness,
                0.0,
                True,
            ),
            c.site("swing_link", "crank_pin_eye").force,
        ),
        (
            Eye(
                "swing_link",
                "swing_link",
                "chain_pin_eye",
                link.thickness,
                chain_pin.diameter,
                chain_yield,
                link.material,
                link.thickness,
                math.pi,
                False,
            ),
            c.site("swing_link", "chain_pin_eye").force,
        ),
        (
            Eye(
                "chain_end",
                "chain_end",
                "chain_pin_eye",
                end.width,
                chain_pin.middle_diameter,
                chain_yield,
                end.material,
                end.width,
                0.0,
                True,
            ),
            -tension,
        ),
        (
            Eye(
                "chain_end",
                "chain_end",
                "chain_hole",
                meat,
                end.pin_diameter,
                end.material.yield_strength(end.width),
                end.material,
                end.width,
                math.pi,
                False,
            ),
            tension,
        ),
    ]
    return [row for eye, force in eyes for row in eye_checks(c, eye, force)]

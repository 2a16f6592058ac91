"""The stop: a pressed post in line contact, or a bolted and dowelled block; shear, bending and contact of each."""

from __future__ import annotations

import math

import numpy as np

from loads.checks.context import BEAM, EN_PINS, Context, length_of
from loads.checks.pins import first_yield_bending_capacity, pin_shear_capacity, shear_and_bending_factor
from loads.records import Check
from parts.contact_lengths import stop_on_link
from parts.design import Floats, Material
from parts.hardware import cap_screw, property_class_source
from parts.stop_layout import HOLES_AT

HERTZ = "Johnson, Contact Mechanics, §4.2 and §6.1"


def contact_modulus(one: Material, other: Material) -> float:
    """E* in MPa: 1/E* = (1 − ν₁²)/E₁ + (1 − ν₂²)/E₂. Source: Johnson, Contact Mechanics, equation 4.23."""
    parts = ((1.0 - m.poissons_ratio**2) / m.youngs_modulus for m in (one, other))
    return 1.0 / sum(parts)


def line_contact_pressure(
    force: Floats | float, length: Floats | float, radius: Floats | float, modulus: float
) -> Floats:
    """p0 = sqrt(F E* / (π L R)) in MPa of a cylinder of radius R on a flat; N, mm, MPa.

    Source: Johnson, Contact Mechanics, equation 4.45.
    """
    return np.asarray(np.sqrt(np.asarray(force) * modulus / (math.pi * np.asarray(length) * np.asarray(radius))))


def line_contact_yield_force(length: Floats | float, radius: Floats | float, modulus: float, f_y: float) -> Floats:
    """Force (N) at which a line contact first yields below its surface: p0 = 1.67 f_y (Tresca).

    Source: Johnson, Contact Mechanics, equation 6.4: p0 = 3.3 k = 1.67 Y.
    """
    return np.asarray(math.pi * np.asarray(length) * np.asarray(radius) * (1.67 * f_y) ** 2 / modulus)


def contact_depth(c: Context) -> float:
    """Length (mm, along z) over which stop and link touch."""
    stop = c.sizes.stop
    return stop_on_link(stop.style, stop.diameter, stop.height, c.sizes.link.thickness, c.stack.plate_gap)


def bolt_share(width: float) -> float:
    """Tension of the bolt nearer the link over the tipping moment (1/mm), for a block ``width`` mm across the link.

    The block tips about its edge away from the link; its two bolts stand at HOLES_AT of the width either side of its
    middle and pull in proportion to their distance from that edge. Statics of a rigid block.
    """
    far, near = (0.5 - HOLES_AT) * width, (0.5 + HOLES_AT) * width
    return near / (near**2 + far**2)


def check(c: Context) -> list[Check]:
    """Shear, bending and contact of the stop as it is made."""
    push = length_of(c.site("stop", "contact").force)
    return _post(c, push) if c.sizes.stop.style == "post" else _block(c, push)


def _post(c: Context, push: Floats) -> list[Check]:
    stop, link, targets = c.sizes.stop, c.sizes.link, c.design.targets
    d, material = stop.diameter, stop.material
    f_u, f_y = material.ultimate_strength(d), material.yield_strength(d)
    shear_capacity, bending_capacity = float(pin_shear_capacity(d, f_u)), float(first_yield_bending_capacity(d, f_y))
    moment = push * c.stack.pin_root_arm
    both = 1.0 / shear_and_bending_factor(push / shear_capacity, moment / bending_capacity)
    weaker = min(f_y, link.material.yield_strength(link.thickness))
    contact = line_contact_yield_force(contact_depth(c), d / 2.0, contact_modulus(material, link.material), weaker)
    return [
        c.worst_check(
            "stop",
            "root",
            "post shear",
            push,
            shear_capacity,
            "N",
            targets.ultimate,
            "0.6 A f_u, one shear plane",
            EN_PINS,
        ),
        c.worst_check(
            "stop",
            "root",
            "post bending",
            moment,
            bending_capacity,
            "N·mm",
            targets.yield_,
            "W_el f_y, post held in the disc",
            BEAM,
        ),
        c.worst_check(
            "stop",
            "root",
            "post shear with bending",
            both,
            1.0,
            "1",
            targets.yield_,
            "(M/M_R)² + (F/F_R)² = 1, all loads growing together",
            EN_PINS,
        ),
        c.worst_check(
            "stop",
            "contact",
            "contact",
            push,
            contact,
            "N",
            targets.yield_,
            "line contact, first yield at p0 = 1.67 f_y",
            HERTZ,
        ),
    ]


def _block(c: Context, push: Floats) -> list[Check]:
    stop, link, targets = c.sizes.stop, c.sizes.link, c.design.targets
    material = stop.material
    f_u, f_y = material.ultimate_strength(stop.width), material.yield_strength(stop.width)
    weaker = min(f_y, link.material.yield_strength(link.thickness))
    moment = push * c.stack.pin_root_arm
    bolt = cap_screw(stop.bolt_thread)
    lift_off = moment * bolt_share(stop.width)
    return [
        c.worst_check(
            "stop",
            "contact",
            "contact",
            push,
            stop.length * contact_depth(c) * weaker,
            "N",
            targets.yield_,
            "bearing over the area, length × depth × f_y",
            BEAM,
        ),
        c.worst_check(
            "stop",
            "root",
            "dowel shear",
            push,
            2.0 * float(pin_shear_capacity(stop.dowel_diameter, f_u)),
            "N",
            targets.ultimate,
            "two dowels, 0.6 A f_u each, no stronger than the block",
            EN_PINS,
        ),
        c.worst_check(
            "stop",
            "root",
            "block shear",
            1.5 * push / (stop.length * stop.width),
            f_y / math.sqrt(3.0),
            "MPa",
            targets.yield_,
            "1.5 V/A against f_y/√3",
            BEAM,
        ),
        c.worst_check(
            "stop",
            "root",
            "block bending",
            moment,
            stop.length * stop.width**2 / 6.0 * f_y,
            "N·mm",
            targets.yield_,
            "W f_y of the block's foot",
            BEAM,
        ),
        c.worst_check(
            "stop",
            "root",
            "bolt tension",
            lift_off,
            bolt.stress_area * bolt.yield_strength,
            "N",
            targets.yield_,
            "the bolt nearer the link, block tipping about its far edge",
            property_class_source(),
        ),
    ]

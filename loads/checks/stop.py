"""The stop: a pressed post in line contact, or a bolted and dowelled block; what of each bears, bends, shears and holds."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from loads.checks.bolts import punching_capacity, stripping_capacity, surface_pressure_limit
from loads.checks.context import BEAM, COMMON, EN_PINS, Context, length_of, rule_note
from loads.checks.disc import EN_BOLTS, head_pressure, preload
from loads.checks.eyes import bearing
from loads.checks.pins import first_yield_bending_capacity, pin_checks, pin_shear_capacity
from loads.practice import source, value
from loads.records import Check
from parts.contact_lengths import stop_on_link
from parts.design import Floats, Material
from parts.hardening import is_case, state
from parts.hardware import cap_screw, property_class_source
from parts.sizes import StopSizes
from parts.stop_layout import HOLES_AT, bolt_engagement, floor_under_head

T_STUB = "EN 1993-1-8:2005 tables 6.2 and 3.4, from memory"
CASE_OVER_SHEAR = 2.0  # case depth over that of the greatest shear; common practice, no source
NO_DEPTH = "the depth of the link's case is not given: it is not checked"
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


def contact_half_width(force: Floats | float, length: Floats | float, radius: Floats | float, modulus: float) -> Floats:
    """b = sqrt(4 F R / (π L E*)) in mm, half the width over which a cylinder of radius R touches a flat; N, mm, MPa.

    Source: Johnson, Contact Mechanics, equation 4.43.
    """
    return np.asarray(np.sqrt(4.0 * np.asarray(force) * np.asarray(radius) / (math.pi * np.asarray(length) * modulus)))


def greatest_shear_depth(half_width: Floats | float) -> Floats:
    """z = 0.786 b in mm below the surface of a line contact: there its shear stress is greatest, 0.30 p0.

    Source: Johnson, Contact Mechanics, §4.2.
    """
    return np.asarray(0.786 * np.asarray(half_width))


def least_case_depth(force: Floats | float, length: Floats | float, radius: Floats | float, modulus: float) -> Floats:
    """Depth (mm) that a hardened case has at least: 2 z. Source: common practice for the 2, Johnson for z."""
    return np.asarray(CASE_OVER_SHEAR * greatest_shear_depth(contact_half_width(force, length, radius, modulus)))


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


def t_stub_capacity(
    length: float, width: float, height: float, f_y: float, a_s: float, f_ub: float
) -> tuple[float, str]:
    """Pull (N) that one bolt of a block and the block about it bear as half a T-stub, and the mode that governs.

    F_T,1-2 = M_pl/m, M_pl = 0.25 l_eff t² f_y; F_T,3 = F_t,R = 0.9 f_ub A_s; partial factors 1. The flange is the block:
    t its height, m from the bolt to the face that the link pushes, l_eff half the length, at most 2πm. Nothing keeps that
    face from turning, so there is no second hinge and no prying force beyond the bolt: that edge lifts. What the far edge
    pries is in the pull, as the block tips about it. mm, mm², MPa. Source: EN 1993-1-8:2005 table 6.2, the column without
    prying forces, halved; l_eff table 6.4; F_t,R table 3.4 (from memory).
    """
    m = (0.5 - HOLES_AT) * width
    hinge = 0.25 * min(length / 2.0, 2.0 * math.pi * m) * height**2 * f_y / m
    bolt = 0.9 * f_ub * a_s
    return (bolt, "mode 3, the bolt") if bolt <= hinge else (hinge, "mode 1-2, the block yields")


def swing_inertia(length: float, width: float, thickness: float, density: float, at_end: float) -> float:
    """Inertia (kg·mm²) of a link about its crank pin: bar with two round ends, and ``at_end`` kg on the chain pin.

    mm, kg/m³; holes are not taken off. Parallel axes, each round end at its own centre of mass.
    """
    rho = density * 1e-9
    bar = rho * width * thickness * length
    round_end = rho * thickness * math.pi * width**2 / 8.0
    off = 2.0 * width / (3.0 * math.pi)
    far = round_end * ((length + off) ** 2 + width**2 / 8.0 - off**2)
    return bar * (length**2 / 3.0 + width**2 / 12.0) + round_end * width**2 / 8.0 + far + at_end * length**2


def blow_force(inertia: float, speed: float, stiffness: float) -> float:
    """N = sqrt(2 E k), E = I ω²/2: force (N) at which a stop of k N/mm has taken up a link's energy; kg·mm², rad/s.

    All of the energy goes into the stop alone, so the force is on the safe side. Source: energy, Shigley, impact.
    """
    energy = 0.5e-3 * inertia * speed**2  # N·mm
    return math.sqrt(2.0 * energy * stiffness)


def root_stiffness(arm: float, second_moment: float, area: float, shear_share: float, material: Material) -> float:
    """Stiffness (N/mm) of a short cantilever loaded ``arm`` mm from its root: 1/(a³/(3 E I) + a/(κ G A)).

    mm, mm⁴, mm²; κ 0.9 for a round section, 5/6 for a rectangle. Source: beam theory with shear (Timoshenko).
    """
    shear = material.youngs_modulus / (2.0 * (1.0 + material.poissons_ratio))
    bent = arm**3 / (3.0 * material.youngs_modulus * second_moment)
    return 1.0 / (bent + arm / (shear_share * shear * area))


def check(c: Context) -> list[Check]:
    """Shear, bending and contact of the stop as it is made, and the blow of the catch where a speed is given."""
    push = length_of(c.site("stop", "contact").force)
    rows = _post(c, push) if c.sizes.stop.style == "post" else _block(c, push)
    speed = c.design.moving.disc_speed if c.design.moving is not None else None
    if not speed:
        silent = "the blow of the catch is not covered: the design gives no [moving] disc_speed"
        return [
            replace(row, note=f"{row.note}; {silent}" if row.note else silent) if row.check == "contact" else row
            for row in rows
        ]
    return [*rows, _blow(c, push, speed)]


def _surface(c: Context) -> float:
    """Yield strength (MPa) of the weaker of the two surfaces where a post meets the link's flank."""
    stop, link = c.sizes.stop, c.sizes.link
    return min(stop.material.surface_strength(stop.diameter), link.material.surface_strength(link.thickness))


def _blow(c: Context, push: Floats, speed: float) -> Check:
    """The link is brought to rest on the stop at the catch, on top of what then presses it on."""
    stop, link, end, pin = c.sizes.stop, c.sizes.link, c.sizes.chain_end, c.sizes.chain_pin
    m, s, arm = c.design.mechanism, c.past.winding, c.stack.pin_root_arm
    hung = end.material.density * end.width * end.height * (end.length + end.height)
    hung += pin.material.density * math.pi / 4.0 * pin.middle_diameter**2 * c.stack.chain_plane_width
    inertia = swing_inertia(
        m.link_length, link.width, link.thickness, link.material.density, hung * 1e-9 / len(c.stack.sides)
    )
    free = np.flatnonzero(s.crank_angle < float(c.past.figures.events.catch) - 1e-6)
    turning = np.gradient(s.link_direction[free], s.crank_angle[free])[-2] if free.size > 2 else 0.0
    f_y = stop.material.yield_strength(stop.diameter or stop.width)
    if stop.style == "post":
        d = stop.diameter
        k = root_stiffness(arm, math.pi * d**4 / 64.0, math.pi * d**2 / 4.0, 0.9, stop.material)
        contact = line_contact_yield_force(
            contact_depth(c), d / 2.0, contact_modulus(stop.material, link.material), _surface(c)
        )
        bends = float(first_yield_bending_capacity(d, f_y)) / arm
    else:
        k = root_stiffness(arm, stop.length * stop.width**3 / 12.0, stop.length * stop.width, 5.0 / 6.0, stop.material)
        weaker = min(f_y, link.material.yield_strength(link.thickness))
        contact = np.asarray(stop.length * contact_depth(c) * weaker)
        bends = stop.length * stop.width**2 / 6.0 * f_y / arm
    blow = blow_force(inertia, speed * abs(1.0 - float(turning)), k)
    caught = int(np.flatnonzero(s.seated)[0]) if bool(np.any(s.seated)) else len(push) - 1
    demand = np.zeros_like(push)
    demand[caught] = push[caught] + blow
    return c.worst_check(
        "stop", "contact", "blow of the catch", demand, min(float(contact), bends), "N", c.design.targets.yield_,
        f"push at the catch and sqrt(2 E k), E = I ω²/2, I = {inertia:.4g} kg·mm², k = {k:.4g} N/mm; "
        "against the lower of contact and bending",
        "Shigley, impact; beam theory", "all of the link's energy in the stop's own bending and shear",
    )  # fmt: skip


def _post(c: Context, push: Floats) -> list[Check]:
    stop, link = c.sizes.stop, c.sizes.link
    d, material = stop.diameter, stop.material
    modulus = contact_modulus(material, link.material)
    return [
        *pin_checks(
            c, "stop", "root", d, material, push, push * c.stack.pin_root_arm, True, what="post", holder="in the disc"
        ),
        c.worst_check(
            "stop", "contact", "contact", push,
            line_contact_yield_force(contact_depth(c), d / 2.0, modulus, _surface(c)), "N", c.design.targets.yield_,
            "line contact, first yield at p0 = 1.67 f_y" + _surface_words(material, link.material), HERTZ,
            "" if not is_case(link.material) or link.material.case_depth is not None else NO_DEPTH,
        ),
        *_cases(c, push, modulus),
    ]  # fmt: skip


def _surface_words(stop: Material, link: Material) -> str:
    """Which hardened surfaces a contact's strength goes by; empty where neither is hardened."""
    words = [f"{name} {state(m)}" for name, m in (("post", stop), ("link", link)) if m.surface_yield is not None]
    return f", the weaker of the two surfaces; {', '.join(words)}" if words else ""


def _cases(c: Context, push: Floats, modulus: float) -> list[Check]:
    """A case reaches deeper than where the contact shears most, on the post and on the link's flank."""
    wanted = least_case_depth(push, contact_depth(c), c.sizes.stop.diameter / 2.0, modulus)
    how = f"{CASE_OVER_SHEAR:g} × 0.786 b, b = sqrt(4 F R/(π L E*)), against the case's depth"
    return [
        c.worst_check(
            part, site, "case depth", wanted, material.case_depth, "mm", 1.0, how,
            f"Johnson, Contact Mechanics, §4.2; the {CASE_OVER_SHEAR:g} {COMMON}",
        )
        for part, site, material in (
            ("stop", "contact", c.sizes.stop.material),
            ("swing_link", "stop_flank", c.sizes.link.material),
        )
        if material.case_depth is not None
    ]  # fmt: skip


def _block(c: Context, push: Floats) -> list[Check]:
    stop, link, targets = c.sizes.stop, c.sizes.link, c.design.targets
    material = stop.material
    f_u, f_y = material.ultimate_strength(stop.width), material.yield_strength(stop.width)
    weaker = min(f_y, link.material.yield_strength(link.thickness))
    surfaces = (material.surface_yield, link.material.surface_yield)
    hard = "" if surfaces == (None, None) else "; f_y of what lies under the hardened face"
    moment = push * c.stack.pin_root_arm
    disc, bolt = c.sizes.disc, cap_screw(stop.bolt_thread)
    lift_off = moment * bolt_share(stop.width)
    pried, mode = t_stub_capacity(
        stop.length, stop.width, stop.height, f_y, bolt.stress_area, value("bolts", "ultimate")
    )
    return [
        c.worst_check(
            "stop",
            "contact",
            "contact",
            push,
            stop.length * contact_depth(c) * weaker,
            "N",
            targets.yield_,
            "bearing over the area, length × depth × f_y" + hard,
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
        c.worst_check(
            "stop", "root", "prying on the bolts", lift_off, pried, "N", targets.ultimate,
            f"half a T-stub, least of M_pl/m and 0.9 f_ub A_s: {mode}; the far edge's push is in the pull",
            f"{T_STUB}; {source('bolts')}",
        ),
        c.worst_check(
            "stop", "root", "stays down under its bolts", lift_off, preload(bolt), "N", 1.0,
            "pull of the bolt nearer the link, with the leverage of tipping, against the preload 0.7 f_ub A_s",
            f"statics; {source('bolts')}",
        ),
        c.worst_check(
            "stop", "dowels", "bearing of the dowels", push / 2.0, bearing(stop.height, stop.dowel_diameter, f_y), "N",
            targets.yield_, "two dowels in the block, 1.5 t d f_y each", EN_PINS,
        ),
        c.worst_check(
            "crank_disc", "stop_dowel_hole_1", "bearing of the dowels", push / 2.0,
            bearing(disc.thickness, stop.dowel_diameter, min(f_y, disc.material.yield_strength(disc.thickness))), "N",
            targets.yield_, "two dowels in the disc, 1.5 t d f_y each", EN_PINS,
        ),
        *_seat_and_thread(c, lift_off),
    ]  # fmt: skip


def stripping(stop: StopSizes, f_u: float) -> tuple[float, str]:
    """Pull (N) at which the thread of one of a block's bolts strips, and whose it is; ``f_u`` (MPa) is the block's."""
    wall = (0.5 - HOLES_AT) * min(stop.length, stop.width)
    return stripping_capacity(cap_screw(stop.bolt_thread), bolt_engagement(stop), wall, f_u)


def _seat_and_thread(c: Context, lift_off: Floats) -> list[Check]:
    """What holds the block's bolts at their ends: the disc under the heads, the thread in the block."""
    stop, disc, bolt = c.sizes.stop, c.sizes.disc, cap_screw(c.sizes.stop.bolt_thread)
    floor, pull = floor_under_head(disc.thickness, stop.bolt_thread), preload(bolt) + lift_off
    strips, whose = stripping(stop, stop.material.ultimate_strength(stop.width))
    bearable = surface_pressure_limit(disc.material, disc.thickness)
    share = bearable / disc.material.ultimate_strength(disc.thickness)
    engaged = f"C_1 C_2,3 0.6 R_m A_S over {bolt_engagement(stop):.3g} mm of thread, {whose}"
    return [
        c.worst_check(
            "crank_disc", "stop_bolt_sink", "pressure under the bolt heads", head_pressure(bolt, pull),
            bearable, "MPa", 1.0,
            f"preload 0.7 f_ub A_s and pull of the bolt nearer the link on the ring under the head, p_G = {share:.2g} R_m",
            f"{source('bolt_seat')}; {source('bolts')}", rule_note(disc.material),
        ),
        c.worst_check(
            "crank_disc", "stop_bolt_sink", "punching under the bolt heads", lift_off,
            punching_capacity(bolt.head_diameter, floor, disc.material.ultimate_strength(disc.thickness)), "N",
            c.design.targets.ultimate,
            f"0.6 π d_m t_p f_u, t_p = {floor:.3g} mm under the heads; the preload is clamped there and does not shear it",
            EN_BOLTS, rule_note(disc.material),
        ),
        c.worst_check(
            "stop", "root", "thread stripping", pull, strips, "N", 1.0,
            f"preload 0.7 f_ub A_s and pull of the bolt nearer the link, against {engaged}",
            f"{source('thread')}; {source('bolts')}",
        ),
        c.shape_check(
            "stop", "root", "bolt breaks before its thread strips", value("bolts", "ultimate") * bolt.stress_area,
            strips, "N", f"f_ub A_s against {engaged}", f"{source('thread')}; {source('bolts')}",
        ),
    ]  # fmt: skip

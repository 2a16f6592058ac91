"""The main shaft, always overhung: reactions, stress, key, lean of the disc; in a twin stack two discs out of step."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from loads.checks.context import BEAM, COMMON, Context, length_of
from loads.linkage import State
from loads.practice import source, value
from loads.records import Check
from parts.design import Floats, Material, Mechanism
from parts.fits import covers, interference
from parts.sizes import LinkSizes, ShaftSizes


@dataclass(frozen=True, slots=True)
class ShaftLoad:
    """One shaft over crank angle: reactions of both bearings (2, n) in N, and at the first bearing bending, N·mm (n)."""

    first: Floats
    second: Floats
    bending: Floats


def shaft_load(force: Floats, moment: Floats, overhang: float, spacing: float) -> ShaftLoad:
    """Statics of a shaft on two bearings under force (3, n) and couple (3, n) at the disc's back.

    M = M_disc + a × F at the first bearing, a mm behind the disc; R_2 = M/b, R_1 = F + M/b with b between the bearings.
    N, N·mm, mm. Source: statics.
    """
    gx, gy = moment[1] + overhang * force[0], -moment[0] + overhang * force[1]
    second = np.stack([gx, gy]) / spacing
    return ShaftLoad(first=-(force[:2] + second), second=second, bending=np.hypot(gx, gy))


def shaft_stress(bending: Floats | float, torque: Floats | float, d: Floats | float) -> Floats:
    """σ' = (16/(π d³)) sqrt(4 M² + 3 T²) in MPa of a solid round shaft; N·mm, mm.

    Source: distortion energy; Shigley, shaft design for stress, with no concentration.
    """
    both = np.hypot(2.0 * np.asarray(bending), math.sqrt(3.0) * np.asarray(torque))
    return np.asarray(16.0 / math.pi * both / np.asarray(d) ** 3)


def lean(
    force: Floats | float, moment: Floats | float, d: float, overhang: float, spacing: float, modulus: float
) -> Floats:
    """Slope (rad) of an overhung shaft at the disc's back under force F and couple M there, in one plane.

    (M + a F) b/(3 E I) + (M a + F a²/2)/(E I); N, N·mm, mm, MPa; shear left out. Source: beam theory.
    """
    force, moment = np.asarray(force), np.asarray(moment)
    ei = modulus * math.pi * d**4 / 64.0
    return np.asarray(
        ((moment + overhang * force) * spacing / 3.0 + moment * overhang + force * overhang**2 / 2.0) / ei
    )


def sag(
    force: Floats | float, moment: Floats | float, d: float, overhang: float, spacing: float, modulus: float
) -> Floats:
    """Deflection (mm) at the disc's back: (M + a F) a b/(3 E I) + (M a²/2 + F a³/3)/(E I), as ``lean``."""
    force, moment = np.asarray(force), np.asarray(moment)
    ei = modulus * math.pi * d**4 / 64.0
    bent = moment * overhang**2 / 2.0 + force * overhang**3 / 3.0
    return np.asarray(((moment + overhang * force) * overhang * spacing / 3.0 + bent) / ei)


def key_shear_stress(torque: Floats, d: float, width: float, length: float) -> Floats:
    """τ = 2 T/(d b l) in MPa; N·mm, mm. Source: Shigley, keys and pins."""
    return np.asarray(2.0 * torque / (d * width * length))


def key_pressure(torque: Floats, d: float, proud: float, length: float) -> Floats:
    """p = 2 T/(d t l) in MPa on the side of a key that bears over the height t; N·mm, mm. Source: DIN 6892 method C."""
    return np.asarray(2.0 * torque / (d * proud * length))


def pair_stiffness(k_r: float, ei: float, span: float) -> float:
    """Stiffness (N/mm) against moving the ends of a beam apart, each end held by a rotational spring.

    K = (12 E I/s³)/(1 + 6 E I/(s k_r)); k_r in N·mm/rad, E I in N·mm², s in mm. Source: beam theory (slope-deflection).
    """
    return 12.0 * ei / span**3 / (1.0 + 6.0 * ei / (span * k_r))


def link_tilt_stiffness(link: LinkSizes, length: float) -> float:
    """Stiffness (N·mm/rad) of a link's end against tilting: the larger of bending about its thin side and of twisting.

    E w t³/(12 L), held by the crank pin, free to move along the pins; G J/L, J = w t³/3 (1 − 0.63 t/w). mm, MPa.
    Source: beam theory; Roark for J, from memory.
    """
    w, t, m = max(link.width, link.thickness), min(link.width, link.thickness), link.material
    shear = m.youngs_modulus / (2.0 * (1.0 + m.poissons_ratio))
    bending = m.youngs_modulus * link.width * link.thickness**3 / 12.0
    return max(bending, shear * w * t**3 / 3.0 * (1.0 - 0.63 * t / w)) / length


def phase_arm(s: State, tension: Floats, m: Mechanism) -> Floats:
    """How far (mm a radian, n) the link's end moves with its disc: the chain's arm while it swings, |OB| once seated."""
    x = m.crank_radius * np.cos(s.crank_angle) + m.link_length * np.cos(s.link_direction)
    y = m.crank_radius * np.sin(s.crank_angle) + m.link_length * np.sin(s.link_direction)
    free = np.abs(s.line.arm)
    return np.asarray(np.where(s.seated, np.hypot(x, y), np.where(tension > 0.0, free, m.crank_radius)))


def phase_force(stiffness: float, arm: Floats, phase: float, play: float) -> Floats:
    """What one side pulls more than the other, halved (N): K (ρ δ − play), not below 0; mm, rad, N/mm.

    Model: the chain pin sits tightly in both links, so discs that stand δ apart tilt it; links and pin resist as a beam
    on two rotational springs once the running clearance is taken up. Crank pins, discs and shafts count as rigid, so the
    force is on the safe side. No published source.
    """
    return np.asarray(stiffness * np.maximum(arm * phase - play, 0.0))


@dataclass(frozen=True, slots=True)
class Pairing:
    """The chain pin between two links: stiffness (N/mm) and play (mm) against being tilted."""

    stiffness: float
    play: float


def pairing(
    link: LinkSizes, length: float, middle: float, pin: Material, span: float, crank: float, fit: str, journal: float
) -> Pairing:
    """Stiffness and play from link, chain pin (its middle ``middle`` mm thick), span between the links' middles.

    Play: the least clearance of the crank pin ``crank`` in the link by its fit, over the journal's length, times the span.
    """
    ei = pin.youngs_modulus * math.pi * middle**4 / 64.0
    clearance = max(0.0, -interference(fit, crank)[1]) if covers(crank) else 0.0
    return Pairing(pair_stiffness(link_tilt_stiffness(link, length), ei, span), clearance / journal * span)


def one_side(whole: Floats, extra: Floats) -> Floats:
    """Pull of the side that leads (N): half of the whole and the force of being out of step."""
    return np.asarray(whole / 2.0 + extra)


def torque_of(c: Context) -> tuple[Floats, Floats]:
    """Torque of one shaft (N·mm, n), and the extra pull of the leading side (N, n); the latter 0 in a single stack."""
    shared = np.abs(c.members.torque_side)
    shaft = c.running.shaft
    if shaft.phase_tolerance <= 0.0 or len(c.stack.sides) < 2:
        return shared, np.zeros_like(shared)
    z, m = c.sizes, c.design.mechanism
    whole = length_of(c.members.chain_on_pin)
    pair = pairing(
        z.link, m.link_length, z.chain_pin.middle_diameter, z.chain_pin.material, 2.0 * c.stack.link_middle,
        z.crank_pin.diameter, z.fits.crank_pin_link, z.link.thickness,
    )  # fmt: skip
    arm = phase_arm(c.past.state, whole, m)
    extra = phase_force(pair.stiffness, arm, shaft.phase_tolerance, pair.play)
    return np.maximum(shared, np.abs(c.members.torque) / 2.0 + extra * arm), extra


def check(c: Context) -> list[Check]:
    """Stress at the first bearing, the key or the flange's bolts (with the disc), lean and sag, discs out of step."""
    shaft, targets = c.running.shaft, c.design.targets
    hub = c.site("main_bearing", "hub_face")
    load = shaft_load(hub.force, hub.moment, shaft.overhang, shaft.bearing_spacing)
    torque, extra = torque_of(c)
    d, f_y = shaft.diameter, shaft.material.yield_strength(shaft.diameter)
    force, tilt = length_of(hub.force), length_of(hub.moment[:2])
    sizes = (d, shaft.overhang, shaft.bearing_spacing, shaft.material.youngs_modulus)
    rim = c.sizes.disc.outer_diameter / 2.0
    note = f"one of {len(c.stack.sides)} shafts; without the drive's own mesh force"
    rows = [
        c.worst_check(
            "main_shaft", "first_bearing", "bending with torsion", shaft_stress(load.bending, torque, d), f_y, "MPa",
            targets.yield_, "(16/πd³) sqrt(4M² + 3T²) at the first bearing", "Shigley, shaft design for stress", note,
        ),
        c.worst_check(
            "main_shaft", "disc_seat", "lean of the disc", lean(force, tilt, *sizes) * rim,
            value("shaft", "play") * c.sizes.plate_gap, "mm", 1.0,
            "slope of the shaft at the disc times the rim's radius, against half the running gap",
            f"{BEAM}; the limit is {COMMON}",
        ),
        c.worst_check(
            "main_shaft", "disc_seat", "deflection", sag(force, tilt, *sizes),
            value("shaft", "play") * c.sizes.plate_gap, "mm", 1.0,
            "deflection of the shaft at the disc's back, against half the running gap",
            f"{BEAM}; the limit is {COMMON}",
        ),
    ]  # fmt: skip
    if shaft.drive == "key":
        rows += _key(c, shaft, torque, f_y)
    if len(c.stack.sides) > 1:
        whole = length_of(c.members.chain_on_pin)
        rows.append(
            c.worst_check(
                "main_shaft", "phase", "discs out of step", one_side(whole, extra),
                c.stack.load_share * float(np.max(whole)), "N", 1.0,
                f"half the pull and K(ρδ − play), δ = {math.degrees(shaft.phase_tolerance):.2f}°, against load_share "
                "of the largest pull",
                "chain pin as a beam tilted between the links, no published source",
            )
        )  # fmt: skip
    return rows


def _key(c: Context, shaft: ShaftSizes, torque: Floats, f_y: float) -> list[Check]:
    own = value("key", "yield")
    size = f"key {shaft.key_width:g} × {shaft.key_height:g} × {shaft.key_length:g}"
    return [
        c.worst_check(
            "main_shaft", "key", "key shear", key_shear_stress(torque, shaft.diameter, shaft.key_width, shaft.key_length),
            own / math.sqrt(3.0), "MPa", c.design.targets.yield_, f"{size}, 2T/(d b l) against f_y/√3",
            f"Shigley, keys and pins; {source('key')}",
        ),
        c.worst_check(
            "main_shaft", "key", "key pressure",
            key_pressure(torque, shaft.diameter, shaft.key_height - shaft.key_seat, shaft.key_length),
            min(own, f_y), "MPa", c.design.targets.yield_, f"{size}, 2T/(d (h − t_1) l) against f_y of the weaker",
            f"DIN 6892 method C; {source('key')}",
        ),
    ]  # fmt: skip

"""Press joints: what the fit's limits do to pin and plate, and whether they hold. How a pin bears is with the eyes."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from loads.checks.context import COMMON, Context, length_of
from loads.practice import source, value
from loads.records import Check
from parts.contact_lengths import chain_pin_in_link, pin_in_disc
from parts.design import Floats, Material
from parts.fits import covers, interference
from parts.outline import Plate

LAME = "Lamé, thick-walled cylinders (Shigley, press and shrink fits)"


def fit_pressure(
    delta: Floats | float, d: Floats | float, d_o: Floats | float, outer: Material, inner: Material
) -> Floats:
    """Pressure p (MPa) between a solid pin and a ring for a diametral interference ``delta`` ≥ 0; none for clearance.

    p = δ / (d [((D² + d²)/(D² − d²) + ν_o)/E_o + (1 − ν_i)/E_i]); d the joint's, D the ring's outer diameter > d, all mm.
    Elastic, plane stress, both bodies as long as each other. Source: Lamé; Shigley's Mechanical Engineering Design,
    press and shrink fits.
    """
    d, d_o = np.asarray(d, dtype=float), np.asarray(d_o, dtype=float)
    ring = ((d_o**2 + d**2) / (d_o**2 - d**2) + outer.poissons_ratio) / outer.youngs_modulus
    pin = (1.0 - inner.poissons_ratio) / inner.youngs_modulus
    return np.asarray(np.maximum(delta, 0.0) / (d * (ring + pin)))


def hoop_stress(p: Floats | float, d: Floats | float, d_o: Floats | float) -> Floats:
    """σ_t = p (D² + d²)/(D² − d²) in MPa at the bore of a ring; mm, MPa. Source: Lamé."""
    d, d_o = np.asarray(d, dtype=float), np.asarray(d_o, dtype=float)
    return np.asarray(p * (d_o**2 + d**2) / (d_o**2 - d**2))


def ring_stress(p: Floats | float, d: Floats | float, d_o: Floats | float) -> Floats:
    """Equivalent stress (MPa, distortion energy) at the bore of a ring under inner pressure p; mm, MPa.

    σ_t from ``hoop_stress``, σ_r = −p, no stress along the axis. Source: Lamé with distortion energy.
    """
    hoop = hoop_stress(p, d, d_o)
    return np.asarray(np.sqrt(hoop**2 + hoop * p + np.asarray(p) ** 2))


def holding_force(p: Floats | float, d: float, length: float, mu: float) -> Floats:
    """F = μ p π d l in N along the axis of a press joint; mm, MPa. Source: Shigley, press and shrink fits."""
    return np.asarray(mu * np.asarray(p) * math.pi * d * length)


def effective_interference(delta: float) -> float:
    """Diametral interference (mm) left when the peaks of both surfaces are pressed flat.

    δ − 2·0.4 (Rz_hole + Rz_shaft). Source: DIN 7190-1:2017; the roughness values are common practice.
    """
    lost = 2.0 * value("press", "smoothing") * (value("press", "rz_hole") + value("press", "rz_shaft")) / 1000.0
    return delta - lost


def seat_grip(force: Floats, moment: Floats, length: Floats | float) -> Floats:
    """Sum (N) of what a pin presses against both sides of its bore under a pressure linear along it.

    ∫|q| dz with q = F/s + 12 M z/s³: F where M ≤ F s/6, else 3 M/s + F² s/(12 M). Statics.
    """
    moment = np.asarray(moment, dtype=float)
    both = 3.0 * moment / length + np.asarray(force) ** 2 * length / (12.0 * np.maximum(moment, 1e-300))
    return np.asarray(np.where(moment <= np.asarray(force) * length / 6.0, force, both))


def ring_diameter(plate: Plate, hole: str, rim: float) -> float:
    """Diameter (mm) of the largest ring round a hole that stays within the disc's rim and clear of all other holes."""
    own = next(h for h in plate.holes if h.name == hole)
    x, y = own.center
    free = rim / 2.0 - math.hypot(x, y)
    others = [(h.name, h.center, h.diameter) for h in plate.holes]
    others += [(sink.name, sink.center, sink.diameter) for sink in plate.counterbores]
    for name, (ox, oy), diameter in others:
        if name != hole:
            free = min(free, math.hypot(ox - x, oy - y) - diameter / 2.0)
    return max(2.0 * free, 1.02 * own.diameter)


def fit_stresses(fit: str, d: float, d_o: Floats | float, outer: Material, inner: Material) -> tuple[Floats, Floats]:
    """Equivalent stress (MPa) of plate and pin at the fit's largest interference; in a solid pin it is the pressure."""
    p = fit_pressure(effective_interference(interference(fit, d)[1]), d, d_o, outer, inner)
    return ring_stress(p, d, d_o), p


@dataclass(frozen=True, slots=True)
class PressJoint:
    """A pin pressed into a plate: whose sites the rows go to, sizes, and the load of the pin on its seat."""

    plate: str
    hole: str
    pin: str
    seat: str
    fit: str
    diameter: float
    length: float
    ring: float
    outer: Material
    inner: Material
    force: Floats  # across the pin, N
    moment: Floats  # about the middle of the seat, N·mm
    torque: Floats  # about the pin's axis, N·mm


def check(c: Context) -> list[Check]:
    """Crank pin in the disc, post in the disc, chain pin in the link of a single stack; dowels by their fit alone."""
    z = c.sizes
    disc = c.plate("crank_disc")
    rim = z.disc.outer_diameter
    none = np.zeros_like(c.members.torque)
    load = c.site("crank_disc", "crank_pin_hole")
    force = length_of(load.force)
    rub = force * c.design.friction.crank_pin * z.crank_pin.diameter / 2.0
    rows = joint_checks(
        c,
        PressJoint(
            "crank_disc", "crank_pin_hole", "crank_pin", "root", z.fits.crank_pin_disc, z.crank_pin.diameter,
            pin_in_disc(z.crank_pin.diameter, z.disc.thickness),
            ring_diameter(disc, "crank_pin_hole", rim), z.disc.material, z.crank_pin.material,
            force, length_of(load.moment), rub,
        ),
    )  # fmt: skip
    if z.stop.style == "post":
        load = c.site("crank_disc", "stop_seat")
        rows += joint_checks(
            c,
            PressJoint(
                "crank_disc", "stop_seat", "stop", "root", z.fits.stop_disc, z.stop.diameter,
                pin_in_disc(z.stop.diameter, z.disc.thickness),
                ring_diameter(disc, "stop_seat", rim), z.disc.material, z.stop.material,
                length_of(load.force), length_of(load.moment), none,
            ),
        )  # fmt: skip
    else:
        d = z.stop.dowel_diameter
        ring = ring_diameter(disc, "stop_dowel_hole_1", rim)
        rows += fit_checks(
            c, "crank_disc", "stop_dowel_hole_1", "stop", "dowels", z.fits.dowel, d, ring, z.disc.material,
            z.stop.material, light=True,
        )  # fmt: skip
    if c.stack.chain_pin_support == "cantilever":
        side = length_of(c.members.chain_side)
        rub = length_of(c.members.chain_on_pin) * c.design.friction.chain_pin * z.chain_pin.middle_diameter / 2.0
        rows += joint_checks(
            c,
            PressJoint(
                "swing_link", "chain_pin_eye", "chain_pin", "link_seat", z.fits.chain_pin_link, z.chain_pin.diameter,
                chain_pin_in_link(z.chain_pin.diameter, z.link.thickness), z.link.width, z.link.material,
                z.chain_pin.material, side, length_of(c.members.chain_couple), rub,
            ),
        )  # fmt: skip
    return rows + running_checks(c)


def running_checks(c: Context) -> list[Check]:
    """The joints that turn under load have room for grease at the least clearance of their fit."""
    z = c.sizes
    rows = []
    for part, site, fit, d in (
        ("swing_link", "crank_pin_eye", z.fits.crank_pin_link, z.crank_pin.diameter),
        (c.design.far_end.part, "chain_pin_eye", z.fits.chain_end, z.chain_pin.middle_diameter),
    ):
        if covers(d):
            rows.append(
                c.shape_check(
                    part, site, "room to run", 0.001, max(0.0, -interference(fit, d)[1]), "mm",
                    f"{fit}: clearance even of the thickest pin in the smallest hole", COMMON,
                )
            )  # fmt: skip
    return rows


def fit_checks(
    c: Context, plate: str, hole: str, pin: str, seat: str, fit: str, d: float, ring: float,
    outer: Material, inner: Material, light: bool = False,
) -> list[Check]:  # fmt: skip
    """Whether a fit can be put together: listed, tight, and elastic at its largest interference.

    ``light``: a pin that only locates, for which a transition fit will do.
    """
    if not covers(d):
        return [
            c.shape_check(
                plate, hole, "size listed for fits", d, 250.0, "mm", "ISO 286-2 classes as listed here", "ISO 286-2"
            )
        ]
    least, most = interference(fit, d)
    in_plate, in_pin = fit_stresses(fit, d, ring, outer, inner)
    target = 1.0
    how = f"{fit}, interference {least * 1000:.0f} to {most * 1000:.0f} µm, less what smoothing takes"
    return [
        c.shape_check(
            plate, hole, "interference", 0.001, max(0.0, most if light else (least + most) / 2.0), "mm",
            f"{fit}: {'not a clearance fit' if light else 'a press joint is tight at the middle of its limits'}", COMMON,
        ),
        Check(
            plate, hole, "fit stress", "", None, float(in_plate), outer.yield_strength(d), "MPa", target,
            f"{how}; hoop with radial stress against f_y, ring of {ring:.1f} mm", LAME,
        ),
        Check(
            pin, seat, "fit stress", "", None, float(in_pin), inner.yield_strength(d), "MPa", target,
            f"{how}; pressure on a solid pin against f_y", LAME,
        ),
    ]  # fmt: skip


def joint_checks(c: Context, joint: PressJoint) -> list[Check]:
    """The fit by itself, then what it holds."""
    d, s = joint.diameter, joint.length
    rows = fit_checks(
        c, joint.plate, joint.hole, joint.pin, joint.seat, joint.fit, d, joint.ring, joint.outer, joint.inner
    )
    pressure = 0.0
    if covers(d):
        least = effective_interference(interference(joint.fit, d)[0])
        pressure = float(fit_pressure(least, d, joint.ring, joint.outer, joint.inner))
    mu, target = value("press", "friction"), value("press", "holding_target")
    # pressed all round by the fit or on both sides by the load, whichever is more
    grip = np.maximum(float(holding_force(pressure, d, s, 1.0)), seat_grip(joint.force, joint.moment, s))
    held = f"μ = {mu:g} on the larger of fit (least, {pressure:.0f} MPa) and load"
    rows += [
        c.worst_check(
            joint.pin, joint.seat, "holds along its axis", value("press", "side_thrust") * joint.force, mu * grip, "N",
            target, f"{held}; thrust {value('press', 'side_thrust'):g} of the load", source("press"),
        ),
    ]  # fmt: skip
    if float(np.max(joint.torque)) > 0.0:
        rows.append(
            c.worst_check(
                joint.pin, joint.seat, "holds against turning", joint.torque, mu * grip * d / 2.0, "N·mm", target,
                f"{held}; against the friction of what turns on the pin", source("press"),
            )
        )  # fmt: skip
    return rows

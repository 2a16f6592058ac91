"""The scene of one design's release: inertias from outlines and densities, stiffness of the line, what was assumed."""

from __future__ import annotations

import math

import numpy as np

from loads.checks.context import Context
from loads.checks.stop import root_stiffness
from loads.inertia import Inertia, inertia_of
from loads.lines import FarLine, SheaveRun
from loads.linkage import state
from loads.release.lift_off import lets_go
from loads.release.scene import Scene
from loads.release.spring_end import spring_end
from parts.design import Assumed, Moving
from parts.far_ends.base import PRACTICE
from parts.far_ends.tie import Tie
from parts.records import Defaults
from parts.shape import mass_properties

TONNE = 1e-3  # a kilogram
DAMPING = 0.05  # of the line's critical damping; common practice, no source
BUMPER_DAMPING = 0.15  # of a rubber bumper's; common practice, no source
STOP_DAMPING = 0.1  # of the link on its stop; common practice, no source
SHEAVE_FILL = 0.5  # of a solid steel disc as wide as the sheave's hub; common practice, no source
STEEL = 7.85e-6  # kg/mm³


def made_mass(c: Context, key: str) -> float:
    """Mass (kg) of all made parts of a key."""
    return sum(part.quantity * mass_properties(part).mass for part in c.parts if part.key == key)


def swinging(c: Context, line_mass: float) -> Inertia:
    """What turns, with the plate on the chain pin and ``line_mass`` (kg) of the line at the link's tip."""
    end = c.design.far_end.part
    share = 0.5 if end == "tie" else 1.0  # of a tie the other half goes with the output
    tip = line_mass + share * made_mass(c, end)
    return inertia_of(c.parts, c.design.drive).with_tip(tip, c.design.mechanism.link_length)


def line_length(c: Context) -> float:
    """Length (mm) of what stretches when the link has straightened, as far as it is known."""
    run = c.past.machine.far
    if not isinstance(run, SheaveRun):
        return c.sizes.chain_end.length
    m = c.design.mechanism
    straight = float(run.distance) - m.crank_radius - m.link_length - c.sizes.chain_end.length
    return straight + float(run.pitch_radius * run.start_wrap) + (c.design.far_end.run_to_spring or 0.0)


def line_stiffness(c: Context, defaults: Defaults, given: float | None) -> float:
    """N/mm of the line; without sheave mount and frame where it is not given, so on the side of a hard snatch."""
    far, length = c.design.far_end, max(line_length(c), 1.0)
    if isinstance(far, Tie):
        end = c.sizes.chain_end
        value = end.material.youngs_modulus * end.width * end.height / length
        why = "E A over the length of the tie, what carries it taken as rigid"
    else:
        ratio, source = far.stretch
        value = ratio * far.min_tensile_strength / length
        why = f"{ratio:g} times the {far.noun}'s strength over {length:.0f} mm, its mount taken as rigid; {source}"
    return defaults.take("moving.line_stiffness", given, value, "stiffness", why)


def sheave_mass(c: Context, defaults: Defaults, given: float | None) -> float:
    """Effective mass (kg) of the sheave at its pitch radius: half of a disc's mass."""
    run, pin = c.past.machine.far, c.running.sheave_pin
    if not isinstance(run, SheaveRun) or pin is None:
        return 0.0
    solid = math.pi * float(run.pitch_radius) ** 2 * pin.hub * STEEL * SHEAVE_FILL
    why = f"{SHEAVE_FILL:g} of a solid steel disc of its pitch radius; {PRACTICE}"
    return defaults.take("moving.sheave_mass", given, solid, "mass", why) / 2.0


def own_speed(c: Context) -> float | None:
    """Speed (rad/s) of the disc when the link lets go that the spring alone gives it from the null on, with friction.

    None where it gives none: the release comes first, or friction holds it.
    """
    at = c.past.figures.events
    null, m = float(at.null), c.past.machine
    rubs = float(m.friction_crank_pin + m.friction_chain_pin)
    seat = float(m.seat_angle)
    release = lets_go(_plain(m.far), float(m.crank_radius), float(m.link_length), seat, float(at.release), rubs)
    if null >= release:
        return None
    theta = np.linspace(null, release, 201)
    s = state(m, theta, at.catch)
    forward = -s.torque - s.friction_torque
    work = float(np.trapezoid(np.maximum(forward, 0.0), theta))
    own, design = swinging(c, 0.0), c.design.mechanism
    inertia = own.seated(design.crank_radius, design.seat_angle) + (own.drive or 0.0)
    return math.sqrt(2.0 * work / (inertia * TONNE)) if work > 0.0 and inertia > 0.0 else None


def scene(c: Context, moving: Moving, speed: float, back: float, defaults: Defaults) -> Scene:
    """The release of a design whose disc turns at ``speed`` (rad/s); ``back``: λ at which the stop's back is met."""
    far, m = c.design.far_end, c.past.machine
    length = line_length(c)
    per_mm = (far.mass_per_metre or 0.0) * 1e-3
    hung = swinging(c, per_mm * length / 4.0)
    weighing = moving.mass + per_mm * length * 0.75
    if isinstance(far, Tie):
        weighing += 0.5 * made_mass(c, "tie")
    mass = weighing + sheave_mass(c, defaults, moving.sheave_mass)
    stiffness = line_stiffness(c, defaults, moving.line_stiffness)
    why = f"of the critical; {PRACTICE}"
    damping = defaults.take("moving.line_damping", moving.line_damping, DAMPING, "number", why)
    whole = (mass + moving.payload_mass) * TONNE
    bumper, travel = moving.bumper_stiffness or 0.0, moving.bumper_travel or 0.0
    leaves = moving.payload_leaves_at
    if leaves is None:
        leaves = travel
        if moving.payload_mass > 0.0:
            why = "where the bumper begins, or at zero draw without one"
            defaults.assumed.append(Assumed("moving.payload_leaves_at", leaves, "length", why))
    cushion = BUMPER_DAMPING
    if bumper > 0.0:
        why = f"of the critical, a rubber bumper; {PRACTICE}"
        cushion = defaults.take("moving.bumper_damping", moving.bumper_damping, BUMPER_DAMPING, "number", why)
    force, work = spring_end(m.spring)
    seat = stop_stiffness(c)
    inertia = hung.link * TONNE
    return Scene(
        far=_plain(m.far), crank_radius=float(m.crank_radius), link_length=float(m.link_length), slack=float(m.slack),
        theta=float(c.past.figures.events.release), speed=speed, front=float(m.seat_angle), back=back,
        reach=float(m.stop_reach),
        inertia=inertia, first_moment=hung.link_mass * hung.link_middle * TONNE, link_mass=hung.link_mass * TONNE,
        mass=mass * TONNE, weighing=weighing * TONNE, payload=moving.payload_mass * TONNE, leaves_at=leaves,
        spring=force, spring_work=work,
        gravity=moving.gravity or 0.0, stiffness=stiffness, damping=2.0 * damping * math.sqrt(stiffness * whole),
        pushes=not far.over_sheave, sheave_loss=1.0 - float(m.efficiency), pin_friction=float(m.friction_crank_pin),
        chain_pin_friction=float(m.friction_chain_pin),
        bumper=bumper, bumper_travel=travel, bumper_damping=2.0 * cushion * math.sqrt(bumper * mass * TONNE),
        stop_stiffness=seat, stop_damping=2.0 * STOP_DAMPING * math.sqrt(seat * inertia),
        caught_at=0.0 if moving.stopped_elsewhere else None,
    )  # fmt: skip


def stop_stiffness(c: Context) -> float:
    """N·mm/rad about the crank pin of the stops' own bending and shear, all sides together."""
    stop, arm = c.sizes.stop, c.stack.pin_root_arm
    if stop.style == "post":
        d = stop.diameter
        k = root_stiffness(arm, math.pi * d**4 / 64.0, math.pi * d**2 / 4.0, 0.9, stop.material)
    else:
        k = root_stiffness(arm, stop.length * stop.width**3 / 12.0, stop.length * stop.width, 5.0 / 6.0, stop.material)
    return k * c.design.mechanism.stop_reach**2 * len(c.stack.sides)


def _plain(far: FarLine) -> FarLine:
    """The same with plain numbers, for one moment at a time."""
    return far._each(float)

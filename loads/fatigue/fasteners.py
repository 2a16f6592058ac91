"""Hub bolts, the bolts and dowels of a stop block: what of the static checks' forces alternates in them."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from loads.checks.context import Context, length_of
from loads.checks.disc import hub_bolt_forces, preload
from loads.checks.pins import circle_area
from loads.checks.stop import bolt_share
from loads.fatigue.bolts import (
    PowerLine,
    added_force,
    effective_grip,
    joint_constant,
    member_stiffness,
    opening_factor,
    shear_line,
    slip_factor,
    thread_limit,
    thread_line,
    thread_stiffness,
    yield_factor,
)
from loads.fatigue.counting import closed, count_cycles, turning_points
from loads.fatigue.data import FastenerData, bolt_shear, bolt_tension
from loads.practice import value
from parts.design import Floats, Material
from parts.hardware import CapScrew, cap_screw, property_class_source

STEEL = 205000.0  # MPa, modulus of a screw; common practice, no source
INSTANTS = 120  # of one shot, between which the shear's range is sought
THREADED = "threaded to the head"
CONCENTRIC = "pulled along its axis, its bending and prying are not in it"
BOTH = "as if no friction helped; tests of bolts whose load does not turn round, threads out of the joint"
DOWELS = "as bolts that fit their holes; the two share the push alike"


@dataclass(frozen=True, slots=True)
class Fastened:
    """The worst fastener of a site: counted cycles of one shot (MPa), its line, and where its greatest stress is."""

    part: str
    site: str
    amplitude: Floats
    mean: Floats
    count: Floats
    line: PowerLine
    at: int  # index of the crank angle
    bound: float  # growth of the load at which the stresses stop growing with it, where that is above 1
    ultimate: float
    how: str
    source: str
    note: str


@dataclass(frozen=True, slots=True)
class Joint:
    """A cap screw through a plate into a tapped part: its preload (N), and the share C of a pull that it feels."""

    screw: CapScrew
    preload: float
    constant: float

    def bounds(self, pull: float) -> tuple[float, float]:
        """Growth of a pull at which the parts part, and at which the screw yields."""
        proof = self.screw.stress_area * self.screw.yield_strength
        return (
            opening_factor(pull, self.constant, self.preload),
            yield_factor(pull, self.constant, self.preload, proof),
        )


def fasteners(c: Context) -> Iterator[Fastened]:
    """Those of the hub, then those of a block."""
    yield from _hub(c)
    if c.sizes.stop.style == "block":
        yield _stop_bolts(c)
        yield _dowels(c)


def joint(screw: CapScrew, plate: float, tapped: float, upper: Material, lower: Material) -> Joint:
    """``plate`` and ``tapped`` mm thick, of materials ``upper`` and ``lower``."""
    h = max(plate, 0.01)  # a sink that leaves nothing is found by the checks of shape
    grip = effective_grip(h, max(tapped, 0.01), screw.diameter)
    k_m = member_stiffness(
        h, grip, screw.head_diameter, screw.diameter, upper.youngs_modulus, lower.youngs_modulus
    )  # fmt: skip
    k_b = thread_stiffness(screw.stress_area, STEEL, grip)
    return Joint(screw, preload(screw), joint_constant(k_b, k_m))


def _threads(joint: Joint, pull: Floats, data: FastenerData, part: str, site: str, words: str, note: str) -> Fastened:
    """The worst of k bolts under pulls (k, n), the parts pressed together where a pull is below 0."""
    screw = joint.screw
    line = thread_line(thread_limit(screw.diameter, data.constants), data.cycles, data.slope, data.least)
    stress = added_force(pull, joint.constant, joint.preload) / screw.stress_area
    counted = [count_cycles(turning_points(loop)) for loop in closed(stress)]
    worst = int(np.argmax([line.harm(a, n) for a, _, n in counted]))
    amplitude, mean, count = counted[worst]
    settled = joint.preload / screw.stress_area
    top = float(np.max(pull))
    opens, yields = joint.bounds(top) if top > 0.0 else (math.inf, math.inf)
    return Fastened(
        part, site, amplitude, mean + settled, count, line, int(np.argmax(np.abs(stress[worst]))),
        min(opens, yields), value("bolts", "ultimate"),
        f"{screw.thread}, {words}, C {joint.constant:.3g} of the pull on A_s, F_i {joint.preload:.4g} N, the joint opens at "
        f"{opens:.3g} and the screw yields at {yields:.3g} times the load; σ_ASV {line.limit:.3g} MPa, {THREADED}",
        f"{data.source}; Shigley, 9th edition, §8-5 and 8-7 for C; {property_class_source()}", note,
    )  # fmt: skip


def _hub(c: Context) -> Iterator[Fastened]:
    disc, screw = c.sizes.disc, cap_screw(c.sizes.disc.bolt_thread)
    hub = c.site("crank_disc", "hub_face")
    holes = [h for h in c.plate("crank_disc").holes if h.name.startswith("hub_bolt_hole")]
    angles, radius = np.array([math.atan2(h.center[1], h.center[0]) for h in holes]), disc.bolt_circle / 2.0
    shear, pull = hub_bolt_forces(hub.force, hub.moment, radius, angles)
    # the check's tension is never below 0: what the opposite moment pulls is what this one presses
    pull = pull - hub_bolt_forces(hub.force, -hub.moment, radius, angles)[1]
    flange = c.running.shaft.material if c.sizes.running is not None else disc.material
    held = joint(screw, disc.thickness - disc.counterbore_depth, screw.diameter, disc.material, flange)
    mu = value("press", "friction")
    slips = slip_factor(shear, pull, held.constant, held.preload, mu)
    friction = "is not loaded" if math.isinf(slips) else f"holds up to {slips:.3g} times the load at μ = {mu:g}"
    yield _threads(
        held, pull, bolt_tension(), "crank_disc", "hub_face", "elastic bolt group, both ways",
        f"{CONCENTRIC}; friction in the joint {friction}",
    )  # fmt: skip
    if slips >= 1.0:
        return
    data = bolt_shear()
    span = _range(hub.force, hub.moment, radius, angles)
    line = shear_line(
        data.constants[0], data.cycles, data.slope, data.least, screw.yield_strength, data.constants[1]
    )  # fmt: skip
    half = np.array([span / screw.stress_area / 2.0])
    yield Fastened(
        "crank_disc", "hub_bolt_hole", half, np.zeros(1), np.ones(1), line,
        int(np.argmax(np.max(shear, axis=0))), math.inf, value("bolts", "ultimate"),
        f"{screw.thread} in shear on A_s where friction gives way ({slips:.3g} times the load at μ = {mu:g}), "
        f"range of one bolt {span:.4g} N",
        f"{data.source}; {property_class_source()}", BOTH,
    )  # fmt: skip


def _range(force: Floats, moment: Floats, radius: float, angles: Floats) -> float:
    """Greatest difference (N) between the shears of one bolt at two instants of a shot, rest among them.

    The group is linear: the difference of two shears is the shear of the difference of the loads.
    """
    step = max(1, force.shape[1] // INSTANTS)
    rest = np.zeros((3, 1))
    f, m = np.hstack([force[:, ::step], rest]), np.hstack([moment[:, ::step], rest])
    one, other = np.triu_indices(f.shape[1], 1)
    apart, _ = hub_bolt_forces(f[:, one] - f[:, other], m[:, one] - m[:, other], radius, angles)
    return float(np.max(apart, initial=0.0))


def _push(c: Context) -> Floats:
    return length_of(c.site("stop", "contact").force)


def _stop_bolts(c: Context) -> Fastened:
    """The bolt nearer the link, as the static check has it: the block tips about its far edge."""
    stop, disc, screw = c.sizes.stop, c.sizes.disc, cap_screw(c.sizes.stop.bolt_thread)
    sinks = [s.depth for s in c.plate("crank_disc").counterbores if s.name.startswith("stop_bolt_sink")]
    held = joint(
        screw, disc.thickness - max(sinks, default=0.0), stop.height, disc.material, stop.material
    )  # fmt: skip
    pull = _push(c) * c.stack.pin_root_arm * bolt_share(stop.width)
    return _threads(
        held, pull[None, :], bolt_tension(), "stop", "bolts", "the bolt nearer the link", CONCENTRIC
    )  # fmt: skip


def _dowels(c: Context) -> Fastened:
    """Two dowels in one shear plane, no stronger than the block, from no push to the greatest and back."""
    stop, data, push = c.sizes.stop, bolt_shear(), _push(c)
    area = 2.0 * float(circle_area(stop.dowel_diameter))
    f_y = stop.material.yield_strength(stop.width)
    line = shear_line(data.constants[0], data.cycles, data.slope, data.least, f_y, data.constants[1])
    amplitude, mean, count = count_cycles(turning_points(closed(push[None, :] / area)[0]))
    return Fastened(
        "stop", "dowels", amplitude, mean, count, line, int(np.argmax(push)), math.inf,
        stop.material.ultimate_strength(stop.width), f"two dowels {stop.dowel_diameter:g} mm, V/2A, pulsating",
        data.source, DOWELS,
    )  # fmt: skip

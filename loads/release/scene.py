"""The moving bodies of the release and their equations of motion. Inside this package: mm, s, tonne, N, N·mm, rad.

Plane motion in the chain frame of ``loads.linkage``. The disc turns at a given speed. The link is a rigid body that
turns about the crank pin; what hangs on the chain pin goes with it. One mass moves with the spring's end: the moving
mass, the payload until it leaves, the sheave's inertia and its share of the chain. Between chain pin and mass the line
(chain, rope, webbing, tie; with sheave mount, shaft and frame in series) is a spring with a damper that never pushes.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import NamedTuple

from loads.lines import FarLine

SOFT_SPEED = 5.0  # mm/s over which sheave friction turns round, so that it is no step
SOFT_TURN = 0.05  # rad/s, the same of the crank pin's
QUICKEST = 1e5  # 1/s: no friction turns round quicker than that, or a light link would ask for endlessly small steps
SOLID = 20.0  # times as stiff as the bumper: what it rests on once its travel is used up; common practice, no source


@dataclass(frozen=True)
class Scene:
    """One machine at its release. ``far`` holds plain numbers."""

    far: FarLine
    crank_radius: float
    link_length: float
    slack: float
    theta: float  # crank angle at the start, where the chain line passes through A
    speed: float  # of the disc, rad/s, above 0
    front: float  # λ at which the link lies on its stop
    back: float  # λ at which its other side meets the stop's back
    reach: float  # from crank pin to stop
    inertia: float  # of the link and what hangs on it, about the crank pin, t·mm²
    first_moment: float  # the same about the crank pin, t·mm
    link_mass: float
    mass: float  # that moves with the spring's end, without the payload
    weighing: float  # of that mass what gravity pulls at: not the sheave, which turns on the spot
    payload: float
    leaves_at: float  # draw at which the payload leaves
    spring: Callable[[float], float]  # force over draw, below zero draw as well
    spring_work: Callable[[float], float]  # energy over draw
    gravity: float  # mm/s², positive where it pulls as the spring does
    stiffness: float  # of the line, N/mm
    damping: float  # N·s/mm
    pushes: bool  # a tie pushes as well as it pulls
    sheave_loss: float  # 1 − η
    pin_friction: float  # μ ρ of the crank pin, mm
    chain_pin_friction: float  # the same of the chain pin, whose end does not turn with the link
    bumper: float  # N/mm, 0: none
    bumper_travel: float
    bumper_damping: float
    stop_stiffness: float  # N·mm/rad about the crank pin
    stop_damping: float
    caught_at: float | None = None  # draw at which something else stops the mass


class Motion(NamedTuple):
    """What moves: link direction ψ and its rate, draw and its rate, work of the drive so far, and what is lost."""

    psi: float
    psi_rate: float
    draw: float
    draw_rate: float
    driven: float
    lost: float


class Forces(NamedTuple):
    """What acts at one moment. Vectors in the chain frame, N and N·mm."""

    tension: float  # of the line at the chain pin
    ux: float
    uy: float
    line: float  # pull of the line on the moving mass
    stretch: float  # mm
    spring: float
    bumper: float
    stop: float  # moment about A that the stop puts on the link, positive turns it with the disc
    pin_x: float  # of the crank pin on the link
    pin_y: float
    torque: float  # that disc and link take from the drive
    psi_turn: float  # second derivatives
    draw_turn: float
    drive_power: float
    loss: float  # power


def forces(k: Scene, t: float, y: Motion, payload: float, held: bool) -> Forces:
    """Everything at time t. ``held``: the mass lies on what has caught it, until something pulls it off."""
    psi, spin, draw, rate = y.psi, y.psi_rate, y.draw, y.draw_rate
    theta = k.theta + k.speed * t
    ct, st, ex, ey = math.cos(theta), math.sin(theta), math.cos(psi), math.sin(psi)
    r, length, w = k.crank_radius, k.link_length, k.speed
    bx, by = r * ct + length * ex, r * st + length * ey
    vax, vay = -w * r * st, w * r * ct
    vbx, vby = vax - spin * length * ey, vay + spin * length * ex
    at = k.far.line(r, bx, by, 0.0, length)  # type: ignore[arg-type]
    ux, uy, gearing = float(at.ux), float(at.uy), float(at.gearing)

    # the line between chain pin and mass
    stretch = float(at.pull) - k.slack - draw
    stretching = -gearing * (ux * vbx + uy * vby) - rate
    elastic = k.stiffness * stretch
    line = elastic + k.damping * stretching
    if not k.pushes:
        line = max(0.0, line) if stretch > 0.0 else 0.0
        elastic = max(0.0, elastic)
    tension = line * gearing
    loss = (line - elastic) * stretching
    # rubbing of the sheave or the output's guide goes against the mass
    moved = k.mass + payload
    rubbing = _rubbing(k.sheave_loss * abs(line), rate, SOFT_SPEED, moved)
    loss += rubbing * rate

    spring = k.spring(draw)
    bumper, bumper_loss = _bumper(k, draw, rate)
    draw_turn = (line - rubbing - spring - (k.weighing + payload) * k.gravity + bumper) / moved
    if held and draw_turn <= 0.0 and rate <= 0.0:
        draw_turn = 0.0
    loss += bumper_loss

    # the link about A, which moves on its circle
    ax, ay = -w * w * r * ct, -w * w * r * st
    pull = length * tension * (ex * uy - ey * ux)
    stop, stop_loss = _stop(k, psi - theta - math.pi, spin - w)
    swing = k.first_moment
    held_back = -_rubbing(k.chain_pin_friction * abs(tension), spin, SOFT_TURN, k.inertia)
    free = (pull + held_back + stop - swing * (ex * ay - ey * ax)) / k.inertia
    # mass times acceleration of its centre, less what pulls at B: what pin and stop give together
    gx = k.link_mass * ax + swing * (-free * ey - spin * spin * ex) - tension * ux
    gy = k.link_mass * ay + swing * (free * ex - spin * spin * ey) - tension * uy
    # the pin rubs under its own share of that; what the rubbing itself changes of it is of second order
    push = stop / k.reach
    rub = -_rubbing(k.pin_friction * math.hypot(gx + push * ey, gy - push * ex), spin - w, SOFT_TURN, k.inertia)
    turn = free + rub / k.inertia
    loss += stop_loss - rub * (spin - w) - held_back * spin
    gx -= swing * rub / k.inertia * ey
    gy += swing * rub / k.inertia * ex
    power = gx * vax + gy * vay + (stop + rub) * w
    return Forces(tension, ux, uy, line, stretch, spring, bumper, stop, gx, gy, power / w, turn, draw_turn, power, loss)


def _rubbing(full: float, rate: float, soft: float, inertia: float) -> float:
    """Dry friction of at most ``full`` along the rate, softened about its turning round."""
    return full * math.tanh(rate / max(soft, full / (inertia * QUICKEST)))


def _bumper(k: Scene, draw: float, rate: float) -> tuple[float, float]:
    """Push of the bumper against the mass (N), and the power that its damping takes."""
    into = k.bumper_travel - draw
    if k.bumper <= 0.0 or into <= 0.0:
        return 0.0, 0.0
    elastic = k.bumper * into + SOLID * k.bumper * max(0.0, -draw)
    force = max(0.0, elastic - k.bumper_damping * rate)
    return force, (force - elastic) * -rate


def _stop(k: Scene, angle: float, rate: float) -> tuple[float, float]:
    """Moment (N·mm) of the stop's front or back on the link, and the power that it takes. ``angle`` is λ, unwrapped."""
    into, sense = k.front - angle, 1.0
    if into <= 0.0:
        into, sense = angle - k.back, -1.0
        if into <= 0.0:
            return 0.0, 0.0
    elastic = k.stop_stiffness * into
    moment = max(0.0, elastic - k.stop_damping * rate * sense)
    return sense * moment, (moment - elastic) * -rate * sense


def stored(k: Scene, t: float, y: Motion, payload: float) -> float:
    """Energy (N·mm) of everything that moves or is stretched."""
    theta = k.theta + k.speed * t
    f = forces(k, t, y, payload, False)
    ex, ey = math.cos(y.psi), math.sin(y.psi)
    vax, vay = -k.speed * k.crank_radius * math.sin(theta), k.speed * k.crank_radius * math.cos(theta)
    across = -vax * ey + vay * ex
    kinetic = k.link_mass * (vax**2 + vay**2) / 2.0 + k.inertia * y.psi_rate**2 / 2.0
    kinetic += k.first_moment * y.psi_rate * across
    moved = k.mass + payload
    kinetic += moved * y.draw_rate**2 / 2.0
    stretch = f.stretch if k.pushes else max(0.0, f.stretch)
    into = max(0.0, k.bumper_travel - y.draw) if k.bumper > 0.0 else 0.0
    solid = SOLID * max(0.0, -y.draw) if k.bumper > 0.0 else 0.0
    angle = y.psi - theta - math.pi
    seat = max(0.0, k.front - angle, angle - k.back)
    return (
        kinetic
        + k.spring_work(y.draw)
        + (k.weighing + payload) * k.gravity * y.draw
        + k.stiffness * stretch**2 / 2.0
        + k.bumper * (into**2 + (solid * max(0.0, -y.draw))) / 2.0
        + k.stop_stiffness * seat**2 / 2.0
    )

"""Kinematics and statics of the over-centre draw, for many designs and crank angles at once.

Everything is worked out in the *chain frame*: a right-handed plane with its origin on the disc axis, x along the chain
line through it (the start direction), the disc turning counter-clockwise, so a clockwise machine is the mirror image of
a counter-clockwise one by construction. What the chain line is drawn to is told in ``loads.lines``.

Arrays: the fields of ``Linkage`` have the designs' leading axes (...); crank angles have shape (..., n).
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from functools import cached_property
from typing import Any

import numpy as np

from loads.lines import FarLine, Line, RockerRun, SheaveRun, SlideRun
from loads.spring_law import SpringLaw, spring_force
from parts.design import Floats

TAUT_WITHIN = 1e-6  # mm of pull by which rounding may fall short of the slack


@dataclass(frozen=True, slots=True)
class Linkage:
    """One or many machines in the chain frame. Lengths in mm, angles in rad."""

    crank_radius: Floats
    link_length: Floats
    seat_angle: Floats
    stop_reach: Floats
    hold_margin: Floats
    slack: Floats
    efficiency: Floats
    far: FarLine
    start_direction: Floats  # machine frame, counter-clockwise positive
    turn: Floats  # +1 ccw, −1 cw
    spring: SpringLaw
    friction_bearing: Floats  # μ_b ρ_b, mm
    friction_crank_pin: Floats  # μ_p ρ_A, mm
    friction_chain_pin: Floats  # μ_c ρ_B, mm

    @property
    def shape(self) -> tuple[int, ...]:
        return np.shape(self.crank_radius)

    def expanded(self) -> Linkage:
        """The same machines with one more trailing axis, to meet crank angles of shape (..., n)."""
        values: list[Any] = [_expanded(getattr(self, name)) for name in _FIELDS]
        return Linkage(*values)

    def chunk(self, rows: slice) -> Linkage:
        """Some of many machines that lie along one leading axis."""
        values: list[Any] = [getattr(self, name) for name in _FIELDS]
        some: list[Any] = [v.chunk(rows) if isinstance(v, (SpringLaw, FarLine)) else v[rows] for v in values]
        return Linkage(*some)

    def copies(self, shape: tuple[int, ...]) -> Linkage:
        """One machine as many alike."""
        values: list[Any] = [getattr(self, name) for name in _FIELDS]
        whole = (SpringLaw, FarLine)
        many: list[Any] = [v.copies(shape) if isinstance(v, whole) else np.broadcast_to(v, shape) for v in values]
        return Linkage(*many)


_FIELDS = tuple(f.name for f in fields(Linkage))


def _expanded(value: Floats | SpringLaw | FarLine) -> Floats | SpringLaw | FarLine:
    return value.expanded() if isinstance(value, (SpringLaw, FarLine)) else value[..., None]


def make_linkage(
    *,
    crank_radius: Floats | float,
    link_length: Floats | float,
    seat_angle: Floats | float,
    stop_reach: Floats | float,
    sheave_x: Floats | float,
    sheave_y: Floats | float,
    pitch_radius: Floats | float,
    wrap: Floats | float,
    spring: SpringLaw,
    turn: Floats | float = 1.0,
    exit_angle: Floats | float = np.nan,
    hold_margin: Floats | float = np.radians(4.0),
    slack: Floats | float = 0.0,
    efficiency: Floats | float = 1.0,
    friction_bearing: Floats | float = 0.0,
    friction_crank_pin: Floats | float = 0.0,
    friction_chain_pin: Floats | float = 0.0,
) -> Linkage:
    """Machines from their parameters in the machine frame; leading axes broadcast against each other.

    ``wrap`` is +1 for a chain on the left of O→C as the viewer sees it, −1 for the right; ``turn`` +1 for ccw, −1 for cw;
    ``exit_angle`` (rad, machine frame) is NaN for half a wrap. Lengths in mm, angles in rad.
    """
    r, length, beta, reach, cx, cy, radius, side, sense, leave, margin, slack_, eta, fb, fp, fc, pre, rate = (
        np.asarray(a, dtype=float)
        for a in np.broadcast_arrays(
            crank_radius, link_length, seat_angle, stop_reach, sheave_x, sheave_y, pitch_radius, wrap, turn, exit_angle,
            hold_margin, slack, efficiency, friction_bearing, friction_crank_pin, friction_chain_pin,
            spring.preload, spring.rate,
        )
    )  # fmt: skip
    w = side * sense
    y = cy * sense
    squared = cx**2 + y**2
    with np.errstate(invalid="ignore"):
        t0 = np.sqrt(squared - radius**2)
    direction = np.arctan2(y * t0 + cx * w * radius, cx * t0 - y * w * radius)
    wrap_angle = np.where(np.isnan(leave), np.pi, np.mod(w * (direction - sense * leave), 2.0 * np.pi))
    return Linkage(
        crank_radius=r, link_length=length, seat_angle=beta, stop_reach=reach, hold_margin=margin, slack=slack_,
        efficiency=eta, far=SheaveRun(t0, radius, w, wrap_angle), start_direction=sense * direction, turn=sense,
        spring=SpringLaw(pre, rate, spring.draws, spring.forces),
        friction_bearing=fb, friction_crank_pin=fp, friction_chain_pin=fc,
    )  # fmt: skip


def make_tied(
    *,
    crank_radius: Floats | float,
    link_length: Floats | float,
    seat_angle: Floats | float,
    stop_reach: Floats | float,
    tie_length: Floats | float,
    spring: SpringLaw,
    slide: tuple[Floats | float, Floats | float, Floats | float] | None = None,
    rocker: tuple[Floats | float, ...] | None = None,
    turn: Floats | float = 1.0,
    hold_margin: Floats | float = np.radians(4.0),
    efficiency: Floats | float = 1.0,
) -> Linkage:
    """Machines with a rigid tie, from their parameters in the machine frame; leading axes broadcast.

    Either ``slide``: x and y of a point that the output's pin passes, and the direction (rad) in which drawing moves it;
    or ``rocker``: pivot x and y, arm, side (+1 the pin on the left of O→pivot, −1 on the right), the spring's arm, and
    the direction in which the spring's line leaves (NaN: away along the tie at the start). Where the output's pin cannot
    be as far from O as crank, link and tie reach, everything comes out as NaN. Lengths in mm, angles in rad.
    """
    given = (0.0, 0.0, 0.0) if slide is None else slide
    arms = (0.0, 0.0, 1.0, 1.0, 1.0, 0.0) if rocker is None else rocker
    values = np.broadcast_arrays(
        crank_radius, link_length, seat_angle, stop_reach, tie_length, turn, hold_margin, efficiency, spring.preload,
        spring.rate, *given, *arms,
    )  # fmt: skip
    r, link, beta, reach, tie, sense, margin, eta, pre, rate = (np.asarray(v, dtype=float) for v in values[:10])
    rest = [np.asarray(v, dtype=float) for v in values[10:]]
    start = r + link + tie
    with np.errstate(invalid="ignore", divide="ignore"):
        if rocker is None:
            x, y, draw = rest[:3]
            ex, ey = np.cos(draw), np.sin(draw)
            foot = x * ex + y * ey
            along = np.sqrt(start**2 - (x**2 + y**2 - foot**2))
            # the pin starts where drawing it brings it nearer to O
            px, py = x - (foot + along) * ex, y - (foot + along) * ey
        else:
            x, y, arm, side, spring_arm, leave = rest[3:]
            away = np.hypot(x, y)
            opening = side * np.arccos((away**2 + start**2 - arm**2) / (2.0 * away * start))
            towards = np.arctan2(y, x) + opening
            px, py = start * np.cos(towards), start * np.sin(towards)
        direction = np.arctan2(py * sense, px)  # in the frame of the counter-clockwise mirror image
        far: FarLine
        if rocker is None:
            far = SlideRun(start, tie, sense * draw - direction)
        else:
            c, s = np.cos(direction), np.sin(direction)
            mirrored = y * sense
            out = np.where(np.isnan(leave), 0.0, sense * leave - direction)
            far = RockerRun(start, tie, x * c + mirrored * s, mirrored * c - x * s, arm, spring_arm, out)
    zero = np.zeros_like(r)
    return Linkage(
        crank_radius=r, link_length=link, seat_angle=beta, stop_reach=reach, hold_margin=margin, slack=zero,
        efficiency=eta, far=far, start_direction=sense * direction, turn=sense,
        spring=SpringLaw(pre, rate, spring.draws, spring.forces),
        friction_bearing=zero, friction_crank_pin=zero, friction_chain_pin=zero,
    )  # fmt: skip


def crank_pin_at(m: Linkage, theta: Floats) -> tuple[Floats, Floats]:
    """A in the chain frame."""
    return m.crank_radius * np.cos(theta), m.crank_radius * np.sin(theta)


def seated_chain_pin_at(m: Linkage, theta: Floats) -> tuple[Floats, Floats]:
    """B in the chain frame while the link rests on its stop."""
    x = m.crank_radius - m.link_length * np.cos(m.seat_angle)
    y = -m.link_length * np.sin(m.seat_angle)
    c, s = np.cos(theta), np.sin(theta)
    return x * c - y * s, x * s + y * c


def free_line(m: Linkage, theta: Floats) -> Line:
    """From the crank pin, the link in line with what pulls it. ``m`` is already expanded to meet the angles."""
    return m.far.line(m.crank_radius, *crank_pin_at(m, theta), m.link_length, m.link_length)


def seated_line(m: Linkage, theta: Floats) -> Line:
    return chain_line(m, *seated_chain_pin_at(m, theta))


def chain_line(m: Linkage, qx: Floats, qy: Floats) -> Line:
    """From a chain pin at Q. ``m`` is already expanded to meet Q's shape."""
    return m.far.line(m.crank_radius, qx, qy, 0.0, m.link_length)


def lift(m: Linkage, line: Line, theta: Floats) -> Floats:
    """sin α of the seated link: positive while the chain holds it on its stop, zero at catch and release."""
    ex, ey = -np.cos(theta + m.seat_angle), -np.sin(theta + m.seat_angle)
    return np.asarray(line.ux * ey - line.uy * ex)


@dataclass(frozen=True)  # without slots, so that what is asked for twice is worked out once
class State:
    """Everything over crank angle, frictionless. Vectors in the chain frame; mm, N, N·mm, rad.

    What the members feel is worked out from the pull when it is asked for, so that a search which looks at the torque
    alone pays for no more.
    """

    machine: Linkage  # expanded to meet the crank angles
    crank_angle: Floats
    seated: np.ndarray[tuple[int, ...], np.dtype[np.bool_]]
    line: Line
    pull: Floats
    draw: Floats
    force: Floats  # of the spring, F
    tension: Floats  # of the chain, T

    @cached_property
    def torque(self) -> Floats:
        """Drive torque M = T dp/dθ."""
        return self.tension * self.line.arm

    @property
    def friction_torque(self) -> Floats:
        """What rubbing adds to winding and takes from unwinding: bearing always, crank pin free, chain pin seated."""
        m = self.machine
        pins = np.where(self.seated, m.friction_chain_pin, m.friction_crank_pin)
        return np.asarray(self.tension * (m.friction_bearing + pins * np.abs(1.0 - self.line.turning)))

    @cached_property
    def _alpha(self) -> Floats:
        """Chain line against B→A of the seated link."""
        return self.line.direction - (self.crank_angle + self.machine.seat_angle)

    @cached_property
    def lift(self) -> Floats:
        """sin α: the part of the chain's pull across the link; zero while the link is free."""
        return np.where(self.seated, np.sin(self._alpha), 0.0)

    @property
    def link_angle(self) -> Floats:
        """λ, from A→O to A→B; that of a taut chain whether or not there is slack."""
        return np.where(self.seated, self.machine.seat_angle, np.pi + self.line.direction - self.crank_angle)

    @property
    def link_direction(self) -> Floats:
        """Of A→B, from the start direction."""
        seated = self.crank_angle + np.pi + self.machine.seat_angle
        return np.where(self.seated, seated, self.line.direction)

    @property
    def chain_direction(self) -> Floats:
        return self.line.direction

    @cached_property
    def stop_force(self) -> Floats:
        """N, along n: moments about A give N d = T L sin α."""
        m = self.machine
        return np.asarray(self.tension * m.link_length * self.lift / m.stop_reach)

    @property
    def pin_x(self) -> Floats:
        """Force of the crank pin on the link, −T·u − N·n."""
        n = np.sin(self.crank_angle + self.machine.seat_angle)
        return np.asarray(-self.tension * self.line.ux - self.stop_force * n)

    @property
    def pin_y(self) -> Floats:
        n = -np.cos(self.crank_angle + self.machine.seat_angle)
        return np.asarray(-self.tension * self.line.uy - self.stop_force * n)

    @property
    def pin_force(self) -> Floats:
        """|T·u + N·n| = sqrt(T² + N² − 2 T N sin α), because u·n = −sin α."""
        stop = self.stop_force
        square = self.tension**2 + stop**2 - 2.0 * self.tension * stop * self.lift
        return np.sqrt(np.maximum(square, 0.0))

    @property
    def link_axial(self) -> Floats:
        """T cos α, tension positive."""
        return self.tension * np.where(self.seated, -np.cos(self._alpha), 1.0)

    @property
    def link_bending(self) -> Floats:
        """At the stop, T |sin α| (L − d)."""
        m = self.machine
        return np.asarray(self.tension * np.abs(self.lift) * (m.link_length - m.stop_reach))

    @property
    def shaft_x(self) -> Floats:
        """Force of the shaft on the disc, −T·u."""
        return -self.tension * self.line.ux

    @property
    def shaft_y(self) -> Floats:
        return -self.tension * self.line.uy

    @property
    def sheave_x(self) -> Floats:
        """Force of chain and spring on the sheave, or of tie and spring on the output's guide: T towards Q, and F."""
        return np.asarray(self.shaft_x + self.force * np.cos(self.machine.far.spring_direction))

    @property
    def sheave_y(self) -> Floats:
        return np.asarray(self.shaft_y + self.force * np.sin(self.machine.far.spring_direction))

    @property
    def sheave_force(self) -> Floats:
        return np.hypot(self.sheave_x, self.sheave_y)

    @property
    def wrap(self) -> Floats:
        """rad on the sheave; NaN where there is none."""
        return self.machine.far.wrap(self.line)


def state(machine: Linkage, theta: Floats, catch: Floats) -> State:
    """Pull, torque and member forces at crank angles ``theta`` (..., n), for machines whose catch is at ``catch`` (...).

    Free up to and with the catch, seated behind it. T = F(x)/η times the line's gearing; the slack is without tension.
    """
    return expanded_state(machine.expanded(), theta, np.asarray(catch)[..., None])


def expanded_state(m: Linkage, theta: Floats, catch: Floats) -> State:
    """``state`` for machines and catch that have been given the crank angles' axis already."""
    seated = theta > catch
    # of the crank pin while the link is free, of the chain pin while it is seated: a point fixed to the disc either way
    x = m.crank_radius - np.where(seated, m.link_length * np.cos(m.seat_angle), 0.0)
    y = np.where(seated, -m.link_length * np.sin(m.seat_angle), 0.0)
    c, s = np.cos(theta), np.sin(theta)
    taken = np.where(seated, 0.0, m.link_length)
    line = m.far.line(m.crank_radius, x * c - y * s, x * s + y * c, taken, m.link_length)
    pull = line.pull
    draw = np.maximum(pull - m.slack, 0.0)
    force = np.where(pull >= m.slack - TAUT_WITHIN, spring_force(m.spring, draw), 0.0)
    return State(m, theta, seated, line, pull, draw, force, force * line.gearing / m.efficiency)


def to_machine(m: Linkage, x: Floats, y: Floats) -> tuple[Floats, Floats]:
    """A vector of the chain frame in the machine frame. ``m`` has the shape that broadcasts against x and y."""
    direction = m.start_direction * m.turn
    c, s = np.cos(direction), np.sin(direction)
    return x * c - y * s, m.turn * (x * s + y * c)

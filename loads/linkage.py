"""Kinematics and statics of the over-centre draw, for many designs and crank angles at once.

Everything is worked out in the *chain frame*: a right-handed plane with its origin on the disc axis, x along the chain
line through it (the start direction), the disc turning counter-clockwise. There the sheave stands at (t0, −w R) whatever
the design, so a clockwise machine is the mirror image of a counter-clockwise one by construction.

Arrays: the fields of ``Linkage`` have the designs' leading axes (...); crank angles have shape (..., n).
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import Any

import numpy as np

from loads.spring_law import SpringLaw, law_of, spring_force
from parts.design import Design, Floats

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
    sheave_distance: Floats  # t0, along the chain line from O to the sheave's tangent point
    pitch_radius: Floats
    wrap_side: Floats  # w: +1 chain on the left of O→C when the disc turns counter-clockwise, −1 on the right
    start_wrap: Floats  # arc of chain on the sheave at the start
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
        some: list[Any] = [v.chunk(rows) if isinstance(v, SpringLaw) else v[rows] for v in values]
        return Linkage(*some)


_FIELDS = tuple(f.name for f in fields(Linkage))


def _expanded(value: Floats | SpringLaw) -> Floats | SpringLaw:
    return value.expanded() if isinstance(value, SpringLaw) else value[..., None]


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
        efficiency=eta, sheave_distance=t0, pitch_radius=radius, wrap_side=w, start_wrap=wrap_angle,
        start_direction=sense * direction, turn=sense, spring=SpringLaw(pre, rate, spring.draws, spring.forces),
        friction_bearing=fb, friction_crank_pin=fp, friction_chain_pin=fc,
    )  # fmt: skip


def linkage_of(design: Design) -> Linkage:
    """The machine of one design, without the friction that needs pin sizes."""
    m, s = design.mechanism, design.sheave
    return make_linkage(
        crank_radius=m.crank_radius,
        link_length=m.link_length,
        seat_angle=m.seat_angle,
        stop_reach=m.stop_reach,
        hold_margin=m.hold_margin,
        sheave_x=s.center[0],
        sheave_y=s.center[1],
        pitch_radius=s.pitch_radius,
        wrap=1.0 if s.wrap == "left" else -1.0,
        turn=1.0 if m.rotation == "ccw" else -1.0,
        exit_angle=np.nan if s.exit_angle is None else s.exit_angle,
        efficiency=s.efficiency,
        slack=design.chain.slack,
        spring=law_of(design.spring),
    )


@dataclass(frozen=True, slots=True)
class ChainLine:
    """The chain line from a point Q that the crank carries. All shaped like the crank angle."""

    qx: Floats
    qy: Floats
    ux: Floats  # unit vector from Q to the sheave
    uy: Floats
    direction: Floats  # φ, rad from the start direction
    free_length: Floats  # t, mm from Q to the tangent point
    drawn: Floats  # ℓ(Q) − ℓ(A at θ = 0), mm
    arm: Floats  # dℓ/dθ, mm: the signed distance from O to the chain line
    turning: Floats  # dφ/dθ


def chain_line(m: Linkage, qx: Floats, qy: Floats) -> ChainLine:
    """Tangent from Q to the pitch circle. ``m`` is already expanded to meet Q's shape."""
    t0, radius, w = m.sheave_distance, m.pitch_radius, m.wrap_side
    dx, dy = t0 - qx, -w * radius - qy
    # t² − t0², written so that a sheave ten kilometres away costs no digits
    gain = qx**2 + qy**2 - 2.0 * t0 * qx + 2.0 * w * radius * qy
    with np.errstate(invalid="ignore"):
        t = np.sqrt(t0**2 + gain)
    squared = dx**2 + dy**2
    ux = (dx * t - dy * w * radius) / squared
    uy = (dy * t + dx * w * radius) / squared
    phi = np.arctan2(uy, ux)
    drawn = gain / (t + t0) + m.crank_radius + radius * w * phi
    return ChainLine(
        qx=qx, qy=qy, ux=ux, uy=uy, direction=phi, free_length=t, drawn=drawn,
        arm=ux * qy - uy * qx, turning=-(ux * qx + uy * qy) / t,
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


def free_line(m: Linkage, theta: Floats) -> ChainLine:
    return chain_line(m, *crank_pin_at(m, theta))


def seated_line(m: Linkage, theta: Floats) -> ChainLine:
    return chain_line(m, *seated_chain_pin_at(m, theta))


def lift(m: Linkage, line: ChainLine, theta: Floats) -> Floats:
    """sin α of the seated link: positive while the chain holds it on its stop, zero at catch and release."""
    ex, ey = -np.cos(theta + m.seat_angle), -np.sin(theta + m.seat_angle)
    return np.asarray(line.ux * ey - line.uy * ex)


@dataclass(frozen=True, slots=True)
class State:
    """Everything over crank angle, frictionless. Vectors in the chain frame; mm, N, N·mm, rad."""

    crank_angle: Floats
    seated: np.ndarray[tuple[int, ...], np.dtype[np.bool_]]
    pull: Floats
    draw: Floats
    tension: Floats
    torque: Floats
    friction_torque: Floats
    link_angle: Floats  # λ
    link_direction: Floats  # of A→B, from the start direction
    chain_direction: Floats  # φ
    pin_x: Floats  # force of the crank pin on the link
    pin_y: Floats
    stop_force: Floats  # N, along n
    link_axial: Floats  # tension positive
    link_bending: Floats
    shaft_x: Floats  # force of the shaft on the disc
    shaft_y: Floats
    sheave_x: Floats  # force of the chain on the sheave
    sheave_y: Floats
    wrap: Floats

    @property
    def pin_force(self) -> Floats:
        return np.hypot(self.pin_x, self.pin_y)

    @property
    def sheave_force(self) -> Floats:
        return np.hypot(self.sheave_x, self.sheave_y)


def state(machine: Linkage, theta: Floats, catch: Floats) -> State:
    """Pull, torque and member forces at crank angles ``theta`` (..., n), for machines whose catch is at ``catch`` (...).

    Free up to and with the catch, seated behind it. T = F(x)/η; the slack is without tension.
    """
    m = machine.expanded()
    seated = theta > np.asarray(catch)[..., None]
    ax, ay = crank_pin_at(m, theta)
    bx, by = seated_chain_pin_at(m, theta)
    line = chain_line(m, np.where(seated, bx, ax), np.where(seated, by, ay))
    pull = line.drawn + np.where(seated, m.link_length, 0.0)
    taut = pull >= m.slack - TAUT_WITHIN
    draw = np.maximum(pull - m.slack, 0.0)
    force = np.where(taut, spring_force(m.spring, draw), 0.0)
    tension = force / m.efficiency
    torque = tension * line.arm

    alpha = line.direction - (theta + m.seat_angle)  # chain line against B→A
    sin_a, cos_a = np.where(seated, np.sin(alpha), 0.0), np.where(seated, -np.cos(alpha), 1.0)
    stop = tension * m.link_length * sin_a / m.stop_reach
    link_direction = np.where(seated, theta + np.pi + m.seat_angle, line.direction)
    nx, ny = np.sin(theta + m.seat_angle), -np.cos(theta + m.seat_angle)
    tx, ty = tension * line.ux, tension * line.uy
    wrap = m.start_wrap + m.wrap_side * line.direction
    # the chain leaves the sheave where the wrap ends: its direction does not change over the cycle
    exit_direction = -m.wrap_side * m.start_wrap
    pins = np.where(seated, m.friction_chain_pin, m.friction_crank_pin)
    return State(
        crank_angle=theta, seated=seated, pull=pull, draw=draw, tension=tension, torque=torque,
        friction_torque=tension * (m.friction_bearing + pins * np.abs(1.0 - line.turning)),
        link_angle=np.where(seated, m.seat_angle, np.pi + line.direction - theta),
        link_direction=link_direction, chain_direction=line.direction,
        pin_x=-tx - stop * nx, pin_y=-ty - stop * ny, stop_force=stop, link_axial=tension * cos_a,
        link_bending=tension * np.abs(sin_a) * (m.link_length - m.stop_reach),
        shaft_x=-tx, shaft_y=-ty,
        sheave_x=-tx + force * np.cos(exit_direction), sheave_y=-ty + force * np.sin(exit_direction), wrap=wrap,
    )  # fmt: skip


def to_machine(m: Linkage, x: Floats, y: Floats) -> tuple[Floats, Floats]:
    """A vector of the chain frame in the machine frame. ``m`` has the shape that broadcasts against x and y."""
    direction = m.start_direction * m.turn
    c, s = np.cos(direction), np.sin(direction)
    return x * c - y * s, m.turn * (x * s + y * c)

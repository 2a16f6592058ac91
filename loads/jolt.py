"""Bounce and vibration at the hold: what acceleration carries the disc over its null. N·mm, kg·mm², rad, s.

Free body of disc and seated link about the disc axis, in a frame that is accelerated: a frame turned at α acts on them as
a torque J·α would, one shaken at a in its plane as m·e·a at most, m·e their unbalance. What holds them back is the
spring (F, without the sheave's friction, which would help) with its arm at the hold, M = F·h, and the drive if it holds.
The arm only shrinks towards the null, so what begins to move goes over if it lasts: α = (M + M_drive)/J. One that does not
last has to bring the energy that the spring still takes up to the null, W: Δω = √(2W/J). Source: d'Alembert's principle,
work and energy; bearing friction is left out, which is on the safe side.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from loads.checks.context import Context
from loads.inertia import inertia_of
from loads.linkage import state
from loads.spring_law import spring_energy
from parts.design import Drive

PER_SECOND = 1000.0  # N·mm over kg·mm² in rad/s², and N·mm over kg·mm in mm/s²


@dataclass(frozen=True, slots=True)
class Jolt:
    """``held_*`` is None where the design tells of nothing that holds; infinite where the gear locks itself."""

    inertia: float  # drive included, where it is known
    unbalance: float
    drive_known: bool  # whether the drive's inertia is in
    back: float  # N·mm by which the spring holds the disc back at the hold
    holding: float | None  # N·mm by which the drive does, at the disc
    dead_acceleration: float  # rad/s²
    held_acceleration: float | None
    dead_shake: float | None  # mm/s², None for a disc without unbalance
    dead_speed: float  # rad/s of one blow
    barrier: float  # N·mm that the spring takes up from the hold to the first of null and release


def holding_torque(drive: Drive | None) -> float | None:
    """Torque (N·mm) at the disc that it takes to move what the drive holds: N·T/η_b, T of the brake, else the motor's
    stall torque; infinite where the gear locks itself, None where neither is known. Source: gear efficiency, driven from
    the slow side.
    """
    if drive is None:
        return None
    torque = drive.stall_torque if drive.holding_torque is None else drive.holding_torque
    if torque is None:
        return None
    if drive.backdriving_efficiency == 0.0:
        return math.inf
    return torque * drive.reduction / drive.backdriving_efficiency


def jolts(c: Context) -> Jolt:
    """What the hold of one design stands."""
    m, at, machine = c.design.mechanism, c.past.figures.events, c.past.machine
    drive = c.design.drive
    own = inertia_of(c.parts, drive)
    unbalance = own.unbalance(m.crank_radius, m.seat_angle, float(machine.turn))
    inertia = own.seated(m.crank_radius, m.seat_angle) + (own.drive or 0.0)
    ends = state(machine, np.array([float(at.hold), float(at.first_end)]), at.catch)
    back = float(ends.torque[0]) * float(machine.efficiency)
    taken = spring_energy(machine.spring, ends.draw)
    barrier = max(0.0, float(taken[1] - taken[0]))
    holding = holding_torque(drive)
    return Jolt(
        inertia=inertia, unbalance=unbalance, drive_known=own.drive is not None, back=back, holding=holding,
        dead_acceleration=PER_SECOND * back / inertia,
        held_acceleration=None if holding is None else PER_SECOND * (back + holding) / inertia,
        dead_shake=PER_SECOND * back / unbalance if unbalance > 0.0 else None,
        dead_speed=math.sqrt(2.0 * PER_SECOND * barrier / inertia), barrier=barrier,
    )  # fmt: skip

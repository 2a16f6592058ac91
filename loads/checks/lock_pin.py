"""The lock pin: holds the disc against spring and drive at the start or at the hold."""

from __future__ import annotations

import numpy as np

from loads.checks.context import EN_PINS, Context, rule_note
from loads.checks.eyes import bearing
from loads.checks.pins import pin_checks
from loads.members import History
from loads.records import HOLD, Check
from parts.design import Design
from parts.lock_pin import BELOW, GAP


def locked_torque(design: Design, past: History) -> float:
    """The largest torque (N·mm) that spring and drive can put on a disc that is locked at the start or at the hold.

    The spring's at the hold with the shock factor, and the drive's stall torque at the disc, or without a [drive] the
    largest that winding asks for with friction; both the same way round, as the drive may run backwards.
    """
    s, shock = past.winding, design.targets.shock_factor
    spring = abs(float(past.figures.hold_torque)) * shock
    drive, winding = design.drive, float(np.max(np.abs(s.torque) + s.friction_torque)) * shock
    if drive is not None and drive.stall_torque is not None:
        winding = drive.stall_torque * drive.reduction * drive.efficiency
    return spring + winding


def lever(thickness: float) -> float:
    """From the frame's bush to the middle of the disc (mm)."""
    return GAP + thickness / 2.0


def check(c: Context) -> list[Check]:
    """Pin held in the frame's bush, bearing in the disc. One pin takes the whole torque, whatever the stack."""
    lock = c.sizes.lock_pin
    if lock is None:
        return []
    disc = c.sizes.disc
    force = np.zeros_like(c.members.torque)
    force[c.past.rows(HOLD)] = locked_torque(c.design, c.past) / lock.radius
    rows = pin_checks(
        c, "lock_pin", "shank", lock.diameter, lock.material, force, force * lever(disc.thickness), True,
        holder="in the frame's bush",
    )  # fmt: skip
    touch = max(disc.thickness - BELOW, 1e-6)
    f_y = min(disc.material.yield_strength(disc.thickness), lock.material.yield_strength(lock.diameter))
    for hole in ("lock_hole_start", "lock_hole_hold"):
        rows.append(
            c.worst_check(
                "crank_disc", hole, "bearing", force, bearing(touch, lock.diameter, f_y), "N", c.design.targets.yield_,
                "1.5 t d f_y, torque of spring and drive over the hole's radius", EN_PINS, rule_note(disc.material),
            )
        )  # fmt: skip
    return rows

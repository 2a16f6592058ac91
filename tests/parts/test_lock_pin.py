"""The lock pin: optional, its two holes where start and hold ask for them, clear of what moves."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest

from loads.checks.lock_pin import lever, locked_torque
from loads.examine import Examination, examine
from parts.outline import Plate
from tests.starters import NAMES, text_of


def locked(folder: Path, name: str, lines: str = "", text: str | None = None) -> Examination:
    file = folder / "design.toml"
    file.write_text((text or text_of(name)) + f"\n[lock_pin]\n{lines}", encoding="utf-8")
    return examine(file)


def plain(folder: Path, name: str) -> Examination:
    file = folder / "design.toml"
    file.write_text(text_of(name), encoding="utf-8")
    return examine(file)


@pytest.mark.parametrize("name", NAMES)
def test_it_is_there_only_where_it_is_asked_for(name: str, tmp_path: Path) -> None:
    without = plain(tmp_path, name)
    assert without.sizes.lock_pin is None
    assert all(p.key != "lock_pin" for p in without.parts)
    e = locked(tmp_path, name)
    assert e.holds, [(c.part, c.site, c.check) for c in e.falls_short]
    assert [p.quantity for p in e.parts if p.key == "lock_pin"] == [1]
    assert not e.findings.clashes
    disc = next(p.body for p in e.parts if p.key == "crank_disc")
    assert isinstance(disc, Plate)
    holes = {h.name: h for h in disc.holes if h.name.startswith("lock_hole")}
    assert set(holes) == {"lock_hole_start", "lock_hole_hold"}
    lock = e.sizes.lock_pin
    assert lock is not None
    turn = 1 if e.design.mechanism.rotation == "ccw" else -1
    for hole, at in (("lock_hole_start", lock.start_angle), ("lock_hole_hold", lock.hold_angle)):
        assert holes[hole].center == pytest.approx((lock.radius * math.cos(at), turn * lock.radius * math.sin(at)))
    # the pin stands where the frame's bush meets the hold hole at the hold
    pin = next(p for p in e.parts if p.key == "lock_pin")
    assert pin.placements[0].at[:2] == pytest.approx(holes["lock_hole_hold"].center)


def test_one_bush_serves_both_where_the_holes_are_far_enough_apart(tmp_path: Path) -> None:
    e = locked(tmp_path, "soil-tamper")
    lock, hold = e.sizes.lock_pin, float(e.figures.events.hold)
    assert lock is not None
    # turned on by the hold angle the hold hole is where the start hole was
    assert math.remainder(lock.hold_angle + hold - lock.start_angle, 2.0 * math.pi) == pytest.approx(0.0, abs=1e-9)
    other = locked(tmp_path, "impact-rig").sizes.lock_pin
    assert other is not None
    apart = 2.0 * other.radius * abs(math.sin((other.start_angle - other.hold_angle) / 2.0))
    assert apart - other.diameter >= max(2.0, 0.25 * other.diameter)


def test_the_pin_by_hand(tmp_path: Path) -> None:
    """Force is torque over radius; bending W f_y over the lever from the bush to the disc's middle."""
    e = locked(tmp_path, "impact-rig")
    lock = e.sizes.lock_pin
    assert lock is not None
    spring = 1.25 * float(e.figures.hold_torque)
    s = e.past.winding
    drive = 1.25 * float(np.max(np.abs(s.torque) + s.friction_torque))
    assert locked_torque(e.design, e.past) == pytest.approx(spring + drive)
    bend = next(c for c in e.checks if (c.part, c.check) == ("lock_pin", "pin bending"))
    force = (spring + drive) / lock.radius
    assert bend.demand == pytest.approx(force * (2.0 + e.sizes.disc.thickness / 2.0))
    assert lever(20.0) == 12.0
    d = lock.diameter
    assert bend.capacity == pytest.approx(math.pi * d**3 / 32.0 * lock.material.yield_strength(d))


def test_a_thin_pin_falls_short(tmp_path: Path) -> None:
    e = locked(tmp_path, "impact-rig", 'diameter = "8 mm"\n')
    assert {"pin bending", "pin shear with bending"} <= {c.check for c in e.falls_short if c.part == "lock_pin"}


def test_a_stalled_motor_counts(tmp_path: Path) -> None:
    drive = (
        '[drive]\nstall_torque = "40 N·m"\nfree_speed = "1400 rpm"\nreduction = 60\nefficiency = 0.8\n'
        'supply_voltage = "24 V"\n'
    )
    e = locked(tmp_path, "impact-rig", text=text_of("impact-rig") + "\n" + drive)
    assert locked_torque(e.design, e.past) == pytest.approx(1.25 * float(e.figures.hold_torque) + 40e3 * 60 * 0.8)

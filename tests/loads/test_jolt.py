"""What acceleration carries the disc over its null: a weight on a far sheave by hand, inertia by parallel axes."""

from __future__ import annotations

import cmath
import math
from dataclasses import replace

import pytest

from loads.inertia import LOOSE, inertia_of
from loads.jolt import holding_torque
from parts.design import Drive
from parts.shape import mass_properties
from tests.loads.test_trigger import BETA, FAR, L, R, machine, study
from tests.starters import NAMES, text_of


def test_jolt_of_a_weight_on_a_far_sheave_by_hand() -> None:
    """A constant pull F at the hold: arm h = −y_B of the seated pin, α = F h/J, W = F times the pull that is left."""
    text = FAR.replace('rate = "20 N/mm"', 'rate = 0\npreload = "500 N"')
    e = machine(text, "", '[drive]\ninertia = "0.05 kg·m2"\nholding_torque = "2 N·m"\nreduction = 30\nefficiency = 0.8')
    jolt = study(e).jolt
    hold = float(e.figures.events.hold)
    bx, by = R - L * math.cos(BETA), -L * math.sin(BETA)
    arm = bx * math.sin(hold) + by * math.cos(hold)
    assert jolt.back == pytest.approx(500.0 * abs(arm), rel=1e-3)
    assert jolt.inertia == pytest.approx(50_000.0 + inertia_of(e.parts).seated(R, BETA))
    assert jolt.dead_acceleration == pytest.approx(1000.0 * jolt.back / jolt.inertia)
    # the pull left to the null: |OB| (1 − cos) of the angle that is left, which is the hold margin
    reach = math.hypot(bx, by)
    assert jolt.barrier == pytest.approx(500.0 * reach * (1.0 - math.cos(math.radians(4.0))), rel=1e-3)
    assert 0.5 * jolt.inertia * jolt.dead_speed**2 == pytest.approx(1000.0 * jolt.barrier)
    # 2 N·m × 30 at a disc that has to drive the gear backwards, at 0.75
    assert jolt.holding == pytest.approx(2000.0 * 30 / 0.75)
    assert jolt.held_acceleration == pytest.approx(1000.0 * (jolt.back + 80_000.0) / jolt.inertia)


def test_what_holds() -> None:
    drive = Drive(3000.0, 300.0, None, None, 10.0, 0.4, 0.0, None, None, None, "disc")
    assert holding_torque(None) is None
    assert holding_torque(replace(drive, stall_torque=None)) is None
    assert holding_torque(drive) == math.inf  # locks itself
    assert holding_torque(replace(drive, backdriving_efficiency=0.5)) == pytest.approx(60_000.0)
    assert holding_torque(replace(drive, backdriving_efficiency=0.5, holding_torque=0.0)) == 0.0


def test_inertia_of_disc_and_link_by_parallel_axes() -> None:
    """The two heaviest parts by hand; pins, stop and spacers are little more."""
    e = machine(text_of("seed-thrower"))
    m = e.design.mechanism
    found = inertia_of(e.parts).seated(m.crank_radius, m.seat_angle)
    link = next(part for part in e.parts if part.key == "swing_link")
    disc = next(part for part in e.parts if part.key == "crank_disc")
    body, plate = mass_properties(link), mass_properties(disc)
    middle = body.center[0]
    # cosine rule: the seated link's middle from the disc axis
    away = m.crank_radius**2 + middle**2 - 2 * m.crank_radius * middle * math.cos(m.seat_angle)
    both = plate.inertia_z + body.inertia_z - body.mass * middle**2 + body.mass * away
    assert both < found < 1.3 * both


@pytest.mark.parametrize("name", NAMES)
def test_unbalance_is_the_first_moment_of_every_part_where_it_is(name: str) -> None:
    """By complex numbers, the link's parts off its axis as well."""
    e = machine(text_of(name))
    m, turn = e.design.mechanism, float(e.machine.turn)
    first = 0j
    for part in e.parts:
        body = mass_properties(part)
        for place in part.placements:
            at = complex(*place.at[:2]) + complex(*body.center[:2]) * cmath.rect(1.0, place.angle)
            if place.mover == "link":
                at = m.crank_radius + at * cmath.rect(1.0, math.pi + turn * m.seat_angle)
            if place.mover in ("disc", "link") and part.key not in LOOSE:
                first += body.mass * at
    assert abs(first) > 0.1
    assert inertia_of(e.parts).unbalance(m.crank_radius, m.seat_angle, turn) == pytest.approx(abs(first), rel=1e-9)

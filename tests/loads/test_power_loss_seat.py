"""Seat angles that unwind, the trade between them, and shims: closed forms and the geometry of the drawn stop."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from loads.power_loss.seat import (
    GRAIN,
    SETTING,
    least_seat_angles,
    recommended,
    trade,
)
from loads.power_loss.shims import seat_with_shim, shim_for, shims
from parts.design import Mechanism
from parts.sizes import StopSizes
from parts.stop_layout import stop_center
from tests.loads.machines import FAR, linear, machine
from tests.loads.power_losses import DEG, far, outcome_of, rubbing


def test_the_recommended_seat_angle() -> None:
    m = far(3.0, 1.5, 0.9, 0.6)
    least, scattered = least_seat_angles(m)
    assert least is not None
    assert scattered is not None
    assert scattered == pytest.approx(math.asin(1.5 * 2.4 / 60.0), abs=1e-6)
    choice, why = recommended(m, least, scattered)
    assert choice is not None
    assert 0.0 <= choice - scattered < GRAIN
    assert choice / GRAIN == pytest.approx(round(choice / GRAIN))
    assert "1.5 times the friction" in why
    assert "rule of our own" in why
    smooth = least_seat_angles(far(3.0))
    assert smooth == pytest.approx([0.0, 0.0], abs=1e-9)
    assert recommended(far(3.0), *smooth)[0] == pytest.approx(SETTING)


def test_a_seat_angle_that_gives_the_disc_too_much_is_not_recommended() -> None:
    """s of 9 mm only: past the null the pull falls fast. Half the friction would recommend what it needs."""
    m = rubbing(machine(60, 69, 64, 3, FAR, 0, 1, linear(0, 100)), 4.0, 1.0, 1.0)
    least, scattered = least_seat_angles(m)
    choice, why = recommended(m, least, scattered)
    assert choice is None or (least is not None and scattered is not None and least <= choice < scattered)
    assert "2%" in why
    assert recommended(m, None, None)[0] is None


def test_too_much_friction_has_no_least_seat_angle() -> None:
    m = far(3.0, 25.0, 0.9, 0.6)
    assert least_seat_angles(m) == [None, None]
    assert "no seat angle" in recommended(m, None, None)[1]


def test_the_trade_over_seat_angle() -> None:
    m = far(3.0, 1.5, 0.9, 0.6)
    least = least_seat_angles(m)[0]
    rows = trade(m, {"as designed": 3.0 * DEG, "least": least})
    assert [round(r.seat / DEG, 2) for r in rows] == [-3, -2, -1, 0, 1, 2, 2.29, 3, 4, 5]
    assert [r.marks for r in rows if r.marks] == [("least",), ("as designed",)]
    for row in rows:
        alone = outcome_of(replace(m, seat_angle=np.asarray(row.seat)))
        assert [s.end for s in alone.stretches] == pytest.approx([s.end for s in row.outcome.stretches], abs=1e-9)
        assert (row.middle is None) == (row.seat >= (least or 0.0) - 1e-9)
        assert (row.clearance < -1e-9) == (row.middle is not None)
    firing = [r.outcome.self_firing for r in rows]
    widths = [0.0 if f is None else f[1] - f[0] for f in firing]
    assert widths == sorted(widths)
    wide = trade(m, {"as designed": 9.5 * DEG})
    assert wide[-1].seat == pytest.approx(10.0 * DEG)
    assert wide[0].seat == pytest.approx(-3.0 * DEG)


POST = StopSizes("post", 25.0, 0.0, 0.0, 14.0, 0.0, "M8", 0.0, 0.0, None)  # type: ignore[arg-type]
BLOCK = StopSizes("block", 0.0, 30.0, 24.0, 14.0, 6.0, "M8", 9.0, 6.8, None)  # type: ignore[arg-type]
M = Mechanism("twin", "ccw", 58.0, 86.0, 3.0 * DEG, 71.0, 4.0 * DEG)
WIDTH = 40.0


def _off_axis(point: tuple[float, float], direction: float) -> float:
    """Distance (mm) of a point of the disc frame from the link's axis, positive where the stop stands at the seat."""
    x, y = point[0] - M.crank_radius, point[1]
    return math.sin(direction) * x - math.cos(direction) * y


@pytest.mark.parametrize("thickness", [-1.0, 0.0, 0.4, 2.5])
def test_a_shim_on_a_post(thickness: float) -> None:
    seat = seat_with_shim(M, WIDTH, POST, thickness)
    assert seat is not None
    axis = stop_center(M, WIDTH, POST)[0]
    assert _off_axis(axis, math.pi + seat) == pytest.approx(WIDTH / 2 + POST.diameter / 2 + thickness, abs=1e-9)
    assert shim_for(M, WIDTH, POST, seat) == pytest.approx(thickness, abs=1e-9)
    assert (seat > M.seat_angle + 1e-9) == (thickness > 0.0)


@pytest.mark.parametrize("thickness", [-1.0, 0.0, 0.4, 2.5])
def test_a_shim_on_a_block(thickness: float) -> None:
    seat = seat_with_shim(M, WIDTH, BLOCK, thickness)
    assert seat is not None
    (x, y), direction = stop_center(M, WIDTH, BLOCK)
    up = BLOCK.width / 2 + thickness  # from the block's middle, square to its face, towards the link
    spot = (x - up * math.sin(direction), y + up * math.cos(direction))
    assert _off_axis(spot, math.pi + seat) == pytest.approx(WIDTH / 2, abs=1e-9)
    assert shim_for(M, WIDTH, BLOCK, seat) == pytest.approx(thickness, abs=1e-9)


def test_the_table_of_shims() -> None:
    rows = shims(M, WIDTH, POST, (0.0, 0.5, 1.0, 9.0), {"least": 2.5 * DEG, "recommended": 4.0 * DEG})
    assert [r.mark for r in rows] == ["least", "", "", "", "recommended"]
    assert rows[0].thickness < 0.0 == rows[1].thickness
    assert [r.seat for r in rows] == sorted(r.seat for r in rows)
    assert seat_with_shim(M, WIDTH, POST, 50.0) is None

"""Two features of the impact rig worked out once more from the mechanism alone, from spring and geometry to the factor."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import pytest

from parts.design import Floats
from tests.loads.test_fatigue_study import machine, row

# templates/impact-rig.toml
R, L, BETA, REACH = 58.0, 86.0, math.radians(3.0), 71.0
CX, CY, RADIUS, ETA = 460.0, 30.0, 80.0, 0.97
DRAWS, FORCES = [0.0, 60.0, 120.0, 180.0], [600.0, 8600.0, 17400.0, 27000.0]
SHOCK, SHARE, SHOTS = 1.25, 0.6, 20000.0


def line_from(x: Floats, y: Floats) -> tuple[Floats, Floats]:
    """Direction of the chain from a point to the left side of the sheave, and its length up to a fixed point of the rim."""
    apart = np.hypot(CX - x, CY - y)
    direction = np.arctan2(CY - y, CX - x) + np.arcsin(RADIUS / apart)
    return direction, np.sqrt(apart**2 - RADIUS**2) + RADIUS * direction


@dataclass(frozen=True)
class Shot:
    """Directions in the machine frame, forces of one side with shock and share."""

    crank: Floats
    link: Floats
    pull: Floats  # N along the chain
    along: Floats  # the chain's direction
    seated: Floats


def shot() -> Shot:
    start, whole = line_from(np.array(0.0), np.array(0.0))
    first = whole - R  # from the crank pin at the start, which lies on the same line
    theta = np.linspace(0.0, 2.0 * math.pi, 72001)
    crank = start + theta
    ax, ay = R * np.cos(crank), R * np.sin(crank)
    free, length = line_from(ax, ay)
    # the link angle falls from π; the stop catches it at the seat angle
    caught = (math.pi - theta) + (free - start) <= BETA
    seated = np.maximum.accumulate(caught)
    link = np.where(seated, crank + math.pi + BETA, free)
    bx, by = ax + L * np.cos(link), ay + L * np.sin(link)
    held, held_length = line_from(bx, by)
    along = np.where(seated, held, free)
    drawn = np.where(seated, held_length + L - first, length - first)
    force = np.interp(drawn, DRAWS, FORCES) / ETA * SHOCK * SHARE
    # it lets go where the chain line passes the crank pin
    side = np.sin(along - link)
    gone = seated & (side * side[np.argmax(seated) + 10] < 0.0)
    n = int(np.argmax(gone))
    assert n > 0
    return Shot(crank[:n], link[:n], force[:n], along[:n], seated[:n].astype(float))


def s_f(s_ut: float, s_e: float) -> float:
    """Shigley equations 6-13 to 6-15 at the stated shots."""
    f = min(0.9, 1.06 - 4.1e-4 * s_ut + 1.5e-7 * s_ut**2)
    b = -math.log10(f * s_ut / s_e) / 3.0
    return float((f * s_ut) ** 2 / s_e * SHOTS**b)


def test_the_link_at_its_stop() -> None:
    """Corners of the section: N/(0.85 A) ± 6 M/(t w²), M = T sin α (L − d); one cycle, Goodman with S_f."""
    e, s = machine("impact-rig", SHOTS), shot()
    w, t = e.sizes.link.width, e.sizes.link.thickness
    axial = s.pull * np.cos(s.along - s.link) / (w * t) / 0.85
    bending = 6.0 * s.pull * np.sin(s.along - s.link) * (L - REACH) / (t * w**2)
    corners = np.stack([axial + bending, axial - bending])
    found = row(e, "swing_link", "stop_flank")
    s_ut, s_e = 770.0, found.endurance_limit
    uses = []
    for stress in corners:
        top, low = max(0.0, float(stress.max())), min(0.0, float(stress.min()))
        uses.append(((top - low) / 2.0 / s_f(s_ut, s_e) + max(0.0, (top + low) / 2.0) / s_ut, top, low))
    use, top, low = max(uses)
    assert found.amplitude == pytest.approx((top - low) / 2.0, rel=2e-3)
    assert found.mean == pytest.approx((top + low) / 2.0, rel=5e-3)
    assert found.factor == pytest.approx(1.0 / use, rel=5e-3)
    # tension on the way to the middle, compression of the strut near the end
    assert top > 0.0 > low


def test_the_crank_pin_at_its_root() -> None:
    """P = −(T u + N n), N = T L sin α/d; σ = K_f 32 P a/(π d³) at fibres that turn with the disc; K_f 2.7·1.1^0.43."""
    e, s = machine("impact-rig", SHOTS, crank_pin__diameter='"16 mm"'), shot()
    push = s.seated * s.pull * L / REACH * np.sin(s.along - s.link)  # what the stop takes, across the link
    x = -s.pull * np.cos(s.along) - push * np.sin(s.link)
    y = -s.pull * np.sin(s.along) + push * np.cos(s.link)
    d, arm = e.sizes.crank_pin.diameter, e.sizes.link.thickness / 2.0 + e.sizes.plate_gap
    k_f = 2.7 * 1.1**0.43
    found = row(e, "crank_pin", "root")
    worst = amplitude = mean = 0.0
    for degrees in range(0, 360, 15):
        at = math.radians(degrees)
        stress = k_f * 32.0 * arm / (math.pi * d**3) * (
            (x * np.cos(s.crank) + y * np.sin(s.crank)) * math.cos(at)
            + (-x * np.sin(s.crank) + y * np.cos(s.crank)) * math.sin(at)
        )  # fmt: skip
        top, low = max(0.0, float(stress.max())), min(0.0, float(stress.min()))
        use = (top - low) / 2.0 / s_f(1100.0, found.endurance_limit) + max(0.0, (top + low) / 2.0) / 1100.0
        if use > worst:
            worst, amplitude, mean = use, (top - low) / 2.0, (top + low) / 2.0
    assert found.amplitude == pytest.approx(amplitude, rel=3e-3)
    assert found.mean == pytest.approx(mean, rel=1e-2)
    # a second, smaller cycle takes a little more
    assert 0.97 / worst < (found.factor or 0.0) <= 1.003 / worst

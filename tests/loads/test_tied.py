"""Machines with a rigid tie: kinematics against the published equations of slider-crank and four-bar, and energy."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from loads.cycle import Cycle, cycle
from loads.lines import TiedLine
from loads.linkage import Linkage, make_tied, state, to_machine
from tests.loads.machines import TABLE, linear


def slide(
    r: float = 60.0,
    link: float = 90.0,
    tie: float = 300.0,
    offset: float = 0.0,
    beta: float = 3.0,
    turn: float = 1.0,
    efficiency: float = 1.0,
) -> Linkage:
    """A slide that draws to the left, ``offset`` mm above the disc axis."""
    return make_tied(
        crank_radius=r, link_length=link, seat_angle=np.radians(beta), stop_reach=0.8 * link, tie_length=tie,
        slide=(0.0, offset, np.pi), spring=linear(200.0, 80.0), turn=turn, efficiency=efficiency,
    )  # fmt: skip


def rocker(
    r: float = 60.0, link: float = 90.0, tie: float = 300.0, side: float = 1.0, share: float = 0.7, turn: float = 1.0
) -> Linkage:
    """A rocker whose arm stands nearly square to the tie, the pivot below it (side 1) or above."""
    start = r + link + tie
    return make_tied(
        crank_radius=r, link_length=link, seat_angle=np.radians(3.0), stop_reach=0.8 * link, tie_length=tie,
        rocker=(start - 90.0, -side * 400.0, np.hypot(90.0, 400.0), side, share * 400.0, np.nan),
        spring=linear(200.0, 80.0), turn=turn,
    )  # fmt: skip


def test_the_free_stage_is_a_slider_crank() -> None:
    """x = r(1 − cos θ) + l (1 − sqrt(1 − (r/l)² sin² θ)), any textbook of the mechanics of machines; l = link + tie."""
    m = slide()
    theta = np.linspace(0.0, np.radians(170.0), 35)
    x = state(m, theta, cycle(m).events.catch).pull
    ratio = 60.0 / 390.0
    wanted = 60.0 * (1.0 - np.cos(theta)) + 390.0 * (1.0 - np.sqrt(1.0 - (ratio * np.sin(theta)) ** 2))
    assert x == pytest.approx(wanted, rel=1e-12, abs=1e-10)


def test_a_rocker_obeys_freudenstein() -> None:
    """K1 cos ψ − K2 cos θ + K3 = cos(θ − ψ): K1 = d/a, K2 = d/c, K3 = (a² − b² + c² + d²)/2ac.

    Freudenstein, An Analytical Approach to the Design of Four-Link Mechanisms, Trans. ASME 76 (1954); θ and ψ from the
    frame line O→pivot, a crank, b coupler, c rocker, d frame.
    """
    m = rocker(turn=-1.0, side=-1.0)
    c = cycle(m)
    theta = np.linspace(0.0, float(c.events.catch) - 1e-6, 40)
    s = state(m, theta, c.events.catch)
    line = s.line
    assert isinstance(line, TiedLine)
    ax, ay = to_machine(m.expanded(), line.qx, line.qy)
    px, py = to_machine(m.expanded(), line.qx + line.length * line.ux, line.qy + line.length * line.uy)
    pivot = (60.0 + 90.0 + 300.0 - 90.0, 400.0)
    frame, arm, coupler = float(np.hypot(*pivot)), float(np.hypot(90.0, 400.0)), 390.0
    base = np.arctan2(pivot[1], pivot[0])
    crank = np.arctan2(ay, ax) - base
    swing = np.arctan2(py - pivot[1], px - pivot[0]) - base
    k1, k2 = frame / 60.0, frame / arm
    k3 = (60.0**2 - coupler**2 + arm**2 + frame**2) / (2.0 * 60.0 * arm)
    assert np.allclose(k1 * np.cos(swing) - k2 * np.cos(crank) + k3, np.cos(crank - swing), atol=1e-9)
    # the spring's sector turns with the rocker
    turned = np.unwrap(swing) - swing[0]
    assert s.pull == pytest.approx(0.7 * 400.0 * np.abs(turned), abs=1e-9)
    assert s.pull[-1] > 80.0


def test_a_long_tie_in_line_is_a_far_sheave() -> None:
    """With the tie a thousand kilometres long the check table's far machine comes out again."""
    far = slide(tie=1e9, beta=0.0)
    far = replace(far, spring=linear(0.0, 100.0), stop_reach=np.asarray(80.0))
    mine, known = cycle(far), cycle(TABLE["far"])
    for name in ("first_peak", "second_peak", "largest_tension", "largest_stop", "largest_link_bending", "most_pull"):
        assert getattr(mine, name) == pytest.approx(getattr(known, name), rel=2e-5), name


@st.composite
def tied(draw: st.DrawFn) -> Linkage:
    r = draw(st.floats(20, 100))
    link = r * draw(st.floats(1.2, 2.0))
    tie = (r + link) * draw(st.floats(1.3, 4.0))
    turn = draw(st.sampled_from([1.0, -1.0]))
    efficiency = draw(st.floats(0.7, 1.0))
    if draw(st.booleans()):
        return slide(r, link, tie, draw(st.floats(-0.4, 0.4)) * tie, draw(st.floats(-4, 6)), turn, efficiency)
    start, side = r + link + tie, draw(st.sampled_from([1.0, -1.0]))
    across = draw(st.floats(4.0, 8.0)) * (r + link)
    back = draw(st.floats(0.3, 0.7)) * (r + link)
    return make_tied(
        crank_radius=r, link_length=link, seat_angle=np.radians(draw(st.floats(-4, 6))), stop_reach=0.8 * link,
        tie_length=tie, rocker=(start - back, -side * across, np.hypot(back, across), side,
                                across * draw(st.floats(0.3, 1.2)), np.nan),
        spring=linear(draw(st.floats(1, 2000)), draw(st.floats(0, 200))), turn=turn, efficiency=efficiency,
    )  # fmt: skip


def work(m: Linkage, c: Cycle) -> float:
    end = float(c.events.hold)
    edges = sorted({0.0, min(float(c.events.catch), end), end})
    return sum(
        float(
            quad(lambda t: float(state(m, np.array([t]), c.events.catch).torque[0]), a, b, epsrel=1e-10, limit=200)[0]
        )
        for a, b in pairwise(edges)
    )


@settings(max_examples=60, deadline=None)
@given(tied())
def test_work_of_the_drive_is_energy_over_efficiency(m: Linkage) -> None:
    c = cycle(m)
    assert np.isfinite(float(c.events.release))
    assert work(m, c) * float(m.efficiency) == pytest.approx(float(c.stored_energy), rel=1e-6, abs=1e-2)


@settings(max_examples=40, deadline=None)
@given(tied())
def test_rates_are_the_slopes_of_what_they_are_rates_of(m: Linkage) -> None:
    c = cycle(m)
    step = 1e-5
    theta = np.linspace(0.1, float(c.events.release) - 0.05, 50)
    theta = theta[np.abs(theta - float(c.events.catch)) > 0.01]
    low, here, high = (state(m, theta + d, c.events.catch) for d in (-step, 0.0, step))
    slope = (high.line.direction - low.line.direction) / (2.0 * step)
    assert np.allclose(here.line.turning, slope, atol=1e-6)
    rate = (high.pull - low.pull) / (2.0 * step)
    assert np.allclose(here.line.arm * here.line.gearing, rate, atol=1e-4 * float(m.link_length))
    assert np.all(here.line.gearing > 0.0)


@settings(max_examples=40, deadline=None)
@given(tied())
def test_the_output_is_in_balance_across_its_guide(m: Linkage) -> None:
    """Along the way of its pin, tie and spring hold each other but for the friction that the efficiency stands for."""
    c = cycle(m)
    s = state(m, np.linspace(0.1, float(c.events.release) - 0.05, 30), c.events.catch)
    assert isinstance(s.line, TiedLine)
    along = s.tension * s.line.closing - s.force * s.line.share
    assert np.allclose(along, s.force * s.line.share * (1.0 / float(m.efficiency) - 1.0), atol=1e-9 * s.tension.max())


def test_the_mirror_image_is_the_same_machine() -> None:
    one = cycle(slide(offset=35.0))
    other = cycle(slide(offset=-35.0, turn=-1.0))
    plain = cycle(slide(offset=-35.0))
    for name in ("first_peak", "second_peak", "largest_stop", "stored_energy", "most_pull"):
        assert getattr(one, name) == pytest.approx(getattr(other, name), rel=1e-12), name
    assert abs(float(one.first_peak) / float(plain.first_peak) - 1.0) > 1e-3
    assert float(slide(offset=35.0).start_direction) == pytest.approx(np.arcsin(35.0 / 450.0))


def test_many_tied_machines_at_once_are_each_by_itself() -> None:
    radii = np.array([40.0, 50.0, 60.0])
    many = make_tied(
        crank_radius=radii, link_length=90.0, seat_angle=0.05, stop_reach=70.0, tie_length=300.0,
        slide=(0.0, 10.0, np.pi), spring=linear(200.0, 80.0),
    )  # fmt: skip
    together = cycle(many)
    for i in range(3):
        alone = cycle(many.chunk(slice(i, i + 1)))
        assert together.second_peak[i] == pytest.approx(float(alone.second_peak[0]), rel=1e-12)
        assert together.events.release[i] == pytest.approx(float(alone.events.release[0]), rel=1e-12)

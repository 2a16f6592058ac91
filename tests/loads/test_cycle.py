"""The cycle against the check table, the closed forms and what must always hold."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from loads.cycle import Cycle, cycle, events, trace, trace_angles
from loads.linkage import Linkage, make_linkage, state
from loads.spring_law import SpringLaw, spring_energy, spring_force
from tests.loads.machines import FAR, TABLE, linear, machine, machines, run_of

# catch, null, release (deg), pull (mm), first peak (N·m) at (deg), second peak at, least between, then the largest chain
# tension, crank pin force, stop force (N) and link bending (N·m). Made by a separate calculation: virtual work on the
# path length and one linear equilibrium solve, confirmed by a second derivation.
CHECKED = {
    "far": (180.00, 360.00, 360.00, 180.00, 467.65, 120.0, 458.60, 280.7, 0.00, 18000.0, 18000.0, 17197.3, 152.86),
    "far+3": (177.00, 351.04, 357.00, 180.25, 467.65, 120.0, 462.49, 271.8, 37.66, 18024.6, 18010.6, 17540.4, 155.91),
    "far-3": (183.00, 368.96, 363.00, 180.08, 467.65, 120.0, 462.49, 289.8, -37.66, 18008.2, 18008.2, 16858.5, 149.85),
    "near": (177.74, 354.34, 358.26, 170.09, 674.46, 115.5, 763.03, 272.1, 37.57, 30397.1, 30387.2, 31193.9, 385.34),
    "up": (175.60, 348.58, 356.40, 92.21, 36.00, 84.3, 19.45, 255.5, 2.51, 1200.0, 1200.0, 1452.6, 9.60),
}
# half a unit of the last digit that was given, and a hair for rounding on top
WITHIN = (0.005, 0.005, 0.005, 0.005, 0.005, 0.05, 0.005, 0.05, 0.005, 0.05, 0.05, 0.05, 0.005)


def figures(m: Linkage) -> tuple[float, ...]:
    c = cycle(m)
    pull = state(m, np.array([float(c.events.first_end)]), c.events.catch).pull[0]
    angles = np.degrees([c.events.catch, c.events.null, c.events.release])
    return tuple(
        float(x)
        for x in (
            *angles, pull, c.first_peak / 1e3, np.degrees(c.first_peak_at), c.second_peak / 1e3,
            np.degrees(c.second_peak_at), c.middle_least / 1e3, c.largest_tension, c.largest_crank_pin, c.largest_stop,
            c.largest_link_bending / 1e3,
        )
    )  # fmt: skip


@pytest.mark.parametrize("name", CHECKED)
def test_the_check_table(name: str) -> None:
    for found, wanted, within in zip(figures(TABLE[name]), CHECKED[name], WITHIN, strict=True):
        assert found == pytest.approx(wanted, abs=within * 1.15)


def test_turning_the_near_design_clockwise() -> None:
    same_wrap = cycle(machine(55, 85, 70, 2, (420, 20), 45, 1, linear(500, 180), slack=4, turn=-1.0))
    assert same_wrap.first_peak / 1e3 == pytest.approx(674.11, abs=0.006)
    assert same_wrap.second_peak / 1e3 == pytest.approx(762.98, abs=0.006)
    mirrored = machine(55, 85, 70, 2, (420, -20), 45, -1, linear(500, 180), slack=4, turn=-1.0)
    assert figures(mirrored) == pytest.approx(figures(TABLE["near"]), rel=1e-12)


def test_first_peak_of_a_far_sheave_in_closed_form() -> None:
    c = cycle(TABLE["far"])
    assert c.first_peak == pytest.approx(
        3.0 * np.sqrt(3.0) / 4.0 * 100.0 * 60.0**2, rel=5e-6
    )  # the sheave is 10 km away, not infinitely far
    assert np.degrees(c.first_peak_at) == pytest.approx(120.0, abs=1e-3)


def test_whole_pull_of_a_far_sheave_is_twice_the_link() -> None:
    assert cycle(TABLE["far"]).most_pull == pytest.approx(180.0, rel=1e-7)


@pytest.mark.parametrize(("ratio", "first_to_second"), [(0.6631, 1.0), (0.5, 2.424)])
def test_peaks_of_a_far_sheave(ratio: float, first_to_second: float) -> None:
    """r/L = 0.6631 balances the peaks; with r = s = L/2 the larger stands to the smaller as 2.424 to 1."""
    c = cycle(machine(100 * ratio, 100, 80, 0, FAR, 0, 1, linear(0, 50)))
    high, low = max(c.first_peak, c.second_peak), min(c.first_peak, c.second_peak)
    assert high / low == pytest.approx(first_to_second, rel=3e-4)


def test_peak_over_mean_torque_where_the_peaks_are_equal() -> None:
    c = cycle(machine(66.31, 100, 80, 0, FAR, 0, 1, linear(0, 50), hold_margin=0.0))
    assert c.first_peak / c.mean_torque == pytest.approx(1.795, abs=1e-3)


def _work(m: Linkage, c: Cycle, end: float) -> float:
    """Work of the drive from 0 to ``end``, by adaptive quadrature between the corners of the torque."""
    corners = [float(c.events.catch)]
    law = m.spring
    knots = [float(m.slack)] if law.draws is None else list(law.draws + float(m.slack))
    theta = np.linspace(0.0, end, 4001)
    pull = state(m, theta, c.events.catch).pull
    for knot in knots:
        crossing = np.flatnonzero(np.diff(np.sign(pull - knot)) != 0)
        for i in crossing:
            low, high = theta[i], theta[i + 1]
            for _ in range(60):
                middle = (low + high) / 2
                below = state(m, np.array([middle]), c.events.catch).pull[0] - knot
                low, high = (middle, high) if np.sign(below) == np.sign(pull[i] - knot) else (low, middle)
            corners.append((low + high) / 2)
    edges = [0.0, *sorted(x for x in corners if 0.0 < x < end), end]
    total = 0.0
    for a, b in pairwise(edges):
        total += quad(
            lambda t: float(state(m, np.array([t]), c.events.catch).torque[0]),
            a,
            b,
            epsabs=1e-4,
            epsrel=1e-10,
            limit=200,
        )[0]
    return total


@pytest.mark.parametrize("name", TABLE)
def test_work_of_the_drive_is_the_energy_in_the_spring(name: str) -> None:
    m = TABLE[name]
    c = cycle(m)
    assert _work(m, c, float(c.events.hold)) == pytest.approx(float(c.stored_energy), rel=1e-7)


@settings(max_examples=40, deadline=None)
@given(machines())
def test_work_is_energy_for_every_design(m: Linkage) -> None:
    c = cycle(m)
    work = _work(m, c, float(c.events.hold)) * float(m.efficiency)
    assert work == pytest.approx(float(c.stored_energy), rel=1e-6, abs=1e-2)


@settings(max_examples=60, deadline=None)
@given(machines())
def test_a_mirrored_design_has_the_same_scalars(m: Linkage) -> None:
    """Every y negated, left and right exchanged, cw for ccw."""
    run = run_of(m)
    phi, t0, radius, w = m.start_direction * m.turn, run.distance, run.pitch_radius, run.wrap_side
    x, y = t0 * np.cos(phi) + w * radius * np.sin(phi), t0 * np.sin(phi) - w * radius * np.cos(phi)

    def build(turn: float) -> Linkage:
        return make_linkage(
            crank_radius=m.crank_radius, link_length=m.link_length, seat_angle=m.seat_angle, stop_reach=m.stop_reach,
            sheave_x=x, sheave_y=turn * y, pitch_radius=radius, wrap=w * turn, spring=m.spring, turn=turn, slack=m.slack,
            efficiency=m.efficiency,
        )  # fmt: skip

    one, other = build(1.0), build(-1.0)
    assert figures(one) == pytest.approx(figures(other), rel=1e-9)
    assert other.start_direction == pytest.approx(-one.start_direction)


@settings(max_examples=60, deadline=None)
@given(machines())
def test_events_are_where_the_mechanics_puts_them(m: Linkage) -> None:
    """Catch: the torque is T r sin β. Null: none. Release: the stop lets go. Far-sheave angles bound none of it."""
    c = cycle(m)
    at = c.events
    s = state(m, np.array([float(at.catch)]), at.catch)
    assert s.torque[0] == pytest.approx(
        float(s.tension[0] * m.crank_radius * np.sin(m.seat_angle)), abs=1e-5 * (1 + s.tension[0])
    )
    after = state(m, np.array([float(at.catch) + 1e-9, float(at.null), float(at.release)]), at.catch)
    assert after.torque[0] == pytest.approx(s.torque[0], rel=1e-5, abs=1e-6 * (1 + s.tension[0] * m.link_length))
    assert after.pull[0] == pytest.approx(s.pull[0], abs=1e-6)
    assert after.torque[1] == pytest.approx(0.0, abs=1e-6 * (1 + after.tension[1]))
    assert after.stop_force[2] == pytest.approx(0.0, abs=1e-6 * (1 + after.tension[2]))


@settings(max_examples=40, deadline=None)
@given(machines())
def test_no_sample_is_above_a_refined_peak(m: Linkage) -> None:
    c = cycle(m)
    fine = np.linspace(0.0, float(c.events.release), 7001)
    s = state(m, fine, c.events.catch)
    free, seated = fine <= float(c.events.catch), (fine > float(c.events.catch)) & (fine <= float(c.events.first_end))
    slack = 1e-7 * float(c.largest_tension) * float(m.crank_radius) + 1e-9
    assert s.torque[free].max() <= c.first_peak + slack
    assert s.torque[seated].max() <= c.second_peak + slack
    assert s.tension.max() <= c.largest_tension * (1 + 1e-9)
    assert s.pin_force.max() <= c.largest_crank_pin * (1 + 1e-7)
    assert s.stop_force.max() <= c.largest_stop * (1 + 1e-7) + 1e-9
    assert s.link_bending.max() <= c.largest_link_bending * (1 + 1e-7) + 1e-6


def test_many_designs_at_once_are_each_as_alone() -> None:
    """Leading axes broadcast: a grid of crank radii and seat angles, more than one chunk of them."""
    r = np.linspace(40, 62, 30)[:, None]
    beta = np.radians(np.linspace(-3, 5, 20))[None, :]
    many = make_linkage(
        crank_radius=r, link_length=90.0, seat_angle=beta, stop_reach=75.0, sheave_x=420.0, sheave_y=15.0,
        pitch_radius=45.0, wrap=1.0, spring=linear(400, 150), slack=2.0,
    )  # fmt: skip
    assert many.shape == (30, 20)
    together = cycle(many)
    assert together.first_peak.shape == (30, 20)
    for i, k in ((0, 0), (13, 7), (29, 19)):
        alone = cycle(
            machine(float(r[i, 0]), 90, 75, float(np.degrees(beta[0, k])), (420, 15), 45, 1, linear(400, 150), slack=2)
        )
        assert together.first_peak[i, k] == pytest.approx(float(alone.first_peak), rel=1e-9)
        assert together.events.release[i, k] == pytest.approx(float(alone.events.release), rel=1e-12)
        assert together.largest_stop[i, k] == pytest.approx(float(alone.largest_stop), rel=1e-9)


def test_a_preloaded_spring_pulls_at_the_start_only_without_slack() -> None:
    for slack, tension in ((0.0, 500.0), (4.0, 0.0)):
        m = machine(55, 85, 70, 2, (420, 20), 45, 1, linear(500, 180), slack=slack)
        assert state(m, np.array([0.0]), cycle(m).events.catch).tension[0] == pytest.approx(tension)


def test_the_peak_may_be_the_corner_where_the_slack_is_taken_up() -> None:
    """So much slack that the chain comes taut past the longest arm: the torque jumps there, and that is its peak."""
    m = machine(60, 90, 80, 3, (500, 0), 40, 1, linear(3000, 0), slack=100.0)
    c = cycle(m)
    theta = np.linspace(0, float(c.events.catch), 200_001)
    s = state(m, theta, c.events.catch)
    assert c.first_peak == pytest.approx(s.torque.max(), rel=1e-4)
    assert c.first_peak >= s.torque.max() - 1e-6


def test_trace_has_each_step_and_each_event_once() -> None:
    c = cycle(TABLE["near"])
    angles = np.degrees(trace_angles(c))
    shown = np.round(angles, 6)
    assert np.all(np.diff(shown) > 0)
    for event in (c.events.catch, c.events.null, c.events.hold, c.events.release, c.first_peak_at, c.second_peak_at):
        assert np.min(np.abs(shown - np.degrees(float(event)))) < 2e-6
    assert {round(x, 1) for x in np.arange(0, 358, 0.5)} <= {round(float(x), 6) for x in shown}
    seated = trace(TABLE["near"], c).seated
    assert not seated[angles <= np.degrees(float(c.events.catch))].any()
    assert seated[-1]


def test_spring_table_against_a_general_purpose_integral() -> None:
    law = SpringLaw(np.asarray(0.0), np.asarray(0.0), np.array([0.0, 10.0, 40.0]), np.array([5.0, 100.0, 130.0]))
    for draw in (0.0, 3.0, 10.0, 25.0, 40.0):
        area = quad(lambda x: float(spring_force(law, np.asarray(x))), 0, draw, points=[10.0])[0]
        assert float(spring_energy(law, np.asarray(draw))) == pytest.approx(area, rel=1e-9, abs=1e-9)


def test_table_and_straight_line_agree() -> None:
    knots = np.array([0.0, 50.0, 300.0])
    table = SpringLaw(np.asarray(0.0), np.asarray(0.0), knots, 500.0 + 180.0 * knots)
    one = figures(machine(55, 85, 70, 2, (420, 20), 45, 1, table, slack=4))
    assert one == pytest.approx(figures(TABLE["near"]), rel=1e-9)


@settings(max_examples=20, deadline=None)
@given(st.floats(-5, 8))
def test_far_sheave_events_in_closed_form(beta: float) -> None:
    at = events(machine(60, 90, 80, beta, FAR, 0, 1, linear(0, 100)))
    assert np.degrees(at.catch) == pytest.approx(180.0 - beta, abs=1e-3)
    assert np.degrees(at.release) == pytest.approx(360.0 - beta, abs=1e-3)


NARROW = {
    "a bump before the free peak": [(0, 0), (60, 6000), (61, 9000), (62, 6000), (200, 20000)],
    "a spike between samples": [(0, 0), (60, 6000), (60.4, 25000), (60.8, 6000), (200, 20000)],
    "a step down": [(0, 500), (100, 9000), (100.001, 2000), (200, 20000)],
    "many corners": [(x, 3000 + 2500 * ((7 * i) % 5)) for i, x in enumerate(range(0, 210, 5))],
}


@pytest.mark.parametrize("name", NARROW)
@pytest.mark.parametrize("beta", [-3.0, 3.0])
def test_narrow_features_of_a_spring_table_are_not_missed(name: str, beta: float) -> None:
    """The torque is highest at a corner of the table that lies between the samples of a coarse look."""
    draws, forces = np.array(NARROW[name], dtype=float).T
    law = SpringLaw(np.asarray(0.0), np.asarray(0.0), draws, forces)
    m = machine(58, 86, 71, beta, (460, 30), 65, 1, law)
    c = cycle(m)
    fine = np.linspace(0.0, float(c.events.release), 400_001)
    s = state(m, fine, c.events.catch)
    free, seated = fine <= float(c.events.catch), (fine > float(c.events.catch)) & (fine <= float(c.events.first_end))
    for found, wanted in (
        (c.first_peak, s.torque[free].max()), (c.second_peak, s.torque[seated].max()),
        (c.largest_tension, s.tension.max()), (c.largest_crank_pin, s.pin_force.max()),
        (c.largest_stop, s.stop_force.max()), (c.largest_link_bending, s.link_bending.max()),
    ):  # fmt: skip
        assert found >= wanted * (1 - 1e-9)
        assert found == pytest.approx(wanted, rel=5e-3)  # what a step of 0.001° misses of a spike

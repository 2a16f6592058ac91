"""The machine run backwards: closed forms of a far sheave, outlines turned back step by step, poses by brute force."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import lru_cache
from pathlib import Path
from tempfile import TemporaryDirectory

import numpy as np
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st

from loads.backing_off import BackingOff, mirrored, reversed_curve, second_arm
from loads.cycle import cycle
from loads.examine import Examination
from loads.slack_poses import chain_limits, free_pull, pull_at, slack_poses
from loads.spring_law import spring_force
from parts.stop_back import BackContact
from tests.loads.backwards import chain_pin, pull, shapes, straight, tangent
from tests.loads.far_end_designs import DESIGNS
from tests.loads.machines import FAR, TABLE, linear, machine, machines
from tests.starters import changed, examined, put

STARTERS = ("impact-rig", "seed-thrower", "soil-tamper")


@lru_cache(maxsize=32)
def of(text: str) -> Examination:
    with TemporaryDirectory() as folder:
        return examined(Path(folder), text)


def study(e: Examination) -> BackingOff:
    found = e.studies["backing_off"]
    assert isinstance(found, BackingOff)
    return found


def contact_at(gamma: float, beta: float, reach: float = 70.0) -> BackContact:
    return BackContact(beta + 2.0 * math.pi - gamma, reach, (0.0, 0.0), False)


# ---------------------------------------------------------------------------------------------- closed forms


@settings(max_examples=30, deadline=None)
@given(beta=st.floats(-5.0, 8.0), gamma=st.floats(0.25, 1.4), length=st.floats(75.0, 110.0))
def test_a_far_sheave_gives_the_closed_forms(beta: float, gamma: float, length: float) -> None:
    """Back contact at −(π + β − γ), the whole pull r + L + |OB|, null where OB points away, release at −(2π + β − γ)."""
    seat = math.radians(beta)
    m = machine(60.0, length, 70.0, beta, FAR, 0.0, 1.0, linear(0.0, 100.0))
    figures = cycle(mirrored(m, contact_at(gamma, seat)))
    at, arm = figures.events, second_arm(60.0, length, gamma - seat)
    # the seat of the mirrored machine is γ − β
    assert float(at.catch) == pytest.approx(math.pi + seat - gamma, abs=1e-5)
    assert float(at.release) == pytest.approx(2.0 * math.pi + seat - gamma, abs=1e-5)
    assert float(figures.most_pull) == pytest.approx(60.0 + length + arm, abs=1e-2)
    inside = math.atan2(length * math.sin(gamma - seat), 60.0 - length * math.cos(gamma - seat))
    wanted = math.pi + math.remainder(inside, 2.0 * math.pi)
    wanted = wanted if wanted > math.pi else wanted + 2.0 * math.pi
    assert math.remainder(float(at.null) - wanted, 2.0 * math.pi) == pytest.approx(0.0, abs=1e-4)


@settings(max_examples=30, deadline=None)
@given(m=machines(), gamma=st.floats(0.3, 1.3))
def test_the_back_carries_the_link_from_the_slack_of_the_closed_form(m: object, gamma: float) -> None:
    """Least pull with B on the back, over a whole turn, is r + L − |OB|, where OB lies along the chain line through O."""
    from loads.linkage import Linkage

    assert isinstance(m, Linkage)
    back = float(m.seat_angle) + 2.0 * math.pi - gamma
    theta = np.linspace(-math.pi, math.pi, 4001)
    least = float(pull_at(m, theta, np.full_like(theta, back)).min())
    r, length = float(m.crank_radius), float(m.link_length)
    assert least == pytest.approx(r + length - second_arm(r, length, back), rel=2e-5, abs=2e-4)


def test_a_mirrored_machine_mirrored_again_is_the_machine() -> None:
    m = TABLE["near"]
    contact = contact_at(0.8, float(m.seat_angle))
    once = mirrored(m, contact)
    again = mirrored(once, BackContact(2.0 * math.pi - float(m.seat_angle), float(m.stop_reach), (0.0, 0.0), False))
    one, other = cycle(m), cycle(again)
    assert float(other.first_peak) == pytest.approx(float(one.first_peak), rel=1e-12)
    assert float(other.events.release) == pytest.approx(float(one.events.release), rel=1e-12)


# ---------------------------------------------------------------------------------------------- against the outlines


@pytest.mark.parametrize("name", STARTERS)
def test_the_outlines_turned_back_meet_where_the_study_says(name: str) -> None:
    """The link kept in line with the chain by bisection, the drawn parts placed, the disc turned back: they touch there."""
    e = of(changed(name, chain__slack='"0 mm"'))
    found = study(e).back_contact
    assert found is not None

    def apart(theta: float) -> float:
        areas = shapes(e, theta, straight(e, theta))
        return float(shapely.distance(areas["stop"], areas["swing_link"]))

    assert apart(found) < 0.05
    assert apart(found - math.radians(0.5)) == 0.0
    for back in np.linspace(0.0, -found - math.radians(0.5), 40):
        assert apart(-float(back)) > 0.05


@pytest.mark.parametrize("name", STARTERS)
def test_the_reversed_pull_is_the_largest_with_the_link_on_the_back(name: str) -> None:
    e = of(changed(name))
    s = study(e)
    assert s.null is not None
    assert s.release is not None
    assert s.pull is not None
    theta = np.linspace(s.back_contact or 0.0, s.release, 800)
    along = [pull(e, chain_pin(e, float(t), s.contact.link_angle)) for t in theta]
    assert s.pull == pytest.approx(max(along), abs=2e-3)
    assert float(theta[int(np.argmax(along))]) == pytest.approx(max(s.null, s.release), abs=0.01)
    # at the null the chain line passes through O, at the release through A
    q = chain_pin(e, s.null, s.contact.link_angle)
    _, way = tangent(e, q)
    assert q[0] * math.sin(way) - q[1] * math.cos(way) == pytest.approx(0.0, abs=1e-4)
    q = chain_pin(e, s.release, s.contact.link_angle)
    _, way = tangent(e, q)
    turn = 1.0 if e.design.mechanism.rotation == "ccw" else -1.0
    disc = float(e.machine.start_direction) + turn * s.release
    r = e.design.mechanism.crank_radius
    a = (q[0] - r * math.cos(disc), q[1] - r * math.sin(disc))
    assert a[0] * math.sin(way) - a[1] * math.cos(way) == pytest.approx(0.0, abs=1e-4)
    curve_at, curve = reversed_curve(s)
    for i in range(0, len(curve_at), 17):
        if curve_at[i] < (s.back_contact or 0.0):
            b = chain_pin(e, float(curve_at[i]), s.contact.link_angle)
            assert float(curve[i]) == pytest.approx(pull(e, b), abs=1e-4)


def test_the_mirror_image_backs_off_alike() -> None:
    one = of(changed("impact-rig", chain__slack='"12 mm"'))
    text = put(changed("impact-rig", chain__slack='"12 mm"'), "mechanism", "rotation", '"cw"')
    text = put(put(text, "sheave", "wrap", '"right"'), "sheave", "center", '["460 mm", "-30 mm"]')
    other = of(put(text, "sheave", "exit_angle", '"90 deg"'))
    a, b = study(one), study(other)
    for name in ("back_contact", "pull", "null", "release", "second_arm", "carrying_slack"):
        assert getattr(b, name) == pytest.approx(getattr(a, name), rel=1e-9), name
    np.testing.assert_allclose(b.poses.low, a.poses.low, atol=1e-6)
    np.testing.assert_allclose(b.poses.high, a.poses.high, atol=1e-6)


# ---------------------------------------------------------------------------------------------- slack poses


@pytest.mark.parametrize(("name", "slack"), [("impact-rig", 15.0), ("seed-thrower", 60.0), ("soil-tamper", 8.0)])
def test_a_pose_is_in_the_map_where_stop_and_chain_allow_it(name: str, slack: float) -> None:
    """Random poses: allowed by the drawn outlines and by the length of the chain if and only if the map has them."""
    e = of(changed(name, chain__slack=f'"{slack} mm"', spring__most_draw='"400 mm"'))
    s = study(e)
    fine = slack_poses(e.machine, s.contact.link_angle, math.radians(0.5))
    rng = np.random.default_rng(7)
    inside = outside = 0
    for theta, angle in zip(rng.uniform(-math.pi, math.pi, 3000), rng.uniform(-0.3, 2.0 * math.pi, 3000), strict=True):
        room = slack - pull(e, chain_pin(e, theta, angle))
        free = min(angle - e.design.mechanism.seat_angle, s.contact.link_angle - angle)
        if abs(room) < 0.5 or abs(free) < 0.02:
            continue  # too near an edge to tell by interpolating
        in_map = any(
            _between(fine.crank_angle, fine.low[:, k], fine.high[:, k], float(theta), float(angle)) for k in range(3)
        )
        assert in_map == (room > 0.0 and free > 0.0), (theta, angle, room, free)
        inside, outside = inside + in_map, outside + (not in_map)
    assert inside > 15
    assert outside > 100
    # what the map calls free of the stop is so by the outlines
    for theta, angle in zip(rng.uniform(-math.pi, math.pi, 40), rng.uniform(0.0, 2.0 * math.pi, 40), strict=True):
        areas = shapes(e, theta, angle)
        free = min(angle - e.design.mechanism.seat_angle, s.contact.link_angle - angle)
        if abs(free) > 0.01:
            assert (float(shapely.distance(areas["stop"], areas["swing_link"])) > 0.0) == (free > 0.0)


def _between(at: np.ndarray, low: np.ndarray, high: np.ndarray, theta: float, angle: float) -> bool:
    some = np.isfinite(low)
    if not some.any() or not at[some][0] <= theta <= at[some][-1]:
        return False
    i = int(np.searchsorted(at, theta))
    if not (some[min(i, len(at) - 1)] or some[max(i - 1, 0)]):
        return False
    one, other = np.interp(theta, at[some], low[some]), np.interp(theta, at[some], high[some])
    return bool(one <= angle <= other)


@settings(max_examples=25, deadline=None)
@given(share=st.floats(0.02, 0.9))
def test_chain_limits_of_a_far_sheave_have_a_closed_form(share: float) -> None:
    """p = r (1 − cos θ) + L (1 + cos(θ + λ)), so the limits are θ + λ = π ± acos(1 − (slack − r (1 − cos θ))/L)."""
    m = machine(60.0, 90.0, 80.0, 3.0, FAR, 0.0, 1.0, linear(0.0, 100.0), slack=60.0 * share)
    theta = np.linspace(-1.5, 1.5, 31)
    room = 60.0 * share - 60.0 * (1.0 - np.cos(theta))
    with np.errstate(invalid="ignore"):
        half = np.where(room >= 0.0, np.arccos(1.0 - room / 90.0), np.nan)
        low, high = chain_limits(m, theta)
    np.testing.assert_allclose(low, math.pi - theta - half, atol=2e-4)
    np.testing.assert_allclose(high, math.pi - theta + half, atol=2e-4)


def test_without_slack_there_is_no_map_and_with_more_it_grows() -> None:
    m = TABLE["near"]
    assert not slack_poses(replace(m, slack=np.asarray(0.0)), 5.5, 0.1).some
    spans = []
    for slack in (1.0, 5.0, 20.0, 60.0):
        found = slack_poses(replace(m, slack=np.asarray(slack)), 5.5, 0.1)
        assert found.reach is not None
        ends = free_pull(replace(m, slack=np.asarray(slack)), np.array(found.reach))
        np.testing.assert_allclose(ends, slack, atol=1e-6)
        spans.append(float(np.nanmax(found.high - found.low)))
    assert spans == sorted(spans)


# ---------------------------------------------------------------------------------------------- what it comes to


@pytest.mark.parametrize("name", STARTERS)
def test_forbidden_it_cautions_and_checks_nothing(name: str) -> None:
    e = of(changed(name))
    s = study(e)
    assert not s.rated
    assert s.checks == ()
    text = next(text for text in e.cautions if "back of its stop" in text)
    for at in (s.back_contact, s.fires):
        assert f"\N{MINUS SIGN}{abs(math.degrees(at or 0.0)):.1f}°" in text
    assert "interlock" in text
    assert not any(row.case == "reversed" for row in e.checks)
    assert [a.key for a in e.assumed].count("mechanism.reverse") == ("reverse" not in changed(name))


def test_rated_it_is_checked_as_the_winding_is() -> None:
    e = of(changed("soil-tamper", mechanism__reverse='"rated"'))
    s = study(e)
    rows = {(row.part, row.site, row.check): row for row in s.checks}
    assert {row.case for row in s.checks} == {"reversed"}
    forward = {(row.part, row.check) for row in e.checks if row.case and row.case != "reversed"}
    assert {("stop", "contact"), ("stop", "post shear"), ("swing_link", "axial force with bending")} <= {
        (part, check) for part, _, check in rows
    } & forward
    tension = next(row for (part, _, check), row in rows.items() if part == "chain" and check == "tension")
    assert all(row.crank_angle is None or row.crank_angle <= 0.0 for row in s.checks)
    # constant weight: the tension is the same as forwards
    own = next(row for row in e.checks if row.part == "chain" and row.check == "tension" and row.case != "reversed")
    assert tension.demand == pytest.approx(own.demand, rel=1e-9)
    assert not any("interlock" in text for text in s.cautions)


def test_the_reversed_stop_force_balances_the_chain_about_the_crank_pin() -> None:
    """N d = T L |sin α| worked out in the machine frame, with the real link on the real back."""
    e = of(changed("seed-thrower", mechanism__reverse='"rated"'))
    s = study(e)
    row = next(r for r in s.checks if (r.part, r.check) == ("stop", "contact"))
    m, theta = e.design.mechanism, np.linspace(s.back_contact or 0.0, s.release or 0.0, 3000)[1:]
    forces = []
    for t in theta:
        q = chain_pin(e, float(t), s.contact.link_angle)
        way = tangent(e, q)[1]
        draw = max(0.0, pull(e, q) - e.design.far_end.slack)
        chain = float(spring_force(e.machine.spring, np.asarray(draw))) / float(e.machine.efficiency)
        turn = 1.0 if m.rotation == "ccw" else -1.0
        link = float(e.machine.start_direction) + turn * (float(t) + math.pi + s.contact.link_angle)
        forces.append(chain * m.link_length * abs(math.sin(way - link)) / s.contact.reach)
    assert row.demand == pytest.approx(max(forces) * e.design.targets.shock_factor * e.stack.load_share, rel=1e-4)
    assert row.crank_angle == pytest.approx(float(theta[int(np.argmax(forces))]), abs=0.02)


def test_a_block_has_no_back_that_could_be_rated() -> None:
    e = of(changed("impact-rig", mechanism__reverse='"rated"', stop__style='"block"'))
    row = next(r for r in study(e).checks if (r.part, r.check) == ("stop", "contact"))
    assert row.safety_factor == 0.0
    assert "corner" in row.note


def test_a_hardened_front_does_not_help_the_back() -> None:
    """Case-hardening the link's front flank makes the contact forwards stronger and leaves the one in reverse as it is."""
    text = changed(
        "seed-thrower", mechanism__reverse='"rated"', stop__surface_yield='"1500 MPa"', stop__diameter='"16 mm"',
        link__width='"23 mm"', link__thickness='"8 mm"',
    )  # fmt: skip
    plain, hard = of(text), of(put(put(text, "link", "surface_yield", '"1500 MPa"'), "link", "case_depth", '"2 mm"'))

    def factor(e: Examination, case: str) -> float:
        rows = [
            r for r in e.checks if (r.part, r.check) == ("stop", "contact") and (r.case == "reversed") == (case != "")
        ]
        return min(r.safety_factor or math.inf for r in rows)

    assert factor(hard, "reversed") == pytest.approx(factor(plain, "reversed"), rel=1e-6)
    assert factor(hard, "") > 1.5 * factor(plain, "")


def test_the_spring_that_is_overdrawn_falls_short_where_it_is_rated() -> None:
    e = of(changed("impact-rig", mechanism__reverse='"rated"'))
    s = study(e)
    assert s.overdraws
    row = next(r for r in s.checks if r.check == "most draw")
    assert row.demand == pytest.approx(s.draw)
    assert not row.holds
    assert any("overdrawing" in text for text in s.cautions)
    enough = of(changed("soil-tamper"))
    assert not study(enough).overdraws


@pytest.mark.parametrize("kind", ["slide", "rocker"])
def test_a_tie_has_no_slack_and_keeps_its_length(kind: str) -> None:
    e = of(DESIGNS[kind])
    s = study(e)
    assert s.carrying_slack is None
    assert not s.poses.some
    if s.back_contact is None:
        return
    # A, B and the output's pin are in line at the contact, the tie as long as it is
    m = s.mirror.expanded()
    theta = np.array([-s.back_contact])
    x = m.crank_radius * np.cos(theta) - m.link_length * np.cos(theta + m.seat_angle)
    y = m.crank_radius * np.sin(theta) - m.link_length * np.sin(theta + m.seat_angle)
    line = m.far.line(m.crank_radius, x, y, np.zeros(()), m.link_length)
    away = np.array([x - m.crank_radius * np.cos(theta), y - m.crank_radius * np.sin(theta)])
    assert float(away[0, 0] * line.uy[0] - away[1, 0] * line.ux[0]) == pytest.approx(0.0, abs=1e-6)
    assert float(np.asarray(line.free_length).flat[0]) == pytest.approx(260.0)


def test_enough_slack_lets_the_back_carry_the_link() -> None:
    little = study(of(changed("seed-thrower", spring__most_draw='"300 mm"')))
    assert little.carrying_slack is not None
    assert not little.carries
    much = f'"{little.carrying_slack + 2.0:.3f} mm"'
    s = study(of(changed("seed-thrower", chain__slack=much, spring__most_draw='"300 mm"')))
    assert s.carries == (s.slack >= (s.carrying_slack or math.inf))
    assert any("carries the link outwards" in text for text in s.cautions) == s.carries

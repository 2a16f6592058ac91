"""Swept shapes: random poses of the drawn parts lie inside, and they are no larger than they say."""

from __future__ import annotations

import math

import numpy as np
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st

from loads.linkage import state
from loads.motions import BACKING_OFF, RELEASE, WINDING
from tests.loads.backwards import chain_pin, pull, shapes, straight, tangent
from tests.loads.enclosed import FREE, STARTERS, WIDE, backing, design, filled, inside, of, pose_of, study
from tests.loads.far_end_designs import DESIGNS
from tests.starters import changed, put, put_all


@pytest.mark.parametrize("name", STARTERS)
def test_random_poses_of_the_winding_lie_inside(name: str) -> None:
    e = design(name)
    area, rng = filled(study(e), WINDING), np.random.default_rng(3)
    for theta in rng.uniform(0.0, float(e.figures.events.release), 60):
        assert inside(area, shapes(e, float(theta), pose_of(e, float(theta)))), theta


@pytest.mark.parametrize("name", STARTERS)
def test_random_poses_of_the_release_lie_inside(name: str) -> None:
    e = design(name)
    area, rng = filled(study(e), RELEASE), np.random.default_rng(4)
    end, front = float(e.figures.events.release), e.design.mechanism.seat_angle
    last = straight(e, end)
    assert last > front + 1.0
    for angle in rng.uniform(front, last, 60):
        assert inside(area, shapes(e, end, float(angle))), angle


def test_the_release_as_it_was_simulated_lies_inside() -> None:
    """The disc turns on while the link swings, and the link overshoots: every moment of the simulation is in the sweep."""
    from loads.release.study import ReleaseStudy

    e = of(
        changed(
            "impact-rig", **FREE, **WIDE, moving__mass='"12 kg"', moving__disc_speed='"25 rpm"',
            moving__bumper_stiffness='"900 N/mm"', moving__bumper_travel='"30 mm"',
        )
    )  # fmt: skip
    found = e.studies["release"]
    assert isinstance(found, ReleaseStudy)
    assert found.course is not None
    course, area = found.course, filled(study(e), RELEASE)
    last = float(e.figures.events.release)
    moved = 0
    for i in range(0, len(course.theta), max(1, len(course.theta) // 150)):
        theta = float(course.theta[i])
        placed = shapes(e, theta, float(course.psi[i]) - theta - math.pi)
        held = shapely.buffer(area, 0.05)  # what the moments between those that are kept may stand off
        assert shapely.covers(held, placed["swing_link"]), i
        moved += theta > last + 0.02
    assert moved > 20


@pytest.mark.parametrize(
    ("name", "slack"), [("impact-rig", 2.0), ("impact-rig", 30.0), ("seed-thrower", 12.0), ("soil-tamper", 25.0)]
)
def test_random_poses_of_backing_off_lie_inside(name: str, slack: float) -> None:
    """Taut back to the stop's back; slack, anywhere that stop and chain allow, the chain's end hanging as it can."""
    e = design(name, slack)
    s = backing(e)
    area, rng = filled(study(e), BACKING_OFF), np.random.default_rng(5)
    plate, front = e.sizes.chain_end.length, e.design.mechanism.seat_angle
    assert s.back_contact is not None
    for theta in rng.uniform(s.back_contact, 0.0, 25):
        assert inside(area, shapes(e, float(theta), straight(e, float(theta)))), theta
    reach = s.poses.reach
    assert reach is not None
    found = 0
    while found < 120:
        theta, angle = float(rng.uniform(*reach)), float(rng.uniform(front, s.contact.link_angle))
        q = chain_pin(e, theta, angle)
        if pull(e, q) > slack:
            continue
        # a direction in which the chain is long enough from the end's far hole
        towards = tangent(e, q)[1] + float(rng.uniform(-math.pi, math.pi)) * float(rng.uniform()) ** 2
        far = (q[0] + plate * math.cos(towards), q[1] + plate * math.sin(towards))
        if pull(e, far) + plate > slack:
            continue
        found += 1
        assert inside(area, shapes(e, theta, angle, towards)), (theta, angle, towards)


def test_poses_on_the_very_edge_of_the_slack_lie_inside() -> None:
    """The extreme poses, chain taut or link on the stop: where a cover from step to step would be too small first."""
    e = design("impact-rig", 30.0)
    s, area = backing(e), filled(study(e), BACKING_OFF)
    reach = s.poses.reach
    assert reach is not None
    for theta in np.linspace(reach[0] + 1e-4, reach[1] - 1e-4, 60):
        at = straight(e, float(theta))
        for sign in (-1.0, 1.0):
            low, high = 0.0, math.pi
            for _ in range(50):
                middle = (low + high) / 2.0
                slack = pull(e, chain_pin(e, float(theta), at + sign * middle)) <= 30.0
                low, high = (middle, high) if slack else (low, middle)
            angle = min(max(at + sign * low, e.design.mechanism.seat_angle), s.contact.link_angle)
            if pull(e, chain_pin(e, float(theta), angle)) <= 30.0 + 1e-6:
                assert inside(area, shapes(e, float(theta), angle)), (theta, sign)


@settings(max_examples=6, deadline=None)
@given(slack=st.floats(1.0, 45.0), seed=st.integers(0, 10_000))
def test_poses_lie_inside_whatever_the_slack(slack: float, seed: int) -> None:
    e = design("seed-thrower", round(slack, 2))
    s, rng = backing(e), np.random.default_rng(seed)
    area, reach = filled(study(e), BACKING_OFF), s.poses.reach
    assert reach is not None
    for _ in range(40):
        theta = float(rng.uniform(*reach))
        angle = float(rng.uniform(e.design.mechanism.seat_angle, s.contact.link_angle))
        if pull(e, chain_pin(e, theta, angle)) <= round(slack, 2):
            assert inside(area, shapes(e, theta, angle))


@pytest.mark.parametrize("kind", ["slide", "rocker", "rope"])
def test_other_far_ends_have_their_sweeps(kind: str) -> None:
    e = of(put_all(DESIGNS[kind], WIDE))
    found = study(e)
    assert set(found.covers) == {WINDING, RELEASE, BACKING_OFF}
    keys = {cover.part for cover in found.covers[WINDING]}
    assert {"crank_disc", "swing_link"} <= keys
    assert ("tie" in keys) == (kind != "rope")
    assert all(np.isfinite(row.clearance) for near in found.near.values() for row in near)
    area, rng = filled(found, WINDING), np.random.default_rng(6)
    for theta in rng.uniform(0.0, float(e.figures.events.release), 20):
        s = state(e.machine, np.array([theta]), e.figures.events.catch)
        turn, start = float(e.machine.turn), float(e.machine.start_direction)
        placed = shapes(e, float(theta), pose_of(e, float(theta)), start + turn * float(s.chain_direction[0]))
        assert inside(area, placed)
        if "tie" in placed:
            assert shapely.covers(shapely.buffer(area, 1e-3), placed["tie"])


# ---------------------------------------------------------------------------------------------- not much too large


@pytest.mark.parametrize("name", STARTERS)
def test_the_winding_is_no_larger_than_it_says(name: str) -> None:
    """Dense poses grown by the stated excess hold the covers of link and chain end."""
    e = design(name)
    found = study(e)
    theta = np.linspace(0.0, float(e.figures.events.release), 2400)
    for key in ("swing_link", "chain_end"):
        some = [c for c in found.covers[WINDING] if c.part == key]
        area = shapely.union_all(
            np.concatenate([shapely.buffer(c.cores, np.maximum(c.radius, 1e-9)) for c in some])
        )  # fmt: skip
        dense = shapely.union_all([shapes(e, float(t), pose_of(e, float(t)))[key] for t in theta])
        excess = max(float(c.excess.max()) for c in some)
        assert excess < 0.005 * (e.design.mechanism.crank_radius + e.design.mechanism.link_length)
        assert shapely.covers(shapely.buffer(dense, excess + 0.02), area)


def test_slack_makes_the_sweep_larger_and_no_slack_none_of_it() -> None:
    areas = [filled(study(design("seed-thrower", slack)), BACKING_OFF) for slack in (1.0, 10.0, 30.0)]
    assert areas[0].area < areas[1].area < areas[2].area
    taut = study(design("impact-rig", 0.0))
    assert taut.sag is None
    assert taut.cautions == ()
    assert max(taut.excess.values()) < 1.0


def test_a_machine_rated_for_reverse_sweeps_further_back() -> None:
    """Only then does the reversed machine count: it may be driven there."""
    kept, rated = (
        study(of(changed("seed-thrower", **{**FREE, **WIDE, "mechanism__reverse": f'"{word}"'})))
        for word in ("forbidden", "rated")
    )
    assert filled(rated, BACKING_OFF).area > filled(kept, BACKING_OFF).area + 100.0
    assert min(row.crank_angle for row in rated.near[BACKING_OFF]) <= 0.0
    assert filled(rated, WINDING).area == pytest.approx(filled(kept, WINDING).area, rel=1e-9)


def test_the_mirror_image_sweeps_the_mirror_image() -> None:
    text = put_all(changed("impact-rig", chain__slack='"15 mm"'), {**FREE, **WIDE})
    flipped = put(put(text, "mechanism", "rotation", '"cw"'), "sheave", "wrap", '"right"')
    flipped = put(put(flipped, "sheave", "center", '["460 mm", "-30 mm"]'), "sheave", "exit_angle", '"90 deg"')
    one, other = study(of(text)), study(of(flipped))
    for sweep in (WINDING, RELEASE, BACKING_OFF):
        a = filled(one, sweep)
        b = shapely.transform(filled(other, sweep), lambda at: at * (1.0, -1.0))
        assert shapely.symmetric_difference(a, b).area < 2e-4 * a.area
    for sweep, near in other.near.items():
        walls = {row.target: row.clearance for row in one.near[sweep]}
        for row in near:
            swapped = {"wall above": "wall below", "wall below": "wall above"}.get(row.target, row.target)
            assert row.clearance == pytest.approx(walls[swapped], abs=0.05)

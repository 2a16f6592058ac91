"""Swept shapes and clearances: random poses of the drawn parts lie inside, distances as sampled, walls as they are meant."""

from __future__ import annotations

import math
import time
from functools import lru_cache
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import numpy as np
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st

from loads.backing_off import BackingOff
from loads.enclosure import WALLS, EnclosureStudy, enclosure_study, targets
from loads.examine import Examination
from loads.linkage import state
from loads.motions import BACKING_OFF, RELEASE, WINDING
from parts.design import Enclosure
from parts.problems import DesignRefused
from parts.sweeps import ARCS, OUT, Cover
from tests.loads.backwards import chain_pin, context_of, corners_of, pull, shapes, straight, tangent
from tests.loads.far_end_designs import DESIGNS
from tests.starters import changed, examined, put, put_all, text_of

STARTERS = ("impact-rig", "seed-thrower", "soil-tamper")
WIDE = {"enclosure__above": "900", "enclosure__below": "900", "enclosure__behind": "900", "enclosure__ahead": "900"}
FREE = {"spring__most_draw": '"400 mm"'}
PARTS = ("crank_disc", "swing_link", "chain_end", "chain_pin", "stop")


@lru_cache(maxsize=64)
def of(text: str) -> Examination:
    with TemporaryDirectory() as folder:
        return examined(Path(folder), text)


def design(name: str, slack: float | None = None, **values: str) -> Examination:
    more = {} if slack is None else {"chain__slack": f'"{slack} mm"'}
    return of(changed(name, **{**FREE, **more, **(values or WIDE)}))


def study(e: Examination) -> EnclosureStudy:
    found = e.studies["enclosure"]
    assert isinstance(found, EnclosureStudy)
    return found


def backing(e: Examination) -> BackingOff:
    found = e.studies["backing_off"]
    assert isinstance(found, BackingOff)
    return found


def filled(found: EnclosureStudy, sweep: str) -> Any:
    """What the covers of a sweep hold, each core with its radius, without any simplifying."""

    def grown(cover: Cover) -> Any:
        return shapely.buffer(cover.cores, np.maximum(cover.radius, 1e-9) * OUT, quad_segs=ARCS)

    return shapely.union_all(np.concatenate([grown(cover) for cover in found.covers[sweep]]))


def inside(area: Any, placed: dict[str, Any]) -> bool:
    """Whether the outlines of the parts lie in an area, to rounding."""
    held = shapely.buffer(area, 1e-3)
    return all(bool(shapely.covers(held, placed[key])) for key in PARTS if key in placed)


def pose_of(e: Examination, theta: float) -> float:
    """λ of the machine while it winds."""
    s = state(e.machine, np.array([theta]), e.figures.events.catch)
    return float(s.link_direction[0]) - theta - math.pi


# ---------------------------------------------------------------------------------------------- never too small


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
    assert all(np.isfinite(row.clearance) for row in found.rows)
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
    assert min(row.crank_angle for row in rated.rows if row.sweep == BACKING_OFF) <= 0.0
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
    walls = {(r.sweep, r.to): r.clearance for r in one.rows}
    for row in other.rows:
        swapped = {"wall above": "wall below", "wall below": "wall above"}.get(row.to, row.to)
        assert row.clearance == pytest.approx(walls[row.sweep, swapped], abs=0.05)


# ---------------------------------------------------------------------------------------------- clearances


def test_clearances_are_those_of_sampled_poses() -> None:
    """Walls, an outline and obstacles against the drawn parts in dense poses: never more, less by the stated excess."""
    e = of(
        changed(
            "impact-rig", **FREE, enclosure__outline="[[-130, -150], [620, -150], [620, 200], [-130, 160]]",
            enclosure__obstacles="[[[-20, 92], [20, 92], [20, 110], [-20, 110]], [[150, -40], [170, -40], [160, -70]]]",
        )
    )  # fmt: skip
    found = study(e)
    outline = shapely.Polygon([[-130, -150], [620, -150], [620, 200], [-130, 160]])
    areas = {
        "outline": shapely.difference(shapely.box(-5e3, -5e3, 5e3, 5e3), outline),
        "obstacle 1": shapely.box(-20, 92, 20, 110), "obstacle 2": shapely.Polygon([[150, -40], [170, -40], [160, -70]]),
    }  # fmt: skip
    least = dict.fromkeys(areas, math.inf)
    for theta in np.linspace(0.0, float(e.figures.events.release), 1200):
        placed = shapes(e, float(theta), pose_of(e, float(theta)))
        q = chain_pin(e, float(theta), pose_of(e, float(theta)))
        length, way = tangent(e, q)
        half = e.design.far_end.height / 2.0
        placed["chain"] = shapely.LineString(
            [
                (q[0] + t * math.cos(way), q[1] + t * math.sin(way))
                for t in (e.sizes.chain_end.length - half, length)
            ]
        ).buffer(half, cap_style="flat")  # fmt: skip
        for name, area in areas.items():
            least[name] = min(least[name], *(float(shapely.distance(area, p)) for p in placed.values()))
    sheave = e.design.sheave
    assert sheave is not None
    rim = shapely.Point(*sheave.center).buffer(sheave.pitch_radius + e.design.far_end.height / 2.0, quad_segs=64)
    for row in found.rows:
        if row.sweep == WINDING:
            true = min(least[row.to], float(shapely.distance(areas[row.to], rim)))
            assert row.clearance <= true + 0.01
            assert row.clearance >= true - row.excess - 0.05, (row, true)
            # its point lies on the part: as far from the target as it says
            away = float(shapely.distance(areas[row.to], shapely.Point(row.x, row.y)))
            assert away == pytest.approx(row.clearance, abs=0.02)


def test_walls_stand_where_their_words_say() -> None:
    """above and below along y, ahead and behind along x, all from the disc axis in the machine frame."""
    e = design("impact-rig", 0.0, enclosure__above="150", enclosure__below="100", enclosure__behind="95",
               enclosure__ahead="600")  # fmt: skip
    rows = {row.to: row for row in study(e).rows if row.sweep == WINDING}
    rim = e.sizes.disc.outer_diameter / 2.0
    assert rows["wall below"].clearance == pytest.approx(100.0 - rim, abs=0.1)
    assert rows["wall below"].x == pytest.approx(0.0, abs=1e-6)
    assert rows["wall below"].y == pytest.approx(-rim, abs=0.1)
    assert rows["wall behind"].clearance == pytest.approx(95.0 - rim, abs=0.1)
    assert rows["wall behind"].x == pytest.approx(-rim, abs=0.1)
    sheave = e.design.sheave
    assert sheave is not None
    edge = sheave.pitch_radius + e.design.far_end.thickness_on_sheave / 2.0
    assert rows["wall ahead"].clearance == pytest.approx(600.0 - sheave.center[0] - edge, abs=0.1)
    assert rows["wall ahead"].part == "sheave"
    assert rows["wall above"].clearance == pytest.approx(150.0 - sheave.center[1] - edge, abs=0.1)


def test_an_obstacle_in_the_way_is_run_into_by_its_depth() -> None:
    """A block whose edge lies 3 mm inside the disc's rim, and a wall that cuts 5 mm of it off."""
    plain = design("impact-rig", 0.0)
    rim = plain.sizes.disc.outer_diameter / 2.0
    box = f"[[[-10, {rim - 3.0}], [10, {rim - 3.0}], [10, {rim + 30.0}], [-10, {rim + 30.0}]]]"
    e = design("impact-rig", 0.0, enclosure__obstacles=box, enclosure__behind=f"{rim - 5.0}")
    rows = {row.to: row for row in study(e).rows if row.sweep == WINDING}
    assert rows["obstacle 1"].clearance == pytest.approx(-3.0, abs=0.4)
    assert rows["wall behind"].clearance == pytest.approx(-5.0, abs=0.1)
    short = [row for row in e.falls_short if row.check == "clear of the enclosure"]
    assert {row.site for row in short} == {"obstacle 1", "wall behind"}
    assert all(row.safety_factor == 0.0 and row.demand > 0.0 for row in short)


def test_a_near_miss_is_looked_at_more_closely() -> None:
    """A floor between what the coarse cover reaches and what the chain's end does: it is not called short."""
    slack = {"chain__slack": '"40 mm"', **FREE}
    first = of(changed("seed-thrower", **slack, **WIDE))
    coarse = min(float((shapely.bounds(c.cores)[:, 1] - c.radius).min()) for c in study(first).covers[BACKING_OFF])
    rough = of(changed("seed-thrower", **slack, enclosure__below=f"{-coarse - 0.05:.4f}"))
    row = next(r for r in study(rough).rows if r.sweep == BACKING_OFF)
    assert row.excess <= 1.5
    assert row.clearance > 0.0
    # never more than what poses show: the lowest of many of link and chain end
    e, rng = rough, np.random.default_rng(11)
    s, plate = backing(e), e.sizes.chain_end.length
    reach = s.poses.reach
    assert reach is not None
    lowest = 0.0
    for _ in range(4000):
        theta = float(rng.uniform(*reach))
        angle = float(rng.uniform(e.design.mechanism.seat_angle, s.contact.link_angle))
        q = chain_pin(e, theta, angle)
        if pull(e, q) > 40.0:
            continue
        towards = tangent(e, q)[1] - float(rng.uniform(0.0, math.pi))
        far = (q[0] + plate * math.cos(towards), q[1] + plate * math.sin(towards))
        lowest = min(lowest, q[1] - e.sizes.link.width / 2.0)
        if pull(e, far) + plate <= 40.0:
            lowest = min(lowest, far[1] - e.sizes.chain_end.height / 2.0)
    assert row.clearance <= -coarse - 0.05 + lowest + 1e-6
    assert row.clearance >= -coarse - 0.05 + lowest - row.excess - 3.0  # as near as so many poses come


def test_clear_of_everything_it_holds_without_a_factor() -> None:
    e = design("impact-rig", 0.0)
    rows = [row for row in e.checks if row.check == "clear of the enclosure"]
    assert [row.case for row in sorted(rows, key=lambda r: r.case)] == [BACKING_OFF, RELEASE, WINDING]
    assert all(row.holds and row.safety_factor is None and row.capacity > 0.0 for row in rows)


def test_a_floor_under_the_winding_is_hit_when_it_backs_off_with_slack() -> None:
    """The floor just under everything that winding and release sweep over: only backing off with slack runs into it."""
    slack = {"chain__slack": '"60 mm"', **FREE}
    first = study(of(changed("seed-thrower", **slack, **WIDE)))
    lowest = min(row.clearance for row in first.rows if row.to == "wall below" and row.sweep != BACKING_OFF)
    floor = f"{900.0 - lowest + 0.5:.3f}"
    e = of(changed("seed-thrower", **slack, enclosure__below=floor))
    rows = {row.sweep: row for row in study(e).rows}
    assert rows[WINDING].clearance >= 0.5 - 1e-3
    assert rows[RELEASE].clearance == pytest.approx(0.5, abs=1e-3)
    assert rows[BACKING_OFF].clearance < -5.0
    short = [row for row in e.falls_short if row.check == "clear of the enclosure"]
    assert [row.case for row in short] == [BACKING_OFF]
    assert short[0].part in ("swing_link", "chain_end", "chain")
    # taut it comes no lower backing off than it does forwards
    taut = {row.sweep: row for row in study(design("seed-thrower", 0.0, enclosure__below=floor)).rows}
    assert taut[BACKING_OFF].clearance >= min(taut[WINDING].clearance, taut[RELEASE].clearance)
    # and a pose that stop and chain allow does reach below the floor
    found = rows[BACKING_OFF]
    s, m = backing(e), e.design.mechanism
    reached = min(
        float(corners_of(shapes(e, found.crank_angle, float(a))["swing_link"])[:, 1].min())
        for a in np.linspace(m.seat_angle, s.contact.link_angle, 400)
        if pull(e, chain_pin(e, found.crank_angle, float(a))) <= 60.0
    )
    assert reached < -float(floor)


def test_without_the_table_there_is_no_study() -> None:
    e = of(changed("impact-rig"))
    assert "enclosure" not in e.studies
    assert enclosure_study(context_of(e)) is None
    assert not any("its study is not part" in text for text in e.cautions)


@settings(max_examples=30, deadline=None)
@given(
    at=st.floats(10.0, 500.0), which=st.sampled_from([key for key, _, _ in WALLS]), reach=st.floats(50.0, 1e7)
)  # fmt: skip
def test_a_target_is_made_of_each_wall_as_it_is_given(at: float, which: str, reach: float) -> None:
    wish = Enclosure(None, None, None, None, None, ())
    values = {key: at if key == which else None for key in ("above", "below", "behind", "ahead")}
    made = targets(Enclosure(None, values["above"], values["below"], values["behind"], values["ahead"], ()), reach)
    assert targets(wish, reach) == []
    assert [target.name for target in made] == [f"wall {which}"]
    assert made[0].side * made[0].at == pytest.approx(at)
    assert made[0].axis == (1 if which in ("above", "below") else 0)


def test_it_takes_less_than_a_second() -> None:
    for slack in (0.0, 5.0, 30.0):
        c = context_of(design("impact-rig", slack))
        enclosure_study(c)
        times = []
        for _ in range(3):
            begin = time.perf_counter()
            enclosure_study(c)
            times.append(time.perf_counter() - begin)
        assert min(times) < 1.0


@pytest.mark.parametrize(
    ("lines", "hit"),
    [
        ("outline = [[-200, -300], [400, -300], [400, 300], [-200, 300]]\n", "outline"),
        ("obstacles = [[[450, 20], [470, 20], [470, 40], [450, 40]]]\n", "obstacle 1"),
        ("outline = [[-10, -10], [10, -10], [10, 10], [-10, 10]]\n", "outline"),
    ],
)
def test_a_round_thing_inside_a_wall_is_run_into(lines: str, hit: str, tmp_path: Path) -> None:
    """The sheave's centre lies in the obstacle, or beyond the outline: its core is a point, which has no edge."""
    e = examined(tmp_path, text_of("impact-rig") + "\n[enclosure]\n" + lines)
    rows = [c for c in e.falls_short if (c.check, c.site) == ("clear of the enclosure", hit)]
    assert rows
    assert all(c.capacity == 0.0 and c.demand > 5.0 for c in rows)


def test_an_outline_beside_the_machine_is_refused(tmp_path: Path) -> None:
    outline = "[enclosure]\noutline = [[800, 800], [900, 800], [900, 900]]\n"
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text_of("impact-rig") + "\n" + outline)
    assert "beside the disc axis" in str(refusal.value)

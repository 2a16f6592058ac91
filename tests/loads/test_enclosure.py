"""Clearances of the swept shapes: as in sampled poses, to walls as they are meant, run into by their depth."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st

from loads.enclosure import WALLS, enclosure_study, targets
from loads.motions import BACKING_OFF, RELEASE, WINDING
from parts.design import Enclosure
from parts.problems import DesignRefused
from tests.loads.backwards import chain_pin, corners_of, pull, shapes, tangent
from tests.loads.enclosed import FREE, WIDE, backing, design, of, pose_of, study
from tests.starters import changed, context_of, examined, text_of


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
    for row in found.near[WINDING]:
        true = min(least[row.target], float(shapely.distance(areas[row.target], rim)))
        assert row.clearance <= true + 0.01
        assert row.clearance >= true - row.excess - 0.05, (row, true)
        # its point lies on the part: as far from the target as it says
        away = float(shapely.distance(areas[row.target], shapely.Point(row.x, row.y)))
        assert away == pytest.approx(row.clearance, abs=0.02)


def test_walls_stand_where_their_words_say() -> None:
    """above and below along y, ahead and behind along x, all from the disc axis in the machine frame."""
    e = design("impact-rig", 0.0, enclosure__above="150", enclosure__below="100", enclosure__behind="95",
               enclosure__ahead="600")  # fmt: skip
    rows = {row.target: row for row in study(e).near[WINDING]}
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
    rows = {row.target: row for row in study(e).near[WINDING]}
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
    row = study(rough).near[BACKING_OFF][0]
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
    lowest = min(
        row.clearance for sweep in (WINDING, RELEASE) for row in first.near[sweep] if row.target == "wall below"
    )
    floor = f"{900.0 - lowest + 0.5:.3f}"
    e = of(changed("seed-thrower", **slack, enclosure__below=floor))
    rows = {sweep: near[0] for sweep, near in study(e).near.items()}
    assert rows[WINDING].clearance >= 0.5 - 1e-3
    assert rows[RELEASE].clearance == pytest.approx(0.5, abs=1e-3)
    assert rows[BACKING_OFF].clearance < -5.0
    short = [row for row in e.falls_short if row.check == "clear of the enclosure"]
    assert [row.case for row in short] == [BACKING_OFF]
    assert short[0].part in ("swing_link", "chain_end", "chain")
    # taut it comes no lower backing off than it does forwards
    taut = {sweep: near[0] for sweep, near in study(design("seed-thrower", 0.0, enclosure__below=floor)).near.items()}
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


@pytest.mark.parametrize("lines", ["", "obstacles = []\n"])
def test_an_enclosure_of_nothing_is_refused(lines: str, tmp_path: Path) -> None:
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text_of("impact-rig") + "\n[enclosure]\n" + lines)
    assert "outline, or above, below, behind, ahead; obstacles" in str(refusal.value)

"""The study of the release in a design: covered or not, what it refuses, and what it does to loads, sizes and checks."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from loads.examine import Examination
from loads.inertia import inertia_of
from loads.linkage import state
from loads.records import RELEASE, SNATCH
from loads.release.bodies import own_speed, swinging
from loads.release.lift_off import lets_go
from loads.release.study import ReleaseStudy
from parts.problems import DesignRefused
from parts.stop_back import back_contact
from tests.starters import context_of, examined, put, put_all, settled, whole_text_of

RIG = "impact-rig"
NO_BUMPER: dict[str, str | None] = {
    f"moving__bumper_{key}": None for key in ("stiffness", "travel", "damping")
}  # fmt: skip
MOVING = re.compile(r"(?ms)^\[moving\]\n.*?(?=^\[|\Z)")


def changed(name: str, **values: str | None) -> str:
    """A starter as it is written out, with some lines changed."""
    return put_all(whole_text_of(name), values)


def with_sizes(folder: Path, **values: str | None) -> str:
    """The rig with every size given that the winding alone asks for."""
    text = MOVING.sub("", settled(folder, RIG)).rstrip()
    moving = MOVING.search(whole_text_of(RIG))
    assert moving is not None
    return put_all(f"{text}\n\n{moving[0]}", values)


def study_of(e: Examination) -> ReleaseStudy:
    found = e.studies["release"]
    assert isinstance(found, ReleaseStudy)
    return found


@pytest.fixture(scope="module")
def rig(tmp_path_factory: pytest.TempPathFactory) -> Examination:
    return examined(tmp_path_factory.mktemp("rig"), changed(RIG))


def test_the_rig_is_covered(rig: Examination) -> None:
    s = study_of(rig)
    assert s.covered
    assert s.course is not None
    assert s.scene is not None
    assert s.course.settled
    assert s.course.energy_error < 1e-4
    assert s.efficiency is not None
    assert 0.3 < s.efficiency < 1.0
    assert s.scene.back == back_contact(rig.parts, rig.design, rig.sizes).link_angle
    assert {row.check for row in s.checks} == {
        "the bumper stops the mass before the link has straightened", "stays within its travel",
    }  # fmt: skip
    assert not any("NOT COVERED" in text for text in rig.cautions)
    assert any("the payload leaves with" in text for text in rig.cautions)


def test_release_and_snatch_are_cases_of_every_site(rig: Examination) -> None:
    s = study_of(rig)
    sites = {(r.part, r.site) for r in rig.loads}
    for case in (RELEASE, SNATCH):
        assert {(r.part, r.site) for r in rig.loads if r.case == case} == sites
    for case, pull in ((RELEASE, s.swing_tension), (SNATCH, s.snatch)):
        row = next(r for r in rig.loads if r.part == "chain" and r.case == case)
        # not times the shock factor, which is for the winding
        assert rig.design.targets.shock_factor > 1.0
        assert row.magnitude == pytest.approx(pull, rel=1e-9)
    drive = next(r for r in rig.loads if r.part == "frame" and r.site == "drive" and r.case == SNATCH)
    assert abs(drive.moment[2]) == pytest.approx(s.snatch_torque, rel=1e-9)


def test_the_snatch_can_govern(tmp_path: Path) -> None:
    """Without a bumper the chain has to stop the mass: parts are checked at the snatch, and what is left open grows."""
    soft = examined(tmp_path, changed(RIG, **NO_BUMPER))
    s = study_of(soft)
    assert s.covered
    assert s.snatch > 2.0 * float(soft.figures.largest_tension)
    cases = {row.case for row in soft.checks}
    assert SNATCH in cases
    failing = next(r for r in soft.checks if r.check == "the bumper stops the mass before the link has straightened")
    assert not failing.holds
    assert "no bumper" in failing.note
    chain = next(r for r in soft.checks if r.part == "chain" and r.case == SNATCH)
    assert chain.demand == pytest.approx(s.snatch, rel=1e-9)


def test_open_sizes_grow_with_the_snatch_and_given_ones_stay(rig: Examination, tmp_path: Path) -> None:
    hard = examined(tmp_path, changed(RIG, **NO_BUMPER))
    assert hard.sizes.crank_pin.diameter > rig.sizes.crank_pin.diameter
    assert hard.sizes.chain_pin.diameter > rig.sizes.chain_pin.diameter
    assert hard.sizes.link.thickness * hard.sizes.link.width > rig.sizes.link.thickness * rig.sizes.link.width
    given = examined(tmp_path, with_sizes(tmp_path, **NO_BUMPER))
    assert given.sizes.crank_pin.diameter < hard.sizes.crank_pin.diameter
    assert given.sizes.chain_pin.diameter < hard.sizes.chain_pin.diameter
    assert given.sizes.link.width < hard.sizes.link.width
    short = {(row.part, row.case) for row in given.falls_short}
    assert ("crank_pin", SNATCH) in short
    assert ("swing_link", SNATCH) in short


# ------------------------------------------------------------------------------------------- not covered

ROW = ("assembly", "release", "release is covered")


@pytest.mark.parametrize(
    ("moving", "why"),
    [
        ("", "gives no [moving] mass"),
        ("[moving]\nstopped_elsewhere = true\n", "mass is not given"),
    ],
)
def test_without_masses_it_is_not_covered(moving: str, why: str, tmp_path: Path) -> None:
    text = MOVING.sub(moving, whole_text_of(RIG))
    e = examined(tmp_path, text)
    s = study_of(e)
    elsewhere = bool(moving)
    assert not s.covered
    assert why in s.why
    assert s.course is None
    assert (s.swing_tension, s.snatch, s.snatch_torque, s.blow, s.efficiency) == (0.0, 0.0, 0.0, 0.0, None)
    assert e.past.release is None
    assert {r.case for r in e.loads}.isdisjoint({RELEASE, SNATCH})
    rows = [r for r in e.checks if (r.part, r.site, r.check) == ROW]
    assert [r.holds for r in rows] == ([] if elsewhere else [False])
    if not elsewhere:
        assert not e.holds
    assert e.cautions[0].startswith("THE RELEASE IS NOT COVERED")
    assert e.cautions[0].endswith("is in none of these loads.")


def test_a_mass_that_something_else_stops(tmp_path: Path) -> None:
    e = examined(tmp_path, changed(RIG, **NO_BUMPER, moving__stopped_elsewhere="true"))
    s = study_of(e)
    assert s.covered
    assert s.course is not None
    assert s.checks == ()
    assert s.course.draw.min() > -0.1
    assert any("stopped_elsewhere" in text for text in e.cautions)


def test_what_does_not_settle_gives_no_numbers(tmp_path: Path) -> None:
    """A fast disc has gone on by a quarter turn before it is over."""
    e = examined(tmp_path, changed("soil-tamper", moving__disc_speed='"2000 rpm"'))
    s = study_of(e)
    assert not s.covered
    assert "did not settle" in s.why
    assert s.course is None
    assert [r.holds for r in e.checks if (r.part, r.site, r.check) == ROW] == [False]
    assert e.cautions[0].startswith("THE RELEASE IS NOT COVERED")


def test_a_still_disc_is_refused(tmp_path: Path) -> None:
    """Release before null: the spring gives the disc no speed of its own."""
    text = changed(RIG, mechanism__seat_angle='"-3 deg"', moving__disc_speed=None)
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text)
    (problem,) = refusal.value.problems
    assert problem.key == "moving.disc_speed"
    assert "unstable balance" in str(refusal.value)


def test_the_spring_gives_the_disc_a_speed_of_its_own(rig: Examination, tmp_path: Path) -> None:
    """Past the null the spring drives the disc; its speed is what that work gives it, by the energy of what turns."""
    e = examined(tmp_path, changed(RIG, moving__disc_speed=None))
    s = study_of(e)
    assert s.speed_from_spring
    assert s.speed is not None
    assert "moving.disc_speed" in {row.key for row in s.assumed}
    at, m = e.past.figures.events, e.machine
    scene = s.scene
    assert scene is not None
    friction = scene.pin_friction + scene.chain_pin_friction
    end = lets_go(scene.far, scene.crank_radius, scene.link_length, scene.front, float(at.release), friction)
    assert end > float(at.release)
    # T dp/dθ of the seated machine, the pull by differences
    theta = np.linspace(float(at.null), end, 2001)
    seated = state(e.past.machine, theta, at.catch)
    net = -seated.tension * np.gradient(seated.pull, theta) - seated.friction_torque
    work = float(np.trapezoid(np.maximum(net, 0.0), theta))
    assert work > 0.0
    # every point's mass by its distance from the axis: the seated link's as that of its middle and about it
    c = context_of(e)
    hung = swinging(c, 0.0)
    middle = hung.link_middle
    x, y = m.crank_radius - middle * np.cos(m.seat_angle), -middle * np.sin(m.seat_angle)
    link = hung.link - hung.link_mass * middle**2 + hung.link_mass * float(x**2 + y**2)
    drive = e.design.drive.inertia if e.design.drive is not None else None
    turning = inertia_of(c.parts).disc + link + (drive or 0.0)
    assert s.speed == pytest.approx(np.sqrt(2.0 * work / (turning * 1e-3)), rel=0.02)
    assert own_speed(c) == pytest.approx(s.speed, rel=1e-3)


@pytest.mark.parametrize(
    ("key", "words"), [("payload_leaves_at", "before it is let go"), ("bumper_travel", "before any")]
)
def test_what_lies_beyond_the_draw_is_refused(key: str, words: str, tmp_path: Path) -> None:
    text = put(whole_text_of("impact-rig"), "moving", key, '"400 mm"')
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text)
    assert f"moving.{key}" in str(refusal.value)
    assert words in str(refusal.value)
    assert "less than the draw at the release, 172." in str(refusal.value)


def test_a_dry_shot_is_told_of_but_is_in_no_load(tmp_path: Path) -> None:
    """Its snatch is that of the same design with next to no payload; the loads are those of the shot with it."""
    e = examined(tmp_path, whole_text_of("seed-thrower"))
    study = e.studies["release"]
    assert isinstance(study, ReleaseStudy)
    assert study.dry_snatch is not None
    assert any("never fire dry" in text and f"{study.dry_snatch:.4g} N" in text for text in e.cautions)
    tension = np.linalg.norm(
        np.stack([row.force for row in e.loads if (row.part, row.case) == ("chain", SNATCH)]), axis=1
    )
    assert float(tension.max()) == pytest.approx(study.snatch, rel=1e-3)
    assert abs(study.dry_snatch / study.snatch - 1.0) > 0.02
    none = examined(tmp_path, whole_text_of("soil-tamper"))
    assert not any("dry" in text for text in none.cautions)


@pytest.mark.parametrize("fault", [{"settled": False}, {"energy_error": 0.1}])
def test_a_dry_shot_that_cannot_be_trusted_gives_no_number(
    rig: Examination, fault: dict[str, float], monkeypatch: pytest.MonkeyPatch
) -> None:
    import loads.release.study as module

    study = study_of(rig)
    assert study.course is not None
    broken = replace(study.course, **fault)  # type: ignore[arg-type]
    monkeypatch.setattr(module, "simulate", lambda _scene: broken)
    again = module.with_dry_shot(study, "metric")
    assert again.dry_snatch is None
    assert "not covered: never fire dry" in again.cautions[-1]

"""The chain's study: lengths by hand, every adjustment the machine solved by itself, wear and speed."""

from __future__ import annotations

import math
from dataclasses import replace
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest

from loads.chain_study import (
    BY_DESIGN,
    BY_PITCHES,
    BY_THREAD,
    BY_WEAR,
    angle_per_link,
    whole,
)
from loads.cycle import cycle
from loads.examine import Examination
from loads.far_ends.registry import linkage_of
from tests.loads.machines import TABLE
from tests.parts.designs import chain_of, sheave_of
from tests.starters import NAMES, changed, examined, study_of, text_of

FIGURES = (
    "draw_at_hold",
    "stored_energy",
    "first_peak",
    "second_peak",
    "middle_least",
    "hold_torque",
    "largest_tension",
)


@pytest.mark.parametrize("name", NAMES)
def test_each_row_is_the_machine_with_that_slack(name: str, tmp_path: Path) -> None:
    e = examined(tmp_path, text_of(name))
    assert len(study_of(e).rows) > 5
    for row in study_of(e).rows:
        alone = cycle(replace(linkage_of(e.design), slack=np.asarray(row.slack)))
        for figure in FIGURES:
            assert getattr(row, figure) == pytest.approx(float(getattr(alone, figure)), rel=1e-7, abs=1e-6), figure
        assert float(alone.events.hold) == pytest.approx(float(e.figures.events.hold))
        assert row.hold_margin == e.design.mechanism.hold_margin
    designed = study_of(e).row(BY_DESIGN)
    assert designed is not None
    assert designed.slack == e.design.far_end.slack
    assert designed.stored_energy == pytest.approx(float(e.figures.stored_energy))


@pytest.mark.parametrize("name", NAMES)
def test_more_slack_draws_and_stores_less(name: str, tmp_path: Path) -> None:
    rows = study_of(examined(tmp_path, text_of(name))).rows
    slacks = [row.slack for row in rows]
    assert slacks == sorted(set(slacks))
    for less, more in pairwise(rows):
        assert more.draw_at_hold - less.draw_at_hold == pytest.approx(less.slack - more.slack)
        assert more.stored_energy < less.stored_energy
        assert more.largest_tension <= less.largest_tension * (1.0 + 1e-9)


def test_many_slacks_are_solved_in_one_call_for_tables_too() -> None:
    slacks = np.array([0.0, 4.0, 20.0])
    for machine in TABLE.values():
        together = cycle(replace(machine.copies(slacks.shape), slack=slacks))
        for i, slack in enumerate(slacks):
            alone = cycle(replace(machine, slack=np.asarray(slack)))
            assert together.second_peak[i] == pytest.approx(float(alone.second_peak), rel=1e-7)


def straight_rig(tmp_path: Path, **more: str | None) -> Examination:
    """The impact rig with a plain half wrap, so that lengths can be worked out on paper."""
    return examined(tmp_path, changed("impact-rig", sheave__exit_angle=None, **more))


def test_length_by_hand(tmp_path: Path) -> None:
    e = straight_rig(tmp_path, chain__run_to_spring='"300 mm"')
    # tangent from the disc axis to the sheave's pitch circle; link and crank in line; half a turn of the sheave
    wheel, m = sheave_of(e.design), e.design.mechanism
    (x, y), radius = wheel.center, wheel.pitch_radius
    straight = math.sqrt(x**2 + y**2 - radius**2) - m.crank_radius - m.link_length - e.sizes.chain_end.length
    taut = straight + math.pi * radius + 300.0
    study = study_of(e)
    assert study.straight == pytest.approx(straight)
    assert study.on_sheave == pytest.approx(math.pi * radius)
    assert study.taut_length == pytest.approx(taut)
    pitch = chain_of(e.design).pitch
    assert study.whole_pitches == math.ceil(taut / pitch)
    assert study.slack_of_whole == pytest.approx(math.ceil(taut / pitch) * pitch - taut)
    counted = [row for row in study.rows if row.pitches is not None]
    assert counted[0].pitches == study.whole_pitches
    for row in counted:
        assert row.slack == pytest.approx((row.pitches or 0) * pitch - taut)
    assert {row.by for row in counted} == {BY_PITCHES, "the other end fitting"}
    assert study.wear == pytest.approx(0.03 * taut)


def test_without_the_run_the_steps_count_from_the_given_slack(tmp_path: Path) -> None:
    e = examined(tmp_path, changed("seed-thrower", chain__slack='"12 mm"'))
    study, pitch = study_of(e), chain_of(e.design).pitch
    assert study.taut_length is None
    assert study.whole_pitches is None
    assert study.slack_of_whole is None
    assert study.wear == pytest.approx(0.03 * study.up_to_sheave)
    by = {round(row.slack, 6): row.by for row in study.rows}
    assert by[12.0] == BY_DESIGN
    assert by[round(12.0 - pitch, 6)] == "offset link or the other end fitting"
    assert by[round(12.0 + 2 * pitch, 6)] == BY_PITCHES
    assert by[round(12.0 + pitch / 4, 6)] == BY_THREAD
    assert by[round(12.0 + study.wear, 6)] == BY_WEAR


def test_no_row_draws_the_spring_beyond_its_table(tmp_path: Path) -> None:
    text = changed("impact-rig", chain__slack='"45 mm"', spring__table='[["0 mm", "0 N"], ["140 mm", "20 kN"]]')
    e = examined(tmp_path, text)
    most = float(e.figures.most_pull)
    assert all(most - row.slack <= 140.0 + 1e-6 for row in study_of(e).rows)
    assert min(row.slack for row in study_of(e).rows) < 45.0


def test_speed_is_compared_with_lifting_practice(tmp_path: Path) -> None:
    plain = examined(tmp_path, text_of("impact-rig"))
    # at its fastest the free link draws the chain at crank radius times speed, the chain line square to the crank
    r = plain.design.mechanism.crank_radius
    assert study_of(plain).most_reach == pytest.approx(r, rel=1e-4)
    limit = 500.0 / r * 30.0 / math.pi
    assert study_of(plain).limit_disc_speed * 30.0 / math.pi == pytest.approx(limit, rel=1e-4)
    assert any(f"{limit:.3g} rpm" in text and "no disc speed" in text for text in plain.cautions)
    for share, said in ((0.7, False), (1.5, True)):
        speed = f'"{share * limit:.6f} rpm"'
        e = examined(tmp_path, changed("impact-rig", moving__mass='"12 kg"', moving__disc_speed=speed))
        fast = [text for text in e.cautions if text.startswith("Chain speed")]
        assert bool(fast) is said
        # a caution, not a check that can fall short
        assert {c.check for c in e.checks if c.part == "chain"} == {c.check for c in plain.checks if c.part == "chain"}
    assert "45 m/min" in fast[0]


@pytest.mark.parametrize("short_of", [1e-6, 1e-3, 0.1, 2.0])
def test_slack_taken_up_only_at_the_very_end(short_of: float, tmp_path: Path) -> None:
    most = float(examined(tmp_path, text_of("seed-thrower")).figures.most_pull)
    e = examined(tmp_path, changed("seed-thrower", chain__slack=f'"{most - short_of:.9f} mm"'))
    assert all(math.isfinite(row.stored_energy) and row.draw_at_hold > 0.0 for row in study_of(e).rows)
    assert study_of(e).limit_disc_speed > 0.0
    assert not any("inf" in text.split() for text in e.cautions)


def test_angle_per_link_and_whole_pitches() -> None:
    assert angle_per_link(10.0, 10.0) == pytest.approx(math.pi / 3)  # a hexagon
    assert angle_per_link(20.0, 10.0) == pytest.approx(math.pi)
    assert angle_per_link(20.1, 10.0) is None
    assert whole(30.0, 10.0) == 3
    assert whole(30.001, 10.0) == 4

"""Mechanisms that cannot exist are refused, with the key, its line and what would be accepted."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from loads.refusals import mechanism_problems
from parts.problems import DesignRefused
from tests.starters import changed, examined

CANNOT_EXIST = {
    "wrap over 270": (
        changed("impact-rig", sheave__exit_angle='"60 deg"'),
        ("sheave.exit_angle",),
        "within 0 and 270 deg",
    ),
    "table too short": (
        changed("impact-rig", spring__table='[["0 mm", "0 N"], ["100 mm", "10 kN"]]'),
        ("spring.table",),
        "largest draw, 172",
    ),
    "slack never taken up": (
        changed("seed-thrower", chain__slack='"95 mm"'),
        ("chain.slack",),
        "less than the whole pull, 92",
    ),
    "two at once": (
        changed("impact-rig", sheave__exit_angle='"60 deg"', spring__table='[["0 mm", "0 N"], ["100 mm", "10 kN"]]'),
        ("sheave.exit_angle", "spring.table"),
        "",
    ),
}


@pytest.mark.parametrize("name", CANNOT_EXIST)
def test_refused_with_its_key(name: str, tmp_path: Path) -> None:
    text, keys, accepted = CANNOT_EXIST[name]
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text)
    said = str(refusal.value)
    for key in keys:
        assert key in said
    assert accepted in said
    for problem in refusal.value.problems:
        assert problem.line is not None
        assert problem.key.split(".")[1] in text.splitlines()[problem.line - 1]


def test_file_and_mechanism_problems_come_together(tmp_path: Path) -> None:
    text = changed("impact-rig", sheave__exit_angle='"60 deg"', disc__colour='"red"', link__thickness='"8 N"')
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text)
    assert {p.key for p in refusal.value.problems} == {"sheave.exit_angle", "disc.colour", "link.thickness"}


def test_a_mechanism_without_its_events_is_named(tmp_path: Path) -> None:
    """No design within the file's ranges lacks an event (40,000 random ones had all); those made by other means may."""
    e = examined(tmp_path, changed("impact-rig"))
    at = e.figures.events
    for lost in ("catch", "null", "release"):
        events = replace(at, **{lost: np.asarray(np.nan)})
        (problem,) = mechanism_problems(e.design, replace(e.figures, events=events))
        assert problem.key == "mechanism.seat_angle"
        assert f"no {lost}" in problem.text
    early = replace(at, hold=at.catch - 0.01)
    (problem,) = mechanism_problems(e.design, replace(e.figures, events=early))
    assert problem.key == "mechanism.hold_margin"
    assert problem.accepted.startswith("less than 17")

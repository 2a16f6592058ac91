"""The chain pin of a single stack, pressed into its link, is thick enough not to turn there with what turns on it."""

from __future__ import annotations

from pathlib import Path

import pytest

from loads.examine import Examination
from loads.records import Check
from tests.loads.far_end_designs import DESIGNS
from tests.starters import changed, examined, put

SHORT_ARM = (
    DESIGNS["rocker"]
    .replace('pivot = ["380 mm", "300 mm"]', 'pivot = ["380 mm", "200 mm"]')
    .replace('arm = "300 mm"', 'arm = "205 mm"')
)


def seat(e: Examination, check: str = "holds against turning") -> Check:
    return next(row for row in e.checks if (row.part, row.site, row.check) == ("chain_pin", "link_seat", check))


def test_the_seat_holds_and_the_next_smaller_pin_would_not(tmp_path: Path) -> None:
    e = examined(tmp_path, SHORT_ARM)
    assert seat(e).holds
    assert e.sizes.chain_pin.diameter == 28.0
    smaller = examined(tmp_path, put(SHORT_ARM, "chain_pin", "diameter", '"25 mm"'))
    assert not seat(smaller).holds


def test_what_rubs_more_has_a_thicker_pin(tmp_path: Path) -> None:
    sizes = []
    for friction in ("0.02", "0.15", "0.2"):
        e = examined(tmp_path, put(SHORT_ARM, "friction", "chain_pin", friction))
        assert seat(e).holds
        sizes.append(e.sizes.chain_pin.diameter)
    assert sizes == sorted(sizes)
    assert sizes[0] < sizes[-1]


@pytest.mark.parametrize("load", ["1", "3"])
def test_the_seed_thrower_s_seat(tmp_path: Path, load: str) -> None:
    """Held by its fit at its own load, by what presses it in its seat at a greater one."""
    e = examined(tmp_path, changed("seed-thrower", targets__shock_factor=load))
    assert seat(e).holds
    assert seat(e, "holds along its axis").holds

"""The tables of fits, shaft and bearings: what is read, and what is refused with which advice."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from parts.design import BearingWish, FitsWish
from tests.parts.designs import LEAST, line_of, read

TABLES = """
[fits]
crank_pin_disc = "H7/s6"
dowel = "H7 / n6"
[shaft]
diameter = "1.5 in"
drive = "key"
phase_tolerance = "0.2 deg"
material = "S355J2"
[bearings]
main = { kind = "rolling", static_rating = "30 kN" }
[bearings.sheave]
width = "40 mm"
"""


def test_tables_of_what_the_parts_run_on(tmp_path: Path) -> None:
    reading = read(tmp_path, LEAST + TABLES)
    assert reading.problems == ()
    d = reading.design
    assert d is not None
    assert d.fits == FitsWish(crank_pin_disc="H7/s6", dowel="H7/n6")
    assert d.shaft.diameter == pytest.approx(38.1)
    assert d.shaft.drive == "key"
    assert d.shaft.phase_tolerance == pytest.approx(math.radians(0.2))
    assert d.shaft.material is not None
    assert d.shaft.material.name == "S355J2"
    assert d.main_bearing == BearingWish(kind="rolling", static_rating=30_000.0)
    assert d.sheave_bearing == BearingWish(width=40.0)


def test_left_out_they_are_left_to_proportion(tmp_path: Path) -> None:
    d = read(tmp_path, LEAST).design
    assert d is not None
    assert d.fits == FitsWish()
    assert d.main_bearing == d.sheave_bearing == BearingWish()


@pytest.mark.parametrize(
    ("lines", "key", "advice"),
    [
        ('[fits]\ndowel = "H7/m5"', "fits.dowel", '"H7/m6" (the nearest)'),
        ("[fits]\ndowel = 7", "fits.dowel", 'such as "H7/r6"'),
        ('[fits]\ndowl = "H7/m6"', "fits.dowl", "dowel (the nearest"),
        ('[shaft]\ndrive = "keyed"', "shaft.drive", '"key"'),
        ('[shaft]\nmaterial = "S355J3"', "shaft.material", "S355J2 (the nearest)"),
        ('[bearings.main]\nkind = "roling"', "bearings.main.kind", '(the nearest is "rolling")'),
        ("[bearings.main]\nwidht = 3", "bearings.main.widht", "width (the nearest"),
        ('[bearings.sheave]\nwidth = "3 N"', "bearings.sheave.width", "mm"),
        ('[bearings]\nmain = "rolling"', "bearings.main", "a table"),
    ],
)
def test_refused_with_key_line_and_advice(tmp_path: Path, lines: str, key: str, advice: str) -> None:
    text = f"{LEAST}\n{lines}\n"
    problems = read(tmp_path, text).problems
    assert [p.key for p in problems] == [key]
    assert advice in problems[0].accepted
    assert problems[0].line == line_of(text, lines.splitlines()[-1])

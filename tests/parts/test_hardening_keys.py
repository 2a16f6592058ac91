"""surface_yield and case_depth: what is read, and what is refused with which advice."""

from __future__ import annotations

from pathlib import Path

import pytest

from parts.design import PinWish
from tests.parts.designs import LEAST, line_of, read

TABLES = """
[link]
surface_yield = "1100 MPa"
[stop]
surface_yield = "200 ksi"
case_depth = "0.04 in"
[crank_pin]
surface_yield = 1400
[chain_pin]
diameter = 12
"""


def test_hardened_surfaces_are_read(tmp_path: Path) -> None:
    reading = read(tmp_path, LEAST + TABLES)
    assert reading.problems == ()
    d = reading.design
    assert d is not None
    assert (d.link.surface_yield, d.link.case_depth) == (1100.0, None)
    assert d.stop.surface_yield == pytest.approx(1378.95, abs=0.01)
    assert d.stop.case_depth == pytest.approx(1.016)
    assert d.crank_pin == PinWish(surface_yield=1400.0)
    assert d.chain_pin == PinWish(diameter=12.0)


@pytest.mark.parametrize("table", ["link", "stop", "crank_pin", "chain_pin"])
@pytest.mark.parametrize(
    ("line", "key", "advice"),
    [
        ('case_depth = "0.8 mm"', "case_depth", "surface_yield"),
        ('surface_yield = "58 HRC"', "surface_yield", "MPa"),
        ('surface_yeild = "1400 MPa"', "surface_yeild", "surface_yield (the nearest"),
    ],
)
def test_a_wrong_hardening_is_refused(tmp_path: Path, table: str, line: str, key: str, advice: str) -> None:
    text = f"{LEAST}\n[{table}]\n{line}\n"
    problems = read(tmp_path, text).problems
    assert [p.key for p in problems] == [f"{table}.{key}"]
    assert advice in problems[0].accepted
    assert problems[0].line == line_of(text, line)

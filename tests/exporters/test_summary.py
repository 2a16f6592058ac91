"""The terminal's summary: the verdict first, 80 columns, no caution left out, colour or not."""

import io
import re

import pytest
from rich.console import Console

from exporters.summary import GOVERNING, governing, in_brief, print_summary
from loads.examine import Examination
from tests.exporters.examined import AWKWARD, STARTERS, awkward, short, starter


def printed(e: Examination, width: int = 80, colour: bool = False) -> str:
    out = io.StringIO()
    print_summary(e, Console(file=out, width=width, force_terminal=colour, color_system="standard" if colour else None))
    return out.getvalue()


@pytest.mark.parametrize("name", STARTERS)
def test_the_verdict_comes_first_and_lines_fit(name: str) -> None:
    e = starter(name)
    for width in (60, 80, 200):
        lines = printed(e, width).splitlines()
        assert lines[0].startswith("HOLDS" if e.holds else "FALLS SHORT")
        assert max(map(len, lines)) <= min(width, 80)
        if width >= 80:
            assert all(line == line.rstrip() for line in lines)


def test_what_falls_short_is_named() -> None:
    text = printed(short())
    assert text.startswith("FALLS SHORT  ")
    assert "chain, strand: tension" in text
    assert "HOLDS" not in text


def test_what_governs_is_short() -> None:
    for e in (short(), *map(starter, STARTERS)):
        rows = governing(e)
        assert 0 < len(rows) <= GOVERNING
        assert rows[: len(e.falls_short)] == list(e.falls_short)[:GOVERNING]


@pytest.mark.parametrize("name", STARTERS)
def test_no_caution_is_left_out(name: str) -> None:
    e = starter(name)
    text = " ".join(printed(e).split())
    for caution in e.cautions:
        brief = in_brief(caution)
        assert brief in text
        assert brief.endswith(".")
        assert len(brief) > len(caution) / 3
    assert "maim or kill without warning" in text


def test_a_title_is_no_markup() -> None:
    assert AWKWARD in printed(awkward())
    assert "lbf" in printed(awkward())


def test_colour_only_adds_colour() -> None:
    assert re.sub(r"\x1b\[[0-9;]*m", "", printed(short(), colour=True)) == printed(short())


def test_a_caution_cut_short_loses_whole_second_thoughts() -> None:
    assert in_brief("The seat angle is 3.00°; the least that unwinds is 3.15°.") == "The seat angle is 3.00°."
    assert in_brief("It stays; a margin of 6.6° would do. Keep clear.") == "It stays. Keep clear."

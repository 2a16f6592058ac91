"""Designs examined once for the tests of what leaves: a starter, and variations of it."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from tempfile import TemporaryDirectory

from loads.examine import Examination, examine
from tests.starters import text_of

STARTERS = ("impact-rig", "seed-thrower", "soil-tamper")
AWKWARD = 'A <b>bold</b> rig & "daughters\'" [red]'


@lru_cache(maxsize=16)
def starter(name: str, *changes: tuple[str, str]) -> Examination:
    """A starter design without its studies, with pieces of its text exchanged. Each piece has to be there."""
    text = text_of(name)
    for old, new in changes:
        assert old in text, f"{old} is not in {name}"
        text = text.replace(old, new)
    with TemporaryDirectory() as folder:
        path = Path(folder) / "design.toml"
        path.write_text(text, encoding="utf-8")
        return examine(path)


def awkward() -> Examination:
    """US units and a title that every format has to escape."""
    return starter(
        "impact-rig",
        ('title = "Guard-panel impact rig"', f"title = '''{AWKWARD}'''"),
        ('units = "metric"', 'units = "us"'),
    )


def short() -> Examination:
    """A chain target that no chain reaches."""
    return starter("impact-rig", ("chain = 5.0", "chain = 500.0"))

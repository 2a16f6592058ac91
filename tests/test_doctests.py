"""The examples in the docstrings hold."""

import doctest
import importlib
import re
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parent.parent
EXAMPLE = re.compile(r"^\s*>>> ", re.MULTILINE)
MODULES = [
    ".".join(path.relative_to(ROOT).with_suffix("").parts)
    for room in ("parts", "loads", "exporters")
    for path in sorted((ROOT / room).rglob("*.py"))
    if EXAMPLE.search(path.read_text(encoding="utf-8"))
]


@pytest.mark.parametrize("name", MODULES)
def test_examples(name: str) -> None:
    found = doctest.testmod(importlib.import_module(name))
    assert found.attempted > 0
    assert found.failed == 0


def test_there_are_some() -> None:
    assert len(MODULES) > 5

"""The starter designs that ``start`` lists and writes."""

from __future__ import annotations

from dataclasses import dataclass
from importlib.resources import files


@dataclass(frozen=True, slots=True)
class Starter:
    name: str
    about: str  # the first comment line of its file
    text: str


def starters() -> tuple[Starter, ...]:
    """Every starter design, by name."""
    found = []
    for entry in files("templates").iterdir():
        if entry.name.endswith(".toml"):
            text = entry.read_text(encoding="utf-8")
            found.append(Starter(entry.name.removesuffix(".toml"), text.partition("\n")[0].lstrip("# "), text))
    return tuple(sorted(found, key=lambda s: s.name))

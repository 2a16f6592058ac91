"""What the checks take from practice, read from its table once: friction of press joints, bush pressures, keys, motors."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import lru_cache
from importlib.resources import files
from typing import Any

TABLES = ("joints.toml", "drive.toml")  # of ``loads/data``
UNSURE = " (from memory, confirm with the maker's certificate)"


@dataclass(frozen=True, slots=True)
class Key:
    """A parallel key's section on a shaft, mm."""

    width: float
    height: float
    seat: float  # depth of the keyway in the shaft


@lru_cache(maxsize=1)
def _table() -> dict[str, Any]:
    data = files("loads") / "data"
    return {k: v for name in TABLES for k, v in tomllib.loads((data / name).read_text(encoding="utf-8")).items()}


def value(group: str, name: str) -> float:
    """One number of a group of the tables."""
    return float(_table()[group][name])


def values(group: str, name: str) -> tuple[float, ...]:
    """A row of numbers."""
    return tuple(float(x) for x in _table()[group][name])


def press_fits() -> tuple[str, ...]:
    """Press fits in the order in which they are tried, the tightest first."""
    return tuple(str(x) for x in _table()["press"]["preferred"])


def source(group: str) -> str:
    """Where a group's values are from, for the bill; says so where they, or some of them, are from memory."""
    row = _table()[group]
    if memory := row.get("from_memory"):
        return f"{row['source']}; {', '.join(memory.values())} from memory, confirm"
    return str(row["source"]) + ("" if row["confirmed"] or "no source" in row["source"] else UNSURE)


def key_for(diameter: float) -> Key:
    """The key of a shaft ``diameter`` mm; beyond the table its first or last row."""
    rows = _table()["key"]["rows"]
    row = next((r for r in rows if diameter <= float(r[1])), rows[-1])
    return Key(float(row[2]), float(row[3]), float(row[4]))

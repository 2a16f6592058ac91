"""General tolerances and what is usual where nothing is stated, from ``parts/data/tolerances.toml``."""

from __future__ import annotations

import math
import tomllib
from functools import lru_cache
from importlib.resources import files
from typing import Any

GENERAL = "ISO 2768-1 m"


@lru_cache(maxsize=1)
def _table() -> dict[str, Any]:
    return tomllib.loads((files("parts") / "data" / "tolerances.toml").read_text(encoding="utf-8"))


def general(nominal: float) -> float:
    """Permissible deviation ± (mm) of a machined size or position (mm) that has no tolerance of its own, class m.

    Below the table its first row serves, above it its last. Source: ISO 2768-1, table 1, class m.

    >>> general(58.0), general(430.0)
    (0.3, 0.8)
    """
    rows = _table()["linear"]["m"]["rows"]
    return float(next((row[2] for row in rows if nominal <= row[1]), rows[-1][2]))


def share(name: str) -> float:
    """A tolerance as a share of a length: "chain_length" or "cut_length"."""
    return float(_table()[name]["share"])


def angle(name: str) -> float:
    """A tolerance in rad: "encoder_offset", "backlash" or "draw_direction"."""
    return math.radians(float(_table()[name]["degrees"]))


def source(name: str) -> str:
    """Where a row is from; "general" is the table of machined sizes."""
    row = _table()["linear"]["m"] if name == "general" else _table()[name]
    return str(row["source"])

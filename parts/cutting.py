"""How each hole of a plate is made in a profile cutting shop: cut to size, cut under size, or drilled. In mm."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import lru_cache
from importlib.resources import files
from typing import Any, Literal

from parts.outline import Hole


@dataclass(frozen=True, slots=True)
class HoleWork:
    """What is done first (``way``, to ``first_diameter``) and last ("" when the first is all: "ream" or "bore")."""

    way: Literal["cut", "pilot", "drill"]
    first_diameter: float
    finish: Literal["", "ream", "bore"]


@lru_cache(maxsize=1)
def _table() -> dict[str, Any]:
    return tomllib.loads((files("parts") / "data" / "cutting.toml").read_text(encoding="utf-8"))


def _allowance(group: str, diameter: float) -> float:
    rows = _table()[group]["allowance"]
    return float(next((allowance for largest, allowance in rows if diameter <= largest), rows[-1][1]))


def hole_work(hole: Hole, thickness: float) -> HoleWork:
    """How a hole through a plate of ``thickness`` mm is made, by common practice.

    A hole with a fit is left under size and finished; one that is too small for the thickness is drilled.
    """
    table = _table()
    least = max(table["cut"]["least_hole"], table["cut"]["least_hole_to_thickness"] * thickness)
    finish: Literal["", "ream", "bore"] = ""
    first = hole.diameter
    if hole.fit is not None:
        finish = "ream" if hole.diameter <= table["finish"]["largest_reamed"] else "bore"
        first = hole.diameter - _allowance("pilot", hole.diameter)
    if first >= least:
        return HoleWork("pilot" if finish else "cut", first, finish)
    if finish:
        first = hole.diameter - _allowance("drill", hole.diameter)
    return HoleWork("drill", first, finish)

"""Handbook values for fatigue, read from their table once."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import lru_cache
from importlib.resources import files
from typing import Any

from parts.design import Material


@dataclass(frozen=True, slots=True)
class Endurance:
    """S_e' = ratio S_ut ≤ most (MPa), reached at ``cycles``; where not ``endless`` the S–N line goes on falling."""

    name: str
    ratio: float
    most: float
    cycles: float
    endless: bool
    source: str

    def limit(self, s_ut: float) -> float:
        return min(self.ratio * s_ut, self.most)


@dataclass(frozen=True, slots=True)
class PressFit:
    k_f: float
    source: str


@lru_cache(maxsize=1)
def _table() -> dict[str, Any]:
    return tomllib.loads((files("loads") / "data" / "fatigue.toml").read_text(encoding="utf-8"))


def surface(name: str) -> tuple[float, float]:
    """a (MPa) and b of a surface's k_a; raises ``KeyError`` for one that is not listed."""
    row = _table()["surface"][name]
    return float(row["a"]), float(row["b"])


def endurance(material: Material) -> Endurance:
    """What the endurance of a material goes by: its kind, or for one of one's own whether it is as stiff as steel."""
    rows: dict[str, Any] = _table()["endurance"]
    found = next((name for name, row in rows.items() if material.kind in row["kinds"]), None)
    if found is None:
        found = "steel" if material.youngs_modulus >= float(_table()["own"]["steel_from"]) else "other"
    row = rows[found]
    return Endurance(
        found, float(row["ratio"]), float(row["most"]), float(row["cycles"]), bool(row["endless"]), str(row["source"])
    )


def press_fit() -> PressFit:
    row = _table()["press_fit"]
    return PressFit(float(row["k_f"]), str(row["source"]))


def chain_cycles() -> tuple[float, str]:
    """Cycles of the dynamic strength test of chains, and its source."""
    row = _table()["chain"]
    return float(row["cycles"]), str(row["source"])


def inspection() -> tuple[float, int]:
    """Share of the life, and least number of shots, after which a look is suggested."""
    row = _table()["inspection"]
    return float(row["share"]), int(row["least"])

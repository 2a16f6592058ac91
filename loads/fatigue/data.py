"""Handbook values for fatigue, read from their table once."""

from __future__ import annotations

import math
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
    """The notch factor of a press fit, fretting included: factor (S_ut/reference)^exponent, never below ``least``."""

    factor: float
    reference: float
    exponent: float
    least: float
    source: str

    def k_f(self, s_ut: float) -> float:
        """Of a shaft of S_ut MPa at the edge of a plain hub that is pressed on it, in bending.

        Source: DIN 743-2:2000 table 1, without its factor of size, which only lowers it below 40 mm.
        """
        return max(self.least, self.factor * math.pow(s_ut / self.reference, self.exponent))


@dataclass(frozen=True, slots=True)
class Keyseat:
    """Stress concentration of an end-milled keyseat in a shaft: bending, torsion, root radius over diameter."""

    k_t: float
    k_ts: float
    r_over_d: float
    source: str


@dataclass(frozen=True, slots=True)
class FastenerData:
    """Constants of a line's limit, the cycles where it has it, its slope, and its other end (cycles)."""

    constants: tuple[float, ...]
    cycles: float
    slope: float
    least: float
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
    factor, reference, exponent, least = (float(row[key]) for key in ("factor", "reference", "exponent", "least"))
    return PressFit(factor, reference, exponent, least, str(row["source"]))


def keyseat() -> Keyseat:
    row = _table()["keyseat"]
    return Keyseat(float(row["k_t"]), float(row["k_ts"]), float(row["r_over_d"]), str(row["source"]))


def bolt_tension() -> FastenerData:
    """Threads under alternating tension; the constants are those of σ_ASV, the other end the fewest cycles."""
    row = _table()["bolt_tension"]
    constants = tuple(float(row[key]) for key in ("factor", "numerator", "offset"))
    return FastenerData(constants, float(row["cycles"]), float(row["slope"]), float(row["least"]), str(row["source"]))


def bolt_shear() -> FastenerData:
    """Bolts and dowels in shear; the constants are Δτ_C and Δτ's most over f_y/√3, the other end the cut-off."""
    row = _table()["bolt_shear"]
    constants = (float(row["category"]), float(row["most"]))
    return FastenerData(constants, float(row["cycles"]), float(row["slope"]), float(row["cut_off"]), str(row["source"]))


def chain_cycles() -> tuple[float, str]:
    """Cycles of the dynamic strength test of chains, and its source."""
    row = _table()["chain"]
    return float(row["cycles"]), str(row["source"])


def inspection() -> tuple[float, int]:
    """Share of the life, and least number of shots, after which a look is suggested."""
    row = _table()["inspection"]
    return float(row["share"]), int(row["least"])

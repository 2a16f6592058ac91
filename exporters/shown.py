"""Numbers and units as people are shown them: what the design asks for, four figures, a true minus sign."""

from __future__ import annotations

import math
from dataclasses import dataclass

from loads.records import Check
from parts.quantities import KINDS, Units, factor

OF_CHECKS = {"N": "force", "N·mm": "torque", "mm": "length", "MPa": "stress"}  # kinds by a check's own unit

TITLES = {
    "chain": "Chain", "main_bearing": "Main bearing and hub", "sheave": "Sheave", "sheave_pin": "Sheave pin",
    "spring_anchor": "Spring anchor", "spring": "Spring", "assembly": "Assembly",
}  # fmt: skip


def figures(value: float, significant: int = 4) -> str:
    """A number in fixed point with so many figures, at most three decimals; whole digits are never dropped."""
    if not math.isfinite(value):
        return "–"
    size = math.floor(math.log10(abs(value))) if value else 0
    text = f"{abs(value):.{min(3, max(0, significant - 1 - size))}f}"
    if float(text) == 0.0:
        return "0"
    return f"\N{MINUS SIGN}{text}" if value < 0 else text


def angle(value: float | None, places: int = 1) -> str:
    """An angle (rad) in degrees, without its sign; "–" where there is none."""
    if value is None:
        return "–"
    text = f"{math.degrees(value):.{places}f}"
    return text.replace("-", "\N{MINUS SIGN}") if float(text) else f"{0:.{places}f}"


def factor_text(row: Check) -> str:
    """A safety factor with two decimals, or as many as it takes to look like the shortfall that it is."""
    value = row.safety_factor
    if value is None:
        return "–"
    for places in (2, 3, 4, 6, 9):
        text = f"{value:.{places}f}"
        if row.holds or float(text) < row.target:
            break
    return text


@dataclass(frozen=True, slots=True)
class Shown:
    """Quantities in the system that the design asks for; values come in mm, N, N·mm, MPa, kg."""

    units: Units

    def unit(self, kind: str) -> str:
        return KINDS[kind].metric if self.units == "metric" else KINDS[kind].us

    def value(self, value: float, kind: str) -> float:
        return value / factor(kind, self.unit(kind))

    def number(self, value: float, kind: str, significant: int = 4) -> str:
        return figures(self.value(value, kind), significant)

    def quantity(self, value: float, kind: str, significant: int = 4) -> str:
        return f"{self.number(value, kind, significant)} {self.unit(kind)}"

    def check(self, row: Check) -> tuple[str, str, str]:
        """Demand, capacity and unit of a check; a share of a whole has the unit 1."""
        kind = OF_CHECKS.get(row.unit)
        if kind is None:
            return figures(row.demand), figures(row.capacity), row.unit
        return self.number(row.demand, kind), self.number(row.capacity, kind), self.unit(kind)


def shortfall(row: Check) -> str:
    """What a check is about and by how much it falls short, on one line."""
    return f"{row.part}, {row.site}: {row.check} {factor_text(row)}, target {row.target:g}"

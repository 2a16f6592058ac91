"""Bought hardware and preferred sizes, read from their table. Lengths in mm, strengths in MPa."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import lru_cache
from importlib import resources
from typing import Any


@dataclass(frozen=True, slots=True)
class CapScrew:
    """Hexagon socket cap screw, ISO 4762, property class 8.8."""

    thread: str
    diameter: float
    clearance_hole: float
    tapping_hole: float
    head_diameter: float
    head_height: float
    counterbore_diameter: float
    stress_area: float
    yield_strength: float


@dataclass(frozen=True, slots=True)
class RetainingRing:
    """External retaining ring, DIN 471."""

    shaft: float
    groove_diameter: float
    groove_width: float


@lru_cache
def _table() -> dict[str, Any]:
    with (resources.files("parts.data") / "hardware.toml").open("rb") as file:
        return tomllib.load(file)


@lru_cache
def cap_screws() -> tuple[CapScrew, ...]:
    """All listed cap screws, by size."""
    steps = _table()["property_class"]["yield"]
    rows = []
    for row in _table()["cap_screw"]:
        size = float(row["diameter"])
        yield_strength = next(float(strength) for largest, strength in steps if size <= largest)
        rows.append(
            CapScrew(
                str(row["size"]),
                size,
                float(row["clearance_hole"]),
                float(row["tapping_hole"]),
                float(row["head_diameter"]),
                float(row["head_height"]),
                float(row["counterbore_diameter"]),
                float(row["tensile_stress_area"]),
                yield_strength,
            )
        )
    return tuple(sorted(rows, key=lambda s: s.diameter))


def cap_screw(thread: str) -> CapScrew:
    """The screw of a thread such as "M8"; KeyError names those listed."""
    for screw in cap_screws():
        if screw.thread == thread:
            return screw
    raise KeyError(f"no cap screw {thread}; listed: {', '.join(s.thread for s in cap_screws())}")


def cap_screw_for_hole(hole: float) -> CapScrew:
    """The largest screw that passes a hole of ``hole`` mm, the smallest listed if none does."""
    fits = [s for s in cap_screws() if s.clearance_hole <= hole + 1e-9]
    return fits[-1] if fits else cap_screws()[0]


@lru_cache
def dowel_diameters() -> tuple[float, ...]:
    return tuple(sorted(float(row["diameter"]) for row in _table()["dowel"]))


def from_memory(kind: str, size: str) -> str:
    """What of a bought part's row is from memory, with the row's source; empty where nothing is.

    ``kind``: "cap_screw", "dowel" or "retaining_ring"; ``size``: thread, or diameter in mm as text.
    """
    if kind == "cap_screw":
        row = next((r for r in _table()[kind] if r["size"] == size), None)
    else:
        key, wanted = ("diameter" if kind == "dowel" else "shaft"), float(size)
        rows = sorted(_table()[kind], key=lambda r: float(r[key]))
        row = next((r for r in reversed(rows) if float(r[key]) <= wanted + 1e-9), rows[0])
    if row is None:
        return ""
    if not row["confirmed"]:
        return str(row["source"])
    names = ", ".join(str(name).replace("_", " ") for name in row.get("from_memory", ()))
    return f"{names} from memory; the rest {row['source']}" if names else ""


def property_class_source() -> str:
    """Where the screws' strength comes from, for the bill."""
    row = _table()["property_class"]
    return f"{row['source']}, class {row['name']}" + (
        "" if row["confirmed"] else " (from memory, confirm with the maker's certificate)"
    )


def retaining_ring(shaft: float) -> RetainingRing:
    """The ring for a shaft of ``shaft`` mm: the largest listed that is not larger than it."""
    rows = sorted(_table()["retaining_ring"], key=lambda r: float(r["shaft"]))
    row = next((r for r in reversed(rows) if float(r["shaft"]) <= shaft + 1e-9), rows[0])
    scale = shaft / float(row["shaft"])
    return RetainingRing(shaft, float(row["groove_diameter"]) * scale, float(row["groove_width"]))


def preferred(kind: str, units: str) -> tuple[float, ...]:
    """Sizes that can be bought, rising: ``kind`` "pin_diameters" or "plate_thicknesses"; in mm in both unit systems."""
    table = _table()["preferred"]
    return tuple(sorted(float(x) for x in table[kind + ("_us" if units == "us" else "")]))

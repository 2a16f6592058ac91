"""What the modules of single parts share: copies on the two sides, mirroring, turned profiles, stock sizes."""

from __future__ import annotations

import tomllib
from collections.abc import Iterable
from dataclasses import dataclass, replace
from fractions import Fraction
from functools import lru_cache
from importlib.resources import files
from typing import Any, NamedTuple

from parts.design import Design
from parts.hardware import preferred
from parts.outline import Line, Mark, Placement, Plate, Point, Step, Turned
from parts.shape import mirrored
from parts.stack import Stack

SMALL_PIN = 12.0  # mm of diameter under which a chamfer is half a millimetre


def turn_of(design: Design) -> int:
    """+1 for a machine that turns counter-clockwise, −1 for one that turns clockwise."""
    return 1 if design.mechanism.rotation == "ccw" else -1


def flipped(point: Point, turn: int) -> Point:
    """A point of the counter-clockwise design in the machine that turns by ``turn``."""
    return (point[0], turn * point[1])


def turned_round(plate: Plate, turn: int) -> Plate:
    """The plate of a counter-clockwise design as a machine that turns by ``turn`` has it.

    A clockwise machine is the mirror image about the x axis. Text is not mirrored: it is put on afterwards.
    """
    if turn > 0:
        return plate
    return replace(
        plate,
        outline=mirrored(plate.outline),
        holes=tuple(replace(h, center=flipped(h.center, turn)) for h in plate.holes),
        counterbores=tuple(replace(c, center=flipped(c.center, turn)) for c in plate.counterbores),
        marks=tuple(_flipped_mark(m, turn) for m in plate.marks),
    )


def _flipped_mark(mark: Mark, turn: int) -> Mark:
    return replace(mark, strokes=tuple((flipped(a, turn), flipped(b, turn)) for a, b in mark.strokes))


def polyline(points: Iterable[tuple[Point, str]]) -> tuple[Line, ...]:
    """A closed outline of lines: each corner with the name of the line that starts there."""
    corners = tuple(points)
    return tuple(Line(at, corners[(i + 1) % len(corners)][0], name) for i, (at, name) in enumerate(corners))


@dataclass(frozen=True, slots=True)
class Copies:
    """The copies of one part in one hand: which way its body lies, and z of its origin for each."""

    hand: str
    away: int
    z: tuple[float, ...]

    def placements(self, mover: str, at: Point, angle: float = 0.0) -> tuple[Placement, ...]:
        return tuple(Placement(mover, (at[0], at[1], z), angle) for z in self.z)


def copies(stack: Stack, handed: bool, depth: float, thickness: float) -> list[Copies]:
    """One copy a side of a body between ``depth`` and ``depth + thickness`` mm from the middle of the chain's plane.

    A part that is its own mirror image (``handed`` false) is made once and shifted; else each side has its own hand.
    """
    if handed and len(stack.sides) > 1:
        return [Copies(side.name, side.away, (side.z(depth),)) for side in stack.sides]
    away = stack.sides[0].away
    z = tuple(side.z(depth if side.away == away else depth + thickness) for side in stack.sides)
    return [Copies("", away, z)]


class Length(NamedTuple):
    """A stretch of a turned part: chamfers at its end near the chain and at the far one."""

    name: str
    length: float
    diameter: float
    chamfer_near: float = 0.0
    chamfer_far: float = 0.0


def turned(lengths: Iterable[Length], away: int, start: float = 0.0, bore: float = 0.0) -> Turned:
    """A turned part from its stretches in order away from the chain, the first beginning at depth ``start``."""
    steps = []
    depth = start
    for piece in lengths:
        end = depth + piece.length
        low, high = sorted((away * depth + 0.0, away * end + 0.0))  # no minus zero
        ends = (piece.chamfer_near, piece.chamfer_far) if away > 0 else (piece.chamfer_far, piece.chamfer_near)
        steps.append(Step(piece.name, low, high, piece.diameter, *ends))
        depth = end
    return Turned(tuple(steps if away > 0 else reversed(steps)), bore)


def chamfer(diameter: float, length: float) -> float:
    """Chamfer of a pin's end in mm: 1, or 0.5 on a thin pin, and no more than a quarter of what is there."""
    return min(0.5 if diameter < SMALL_PIN else 1.0, length / 4, diameter / 8)


@lru_cache(maxsize=1)
def _stock() -> dict[str, Any]:
    return tomllib.loads((files("parts") / "data" / "stock.toml").read_text(encoding="utf-8"))


def _next(size: float, kept: list[float]) -> float:
    return next((s for s in kept if s >= size - 1e-9), size)


def plate_stock(thickness: float, units: str) -> str:
    """The plate to buy for a finished thickness in mm, in the sizes of the unit system."""
    if units == "us":
        return f"plate {_inches(_next(thickness, list(preferred('plate_thicknesses', units))))}"
    return f"plate {_next(thickness, _stock()['plate']):g} mm"


def bar_stock(diameter: float, units: str) -> str:
    """The round bar to buy for a finished largest diameter in mm, in the sizes of the unit system."""
    table = _stock()
    rough = diameter + table["turning_allowance"]
    if units == "us":
        return f"round bar {_inches(_next(rough, list(preferred('pin_diameters', units))))}"
    return f"round bar {_next(rough, table['round_bar']):g} mm"


def _inches(size: float) -> str:
    """A bought size (mm) in inches: as a fraction to sixteenths where it is one."""
    sixteenths = size / 25.4 * 16.0
    if abs(sixteenths - round(sixteenths)) > 1e-6:
        return f"{size / 25.4:.4g} in"
    whole, rest = divmod(round(sixteenths), 16)
    if not rest:
        return f"{whole} in"
    fraction = Fraction(rest, 16)
    return f"{whole} {fraction} in" if whole else f"{fraction} in"


def stock_source() -> str:
    """Where the stock sizes are from, empty where they have been looked up."""
    table = _stock()
    return "" if table["confirmed"] else str(table["source"])


def spacer_source() -> str:
    """Where the spacers' material is from, empty where it has been looked up."""
    row = _stock()["spacer"]
    return "" if row["confirmed"] else str(row["source"])


def spacer_material() -> tuple[str, float]:
    """Name and density (kg/m³) of what spacer rings are made of."""
    row = _stock()["spacer"]
    return str(row["material"]), float(row["density"])

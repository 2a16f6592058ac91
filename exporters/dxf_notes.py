"""What a cut file says beside the part: callouts with leaders, and a block of lines below. Lengths in mm.

Positions are laid out here as plain records, so that they can be checked for overlaps without a drawing library.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from math import dist, hypot
from textwrap import wrap
from typing import Literal

import numpy as np

from parts.cutting import hole_work
from parts.outline import Counterbore, Hole, Part, Plate, Point
from parts.segments import TOUCH, Floats

Units = Literal["metric", "us"]
LETTER_WIDTH = 1.0  # of the text height: more than the usual stroke fonts take
_INCH = 25.4
_CALLOUT_LETTERS = 52
_BLOCK_LETTERS = 100
FALLS_SHORT = "FALLS SHORT"
# A column of text left of the part ends at its leaders, one on the right begins there.
_ALIGN: dict[str, Literal["left", "right"]] = {"left": "right", "right": "left"}


@dataclass(frozen=True, slots=True)
class Text:
    text: str
    at: Point  # lower left corner, or lower right one
    height: float
    align: Literal["left", "right"] = "left"
    warning: bool = False

    @property
    def box(self) -> tuple[float, float, float, float]:
        """Least x, least y, largest x, largest y that the line may take."""
        (x, y), wide = self.at, LETTER_WIDTH * self.height * len(self.text)
        left = x if self.align == "left" else x - wide
        return (left, y - 0.3 * self.height, left + wide, y + 1.1 * self.height)


@dataclass(frozen=True, slots=True)
class Notes:
    texts: tuple[Text, ...]
    leaders: tuple[tuple[Point, ...], ...]
    hidden_circles: tuple[tuple[Point, float], ...]  # centre, diameter
    hidden_lines: tuple[tuple[Point, Point], ...]


@dataclass(frozen=True, slots=True)
class _Callout:
    lines: tuple[str, ...]
    side: Literal["left", "right"]
    center: Point  # of the hole that the leader goes to
    diameter: float


def size(value: float, units: Units) -> str:
    """A length as the file's reader sees it: mm to 0.001, inches to 0.0001, no trailing zeros."""
    text = f"{value:.3f}" if units == "metric" else f"{value / _INCH:.4f}"
    return text.rstrip("0").rstrip(".")


def _signed(value: float, units: Units) -> str:
    text = size(abs(value), units)
    return "0" if text == "0" else ("+" if value > 0 else "-") + text


def finish_text(hole: Hole, verb: str, units: Units) -> str:
    """How a fitted hole is finished: "ream 30 H7 (+0.021/0)"."""
    from parts.fits import limits

    assert hole.fit is not None
    lower, upper = limits(hole.fit, hole.diameter)
    allowed = f"{_signed(upper, units)}/{_signed(lower, units)}"
    if units == "metric":
        return f"{verb} {size(hole.diameter, units)} {hole.fit} ({allowed})"
    return f"{verb} {size(hole.diameter, units)} ({size(hole.diameter, 'metric')} mm {hole.fit}, {allowed})"


def hole_text(hole: Hole, thickness: float, units: Units) -> str:
    """What is done with a hole, in the order in which it is done last to first."""
    work = hole_work(hole, thickness)
    first = size(work.first_diameter, units)
    remark = re.sub(r"^(ream|bore|drill|cut)\b[,;:]?\s*", "", hole.note)  # said here, by size and thickness
    if work.finish:
        made = "cut" if work.way == "pilot" else "drill"
        text = f"{finish_text(hole, work.finish, units)}, {made} {first} first"
    else:
        text = f"{work.way} {first}"
    return f"{text}; {remark}" if remark else text


def _stem(name: str) -> str:
    return re.sub(r"_\d+$", "", name)


def _sink_text(bore: Counterbore, units: Units) -> str:
    face = "on this face" if bore.face == "chain" else "ON THE FAR FACE"
    return f"counterbore {size(bore.diameter, units)} x {size(bore.depth, units)} deep {face}"


def _callouts(plate: Plate, units: Units, flip: float) -> list[_Callout]:
    """One callout for each set of like holes, counterbores round them included; one for each other counterbore."""
    groups: dict[str, list[tuple[str, Point, float]]] = {}
    alone = list(plate.counterbores)
    for hole in plate.holes:
        text, reach = hole_text(hole, plate.thickness, units), hole.diameter
        for bore in [b for b in alone if dist(b.center, hole.center) < TOUCH]:
            alone.remove(bore)
            text, reach = f"{text}; {_stem(bore.name)}: {_sink_text(bore, units)}", max(reach, bore.diameter)
        groups.setdefault(f"{_stem(hole.name)}|{text}", []).append((hole.name, hole.center, reach))
    for bore in alone:
        key = f"{_stem(bore.name)}|{_sink_text(bore, units)}"
        groups.setdefault(key, []).append((bore.name, bore.center, bore.diameter))
    rounds = [(c, d) for members in groups.values() for _, c, d in members]
    found: list[_Callout] = []
    for key, members in groups.items():
        stem, text = key.split("|", 1)
        label = members[0][0] if len(members) == 1 else f"{stem} ({len(members)}x)"
        lines = wrap(f"{label}: {text}", _CALLOUT_LETTERS, subsequent_indent="  ")
        right = max(members, key=lambda m: (round(m[1][0], 6), flip * m[1][1]))
        left = min(members, key=lambda m: (round(m[1][0], 6), -flip * m[1][1]))
        goes_left = _in_the_way(left, rounds, -1.0) < _in_the_way(right, rounds, 1.0)
        _, (x, y), diameter = left if goes_left else right
        found.append(_Callout(tuple(lines), "left" if goes_left else "right", (x, flip * y), diameter))
    return found


def _in_the_way(member: tuple[str, Point, float], rounds: list[tuple[Point, float]], sign: float) -> int:
    """How many other holes a level line from a hole crosses on its way out to the left (−1) or right (+1)."""
    _, (x, y), _ = member
    return sum(sign * (cx - x) > TOUCH and abs(cy - y) < d / 2 for (cx, cy), d in rounds)


def _slot_lines(plate: Plate, units: Units) -> list[str]:
    lines = []
    for slot in plate.slots:
        x, low, high = (size(v, units) for v in (slot.x_from, slot.z_from, slot.z_to))
        if slot.z_from > 0:
            where = f"two slots, {low} to {high} from mid thickness on either side"
        else:
            where = f"one slot, {size(2 * slot.z_to, units)} wide about mid thickness"
        lines.append(f"{slot.name}: mill {where}, right across, from x = {x} (dashed line) to the end")
    return lines


def block_lines(
    part: Part,
    plate: Plate,
    *,
    units: Units,
    number: str,
    revision: str,
    notes: Sequence[str],
    falls_short: Sequence[str],
) -> list[str]:
    """The lines below the part: what it is, of what, how many, how the file is to be read, what falls short."""
    hand = f", {part.hand} hand" if part.hand and part.hand not in part.title.split() else ""
    material = ", ".join(text for text in (part.material, part.stock) if text)
    unit = "millimetres" if units == "metric" else "inches"
    mirrored = " (mirrored about x against the solid)" if part.away > 0 else ""
    lines = [
        f"{number}  {part.title}{hand}  ({part.name})  revision {revision}",
        *(f"{FALLS_SHORT}: {text}" for text in falls_short),
        f"Material {material}; thickness {size(plate.thickness, units)}; quantity {part.quantity}",
        f"Units: {unit}, true size. Seen on the face towards the chain{mirrored}.",
        "Layers: CUT cut to size; PILOT cut under size, then ream or bore; DRILL centre marks, drill;",
        "MARK etch on this face; NOTE not to be cut.",
        *_slot_lines(plate, units),
        *(f"{note}." if not note.endswith(".") else note for note in (*part.notes, *notes)),
    ]
    return [piece for line in lines for piece in wrap(line, _BLOCK_LETTERS, subsequent_indent="  ")]


def lay_out(part: Part, plate: Plate, corners: Floats, lines: Sequence[str], units: Units) -> Notes:
    """Callouts in columns right and left of the part, the block of lines below all.

    Parameters
    ----------
    corners : (n, 2), the drawn outline as a polygon, mm
    lines : the block, one string a line
    """
    (left, low), (right, high) = corners.min(axis=0), corners.max(axis=0)
    flip = -1.0 if part.away > 0 else 1.0
    height = float(np.clip(0.02 * max(right - left, high - low), 2.0, 5.0))
    pitch = 1.7 * height
    texts: list[Text] = []
    leaders: list[tuple[Point, ...]] = []
    callouts = sorted(_callouts(plate, units, flip), key=lambda c: (-c.center[1], -c.center[0], c.lines))
    for side, sign, edge in (("left", -1.0, left), ("right", 1.0, right)):
        column = edge + sign * 6 * height
        here = [c for c in callouts if c.side == side]
        top = (high + low) / 2 + sum(pitch * (len(c.lines) + 0.6) for c in here) / 2
        for callout in here:
            base = top - 1.1 * height
            for i, line in enumerate(callout.lines):
                texts.append(Text(line, (column, base - i * pitch), height, _ALIGN[side]))
            middle = base + 0.4 * height
            elbow = (column - sign * 3 * height, middle)
            x, y = callout.center
            rim = callout.diameter / 2 / hypot(elbow[0] - x, elbow[1] - y)
            start = (x + rim * (elbow[0] - x), y + rim * (elbow[1] - y))
            leaders.append((start, elbow, (column - sign * 0.8 * height, middle)))
            top -= pitch * (len(callout.lines) + 0.6)
    base = min([low, *(t.box[1] for t in texts)]) - 3.5 * height
    for i, line in enumerate(lines):
        texts.append(Text(line, (left, base - i * pitch), height, warning=line.startswith(FALLS_SHORT)))
    drilled = [h for h in plate.holes if hole_work(h, plate.thickness).way == "drill"]
    rounds: list[Hole | Counterbore] = [*plate.counterbores, *drilled]
    hidden = tuple(((f.center[0], flip * f.center[1]), f.diameter) for f in rounds)
    slots = tuple(((s.x_from, a), (s.x_from, b)) for s in plate.slots for a, b in [_span(corners, s.x_from)] if b > a)
    return Notes(tuple(texts), tuple(leaders), hidden, tuple(dict.fromkeys(slots)))


def _span(corners: Floats, x: float) -> Point:
    """Least and largest y at which a polygon is crossed by the line across x."""
    after = np.roll(corners, -1, axis=0)
    cross = (corners[:, 0] - x) * (after[:, 0] - x) <= 0
    rise = after[:, 0] - corners[:, 0]
    cross &= np.abs(rise) > 1e-12
    if not cross.any():
        return (0.0, 0.0)
    y = corners[cross, 1] + (x - corners[cross, 0]) / rise[cross] * (after[cross, 1] - corners[cross, 1])
    return (float(y.min()), float(y.max()))

"""Single-stroke letters of lines and arcs for etched text. Lengths in mm, angles in rad."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import lru_cache
from importlib.resources import files
from itertools import pairwise
from math import cos, radians, sin
from typing import Any

from parts.outline import Arc, Line, Mark, Point, Segment


@dataclass(frozen=True, slots=True)
class Letter:
    width: float
    strokes: tuple[Segment, ...]


@dataclass(frozen=True, slots=True)
class Alphabet:
    """Letters by character, drawn ``height`` high with ``gap`` between them."""

    height: float
    gap: float
    letters: dict[str, Letter]


@lru_cache(maxsize=1)
def alphabet() -> Alphabet:
    table = tomllib.loads((files("parts") / "data" / "letters.toml").read_text(encoding="utf-8"))
    letters = {character: _letter(character, entry) for character, entry in table["letters"].items()}
    return Alphabet(float(table["height"]), float(table["gap"]), letters)


def _letter(character: str, entry: dict[str, Any]) -> Letter:
    strokes: list[Segment] = []
    for chain in entry.get("lines", ()):
        points = [(float(x), float(y)) for x, y in zip(chain[::2], chain[1::2], strict=True)]
        strokes += [Line(a, b, character) for a, b in pairwise(points)]
    for x, y, r, first, last in entry.get("arcs", ()):
        ends = [(x + r * cos(radians(a)), y + r * sin(radians(a))) for a in (first, last)]
        if last - first == 360:
            ends[1] = ends[0]
        strokes.append(Arc(ends[0], ends[1], (float(x), float(y)), True, character))
    return Letter(float(entry["width"]), tuple(strokes))


def written(text: str) -> str:
    """What of a text gets etched: capitals, and a question mark for a character that has no letter."""
    return "".join(c if c in alphabet().letters else "?" for c in text.upper())


def text_width(text: str, height: float) -> float:
    """Width in mm of a line of text whose capitals are ``height`` mm high."""
    font = alphabet()
    letters = [font.letters[c] for c in written(text)]
    return (sum(f.width for f in letters) + font.gap * max(0, len(letters) - 1)) * height / font.height


def text_strokes(text: str, at: Point, height: float, direction: float, name: str) -> tuple[Segment, ...]:
    """The strokes of one line of text from its lower left corner ``at``, running along ``direction``."""
    font = alphabet()
    scale = height / font.height
    c, s = scale * cos(direction), scale * sin(direction)
    found: list[Segment] = []
    along = 0.0
    for character in written(text):
        letter = font.letters[character]

        def put(point: Point, shift: float = along) -> Point:
            x, y = point[0] + shift, point[1]
            return (at[0] + c * x - s * y, at[1] + s * x + c * y)

        for stroke in letter.strokes:
            start, end = put(stroke.start), put(stroke.end)
            if isinstance(stroke, Line):
                found.append(Line(start, end, name))
            else:
                found.append(Arc(start, end, put(stroke.center), True, name))
        along += letter.width + font.gap
    return tuple(found)


def mark_strokes(mark: Mark, mirrored: bool = False) -> tuple[Segment, ...]:
    """The strokes of a mark; ``mirrored`` about the x axis, its text stands where it stood but stays readable."""
    sign = -1.0 if mirrored else 1.0
    strokes: list[Segment] = [Line((a[0], sign * a[1]), (b[0], sign * b[1]), mark.name) for a, b in mark.strokes]
    if mark.text:
        (x, y), turn = mark.at, mark.direction
        if mirrored:  # what was above the base line is below it now: start a line's height lower
            x, y, turn = x - mark.height * sin(turn), -y - mark.height * cos(turn), -turn
        strokes += text_strokes(mark.text, (x, y), mark.height, turn, mark.name)
    return tuple(strokes)

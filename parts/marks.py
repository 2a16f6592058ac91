"""Etched marks: what is written on a part, and a free place for it."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from math import pi

import numpy as np

from parts.design import Design, Floats
from parts.lettering import text_width
from parts.outline import Counterbore, Hole, Mark, Part, Plate

CLEAR = 2.0  # mm that text stays away from edges and holes
SMALLEST = 3.0  # mm of text height under which an etched line is not read
SHRINK = 0.9

Circle = tuple[float, float, float]  # x, y, radius


def part_texts(design: Design, name: str) -> tuple[str, str]:
    """What is etched on a part, in full and for want of room: number, name and revision, or number and revision."""
    number, revision = design.identity.number, design.identity.revision
    return f"{number}-{name.replace('_', '-').upper()} {revision}", f"{number} {revision}"


def numbered(part: Part, design: Design, place: Callable[[str, Sequence[Circle]], Mark | None]) -> Part:
    """A plate part with its number etched where ``place`` finds room for it, else with a note to tag it."""
    assert isinstance(part.body, Plate)
    texts = part_texts(design, part.name)
    around = obstacles(part.body)
    mark = next((found for text in texts if (found := place(text, around)) is not None), None)
    if mark is None:
        return replace(part, notes=(*part.notes, f"no room to etch the number on its face: tag it {texts[0]}"))
    return replace(part, body=replace(part.body, marks=(*part.body.marks, mark)))


def obstacles(plate: Plate) -> list[Circle]:
    """What text must not run into: holes, counterbores and other marks."""
    features: list[Hole | Counterbore] = [*plate.holes, *plate.counterbores]
    rounds = [(*f.center, f.diameter / 2) for f in features]
    for mark in plate.marks:
        for a, b in mark.strokes:
            middle = ((a[0] + b[0]) / 2, (a[1] + b[1]) / 2)
            rounds.append((*middle, float(np.hypot(b[0] - a[0], b[1] - a[1])) / 2))
    return rounds


def text_on_disc(text: str, radius: float, around: Sequence[Circle]) -> Mark | None:
    """The largest text that fits on a round plate, along the rim or upright; None where there is no room."""
    angles, rings = np.meshgrid(np.radians(np.arange(0.0, 360.0, 7.5)), np.linspace(0.15, 0.95, 17), indexing="ij")
    x, y = (radius * rings * np.cos(angles)).ravel(), (radius * rings * np.sin(angles)).ravel()
    upright = np.zeros_like(x)
    along = (angles.ravel() + pi / 2) % pi  # tangential, never upside down
    along = np.where(along > pi / 2 + 1e-9, along - pi, along)
    rim: Circle = (0.0, 0.0, radius)
    places = (np.concatenate([x, x]), np.concatenate([y, y]), np.concatenate([upright, along]))
    return _text(text, 2 * radius / 25, places, around, rim=rim)


def text_on_strip(text: str, reach: float, half: float, around: Sequence[Circle]) -> Mark | None:
    """The largest text that fits along a strip 0 ≤ x ≤ ``reach``, |y| ≤ ``half``; None where there is no room."""
    x, y = np.meshgrid(np.linspace(0.0, reach, 61), np.linspace(-half, half, 13)[1:-1], indexing="ij")
    places = (x.ravel(), y.ravel(), np.zeros(x.size))
    return _text(text, half / 2, places, around, strip=(reach, half))


def _text(
    text: str,
    tallest: float,
    places: tuple[Floats, Floats, Floats],
    around: Sequence[Circle],
    rim: Circle | None = None,
    strip: tuple[float, float] | None = None,
) -> Mark | None:
    x, y, direction = places
    c, s = np.cos(direction), np.sin(direction)
    height = max(tallest, SMALLEST)
    while height >= SMALLEST:
        half_w, half_h = text_width(text, height) / 2, height / 2
        room = np.full(x.shape, np.inf)
        for ox, oy, r in around:
            u, v = (ox - x) * c + (oy - y) * s, -(ox - x) * s + (oy - y) * c
            away = np.hypot(np.maximum(np.abs(u) - half_w, 0.0), np.maximum(np.abs(v) - half_h, 0.0))
            room = np.minimum(room, away - r)
        for sign_w, sign_h in ((1, 1), (1, -1), (-1, 1), (-1, -1)):
            cx = x + sign_w * half_w * c - sign_h * half_h * s
            cy = y + sign_w * half_w * s + sign_h * half_h * c
            if rim is not None:
                room = np.minimum(room, rim[2] - np.hypot(cx, cy))
            if strip is not None:
                room = np.minimum(room, np.minimum(np.minimum(cx, strip[0] - cx), strip[1] - np.abs(cy)))
        best = int(np.argmax(np.round(room, 6)))
        if room[best] >= CLEAR:
            left = float(x[best] - half_w * c[best] + half_h * s[best])
            low = float(y[best] - half_w * s[best] - half_h * c[best])
            return Mark("number", text=text, at=(left, low), height=height, direction=float(direction[best]))
        smaller = height * SHRINK
        height = SMALLEST if smaller < SMALLEST < height else smaller
    return None

"""SVG text for pictures inside a page: elements, arrows, labels that keep clear of each other, the frame around them.

Everything is in picture units with y down; colours and line widths come from the page's style sheet by class.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, replace
from html import escape
from typing import Any

from parts.outline import Arc, Line, Point, Segment
from parts.segments import radius, sweep

Put = Callable[[Point], Point]  # from a part's frame or the machine's into the picture

LETTER = 7.3  # picture units that a letter of a label takes at most
LEADING = 15.0
HEAD = 9.0  # of an arrow


@dataclass(frozen=True, slots=True)
class Label:
    """Lines of text at (x, y), the first line's middle; ``anchor`` as SVG has it."""

    x: float
    y: float
    lines: tuple[str, ...]
    anchor: str = "start"

    @property
    def box(self) -> tuple[float, float, float, float]:
        """Left, top, right, bottom, as far as the letters' width can be told."""
        width = LETTER * max(map(len, self.lines))
        left = self.x - {"start": 0.0, "middle": width / 2, "end": width}[self.anchor]
        return left, self.y - 9.0, left + width, self.y + LEADING * (len(self.lines) - 1) + 7.0


def num(value: float) -> str:
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def tag(name: str, content: str = "", **attributes: str | float) -> str:
    """An element. ``content`` is markup; attribute values are escaped, ``_`` in their names stands for ``-``."""
    pairs = "".join(
        f' {key.rstrip("_").replace("_", "-")}="{escape(v) if isinstance(v, str) else num(v)}"'
        for key, v in attributes.items()
    )
    return f"<{name}{pairs}>{content}</{name}>" if content else f"<{name}{pairs}/>"


def line(a: Point, b: Point, kind: str) -> str:
    return tag("line", x1=a[0], y1=a[1], x2=b[0], y2=b[1], class_=kind)


def circle(center: Point, r: float, kind: str) -> str:
    return tag("circle", cx=center[0], cy=center[1], r=r, class_=kind)


def polyline(points: Iterable[Point], kind: str, closed: bool = False) -> str:
    text = " ".join(f"{num(x)},{num(y)}" for x, y in points)
    return tag("polygon" if closed else "polyline", points=text, class_=kind)


def outline(segments: Sequence[Segment], put: Put, scale: float, kind: str) -> str:
    """A closed outline with its arcs as arcs. ``put`` may turn and shift; it negates y and scales by ``scale``."""
    if len(segments) == 1 and isinstance(segments[0], Arc):
        return circle(put(segments[0].center), radius(segments[0]) * scale, kind)
    x, y = put(segments[0].start)
    steps = [f"M{num(x)} {num(y)}"]
    for segment in segments:
        x, y = put(segment.end)
        if isinstance(segment, Line):
            steps.append(f"L{num(x)} {num(y)}")
        else:
            r = num(radius(segment) * scale)
            large = int(abs(sweep(segment)) > math.pi)
            steps.append(f"A{r} {r} 0 {large} {int(not segment.ccw)} {num(x)} {num(y)}")
    return tag("path", d=" ".join([*steps, "Z"]), class_=kind)


def arrow(tail: Point, tip: Point, kind: str = "load", acts_at: Point | None = None) -> str:
    """A straight arrow with a dot where it starts, or where it acts."""
    span = math.dist(tail, tip)
    ux, uy = (tip[0] - tail[0]) / span, (tip[1] - tail[1]) / span
    neck = (tip[0] - HEAD * ux, tip[1] - HEAD * uy)
    wings = [(neck[0] - s * 4.2 * uy, neck[1] + s * 4.2 * ux) for s in (1, -1)]
    return (
        line(tail, neck, kind)
        + polyline([tip, *wings], f"{kind}-head", closed=True)
        + circle(acts_at or tail, 3.2, f"{kind}-head")
    )


def turning_arrow(center: Point, r: float, ccw: bool, kind: str = "load") -> str:
    """Three quarters of a turn about a point, as people see it."""
    s = -1.0 if ccw else 1.0

    def at(angle: float) -> Point:
        return (center[0] + r * math.cos(angle), center[1] + s * r * math.sin(angle))

    start, end = at(-0.6 * math.pi), at(0.75 * math.pi)
    arc = f"M{num(start[0])} {num(start[1])} A{num(r)} {num(r)} 0 1 {int(not ccw)} {num(end[0])} {num(end[1])}"
    along = 0.75 * math.pi
    tx, ty = -math.sin(along), s * math.cos(along)
    tip = (end[0] + HEAD * tx, end[1] + HEAD * ty)
    wings = [(end[0] - k * 4.2 * ty, end[1] + k * 4.2 * tx) for k in (1, -1)]
    return tag("path", d=arc, class_=kind) + polyline([tip, *wings], f"{kind}-head", closed=True)


def beside(tail: Point, tip: Point, lines: tuple[str, ...]) -> list[Label]:
    """Places for an arrow's label, the best first: behind its tip, beside the tip, behind its tail, beside the tail."""
    span = math.dist(tail, tip)
    ux, uy = (tip[0] - tail[0]) / span, (tip[1] - tail[1]) / span
    ways = (1.0, 0.0), (0.0, -1.0), (0.0, 1.0)
    found = []
    for at, sign in ((tip, 1.0), (tail, -1.0)):
        for along, across in ways:
            dx, dy = sign * along * ux - across * uy, sign * along * uy + across * ux
            found.append(_towards(at, dx, dy, lines))
    return found


def _towards(at: Point, dx: float, dy: float, lines: tuple[str, ...]) -> Label:
    """A label that lies off a point in a direction."""
    anchor = "middle" if abs(dx) < 0.5 else "start" if dx > 0 else "end"
    high = LEADING * (len(lines) - 1)
    y = at[1] + 13.0 * dy - high * (0.5 if abs(dy) < 0.5 else 1.0 if dy < 0 else 0.0)
    return Label(at[0] + 8.0 * dx, y, lines, anchor)


def around(center: Point, r: float, lines: tuple[str, ...]) -> list[Label]:
    """Places for the label of something round: below, above, to the right, to the left."""
    ways = ((0.0, 1.0), (0.0, -1.0), (1.0, 0.0), (-1.0, 0.0))
    return [_towards((center[0] + r * dx, center[1] + r * dy), dx, dy, lines) for dx, dy in ways]


def along(tail: Point, tip: Point, pieces: int = 8) -> list[Point]:
    """Points on an arrow that labels keep off."""
    return [
        (tail[0] + (tip[0] - tail[0]) * i / pieces, tail[1] + (tip[1] - tail[1]) * i / pieces)
        for i in range(pieces + 1)
    ]


def settled(choices: Iterable[Sequence[Label]], busy: Sequence[Point]) -> list[Label]:
    """One place for each label, that which covers least of the labels before it and of the busy points."""
    done: list[Label] = []
    for places in choices:
        done.append(min(places, key=lambda item: _covered(item, done, busy)))
    return done


def _covered(item: Label, others: Sequence[Label], busy: Sequence[Point]) -> int:
    left, top, right, bottom = item.box
    boxes = (other.box for other in others)
    hits = sum(left < b[2] and b[0] < right and top < b[3] and b[1] < bottom for b in boxes)
    return 10 * hits + sum(left <= x <= right and top <= y <= bottom for x, y in busy)


def spread(labels: Iterable[Label]) -> list[Label]:
    """The same labels, those that would lie on another moved down below it."""
    done: list[Label] = []
    for item in sorted(labels, key=lambda item: (item.y, item.x)):
        moved = item
        for _ in range(20):
            left, top, right, bottom = moved.box
            boxes = [other.box for other in done]
            under = [b[3] for b in boxes if left < b[2] and b[0] < right and top < b[3] and b[1] < bottom]
            if not under:
                break
            moved = replace(moved, y=moved.y + max(under) - top + 1.0)
        done.append(moved)
    return done


def label(item: Label, kind: str = "label") -> str:
    rows = "".join(
        tag("tspan", escape(text), x=item.x, y=item.y + 4.5 + i * LEADING) for i, text in enumerate(item.lines)
    )
    return tag("text", rows, class_=kind, text_anchor=item.anchor)


def picture(
    key: str, title: str, description: str, body: Iterable[str], points: Iterable[Point], labels: Iterable[Label] = ()
) -> str:
    """A whole picture, cropped to the points and labels that it holds; title and description are read out."""
    placed = spread(labels)
    corners = [*points, *((x, y) for item in placed for x, y in (item.box[:2], item.box[2:]))]
    left, top = min(x for x, _ in corners) - 8.0, min(y for _, y in corners) - 8.0
    width, height = max(x for x, _ in corners) + 8.0 - left, max(y for _, y in corners) + 8.0 - top
    head = tag("title", escape(title), id=f"{key}-title") + tag("desc", escape(description), id=f"{key}-desc")
    return tag(
        "svg", head + "".join(body) + "".join(map(label, placed)),
        viewBox=f"{num(left)} {num(top)} {num(width)} {num(height)}", width=width, height=height, role="img",
        aria_labelledby=f"{key}-title {key}-desc",
    )  # fmt: skip


def markup(text: str) -> Any:
    """A picture for a page: markup of our own, with everything in it escaped."""
    from markupsafe import Markup

    return Markup(text)

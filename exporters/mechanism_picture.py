"""The mechanism drawn to scale at a crank angle: disc, link, stop, chain line, sheave; and what it puts into its frame."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from exporters import svg
from exporters.part_pictures import row_text, scale_bar
from exporters.shown import Shown, angle
from exporters.site_places import AT_SHEAVE, place, spring_side, worst_rows
from loads.examine import Examination, directions
from loads.lines import SheaveRun
from loads.linkage import State, state
from parts.assembly import PlacedPart, placed, pose
from parts.far_ends.tie import Rocker, Tie
from parts.making import turn_of
from parts.outline import Part, Point, Turned

ROOM = (400.0, 380.0)
PIN = 10.0  # mm: room about the output's pin
TURN = 30.0  # radius of a moment's arrow
LEAST_CRANK = 26.0  # picture units under which the sheave is left out of the picture
DRAWN = ("crank_disc", "stop", "swing_link", "chain_end", "tie", "crank_pin", "chain_pin")  # from the back to the front


@dataclass(frozen=True, slots=True)
class Scene:
    """The machine in one position, ready to be drawn."""

    body: list[str]
    points: list[Point]
    labels: list[svg.Label]
    scale: float
    whole: bool  # the sheave is in the picture
    chain_to: Point  # picture: where the chain leaves it, or meets the sheave


def scene(e: Examination, theta: float) -> Scene:
    """Everything that moves and the sheave, at a crank angle (rad); y up in the machine is up in the picture."""
    s = state(e.machine, np.array([theta]), e.figures.events.catch)
    d = directions(e.machine, s)
    at = pose(e.design, d.disc[0], d.link[0], d.chain[0])
    near, pin = e.sizes.disc.outer_diameter / 2, (float(at.chain_end.x), float(at.chain_end.y))
    leave, anchor = spring_side(e, theta)
    sheave = e.design.sheave
    center, r_sheave = (leave, PIN) if sheave is None else (sheave.center, sheave.pitch_radius)
    spots = [(-near, -near), (near, near), pin, anchor]
    spots += [(center[0] + a * r_sheave, center[1] + b * r_sheave) for a, b in ((-1, -1), (1, 1))]
    k = _fit(spots)
    whole = k * e.design.mechanism.crank_radius >= LEAST_CRANK
    if not whole:
        near += e.design.mechanism.link_length
        k = _fit([(-near, -near), (near, near)])

    def put(p: Point) -> Point:
        return (k * p[0], -k * p[1])

    turn, phi = turn_of(e.design), float(d.chain[0])
    run = e.machine.far
    if whole and not isinstance(run, SheaveRun):
        meets = leave
    elif whole and isinstance(run, SheaveRun):
        side = float(run.wrap_side) * turn
        meets = (center[0] - side * r_sheave * math.sin(phi), center[1] + side * r_sheave * math.cos(phi))
    else:
        meets = (pin[0] + near * math.cos(phi), pin[1] + near * math.sin(phi))
    points = [put((-e.sizes.disc.outer_diameter / 2,) * 2), put((e.sizes.disc.outer_diameter / 2,) * 2), put(pin)]
    points.append(put(meets))
    body: list[str] = []
    labels = []
    if whole:
        c = put(center)
        body.append(svg.line(put(leave), put(anchor), "chain"))
        points += [put(spots[4]), put(spots[5]), put(anchor)]
        labels.append(_off(put(leave), put(anchor), "spring"))
        if isinstance(run, SheaveRun):
            body += [svg.circle(c, k * r_sheave, "body"), svg.circle(c, 2.5, "dot")]
            body.append(_wrap(run, turn, s, put(meets), put(leave), k * r_sheave))
            labels.append(svg.Label(c[0], c[1] + 14.0, ("sheave",), "middle"))
        else:
            one, other = (put(p) for p in _guide(e, leave, near))
            body += [svg.line(one, other, "centre"), svg.circle(c, 2.5, "dot")]
            points += [one, other]
            labels.append(svg.Label(c[0], c[1] + 14.0, ("output",), "middle"))
    else:
        far = Shown(e.design.identity.units).quantity(math.hypot(*center), "length")
        what = "sheave" if sheave is not None else "output"
        labels.append(_off(put(pin), put(meets), f"{what} {far} away"))
    first = {part.key: part for part in reversed(e.parts)}
    copies: dict[str, PlacedPart] = {}
    for copy in placed(first.values(), at):
        copies.setdefault(copy.part.key, copy)
    body += [_drawn(copies[key].part, copies[key].at, k) for key in DRAWN if key in copies]
    if sheave is not None:
        body.append(svg.line(put(pin), put(meets), "chain"))
    crank = (float(at.link.x), float(at.link.y))
    body += [svg.line(put((0.0, 0.0)), put(crank), "centre"), svg.line(put(crank), put(pin), "centre")]
    # letters stand beside the link, whichever way it points
    aside = k * e.sizes.link.width / 2 + 9.0
    along = float(at.link.rotation)
    off = (-aside * math.sin(along), -aside * math.cos(along))
    off = off if off[1] < -0.5 * aside or off[0] < 0.0 else (-off[0], -off[1])
    for name, p in (("O", (0.0, 0.0)), ("A", crank), ("B", pin)):
        x, y = put(p)
        body.append(svg.circle((x, y), 2.5, "dot"))
        labels.append(svg.Label(x + off[0], y + off[1], (name,), "middle"))
    return Scene(body, points, labels, k, whole, put(meets))


def _lowest(points: list[Point], labels: list[svg.Label]) -> float:
    return max([y for _, y in points] + [item.box[3] for item in labels])


def _fit(spots: list[Point]) -> float:
    width, height = (max(p[i] for p in spots) - min(p[i] for p in spots) for i in (0, 1))
    return min(ROOM[0] / width, ROOM[1] / height)


def _off(a: Point, b: Point, text: str) -> svg.Label:
    """A label at the end of a line that leaves the picture."""
    return svg.beside(a, b, (text,))[0]


def _guide(e: Examination, pin: Point, span: float) -> tuple[Point, Point]:
    """What leads the output's pin: a stretch of its slide, or its rocker arm; machine frame."""
    tie = e.design.far_end
    assert isinstance(tie, Tie)
    if isinstance(tie.output, Rocker):
        return tie.output.pivot, pin
    c, s = span * math.cos(tie.output.direction), span * math.sin(tie.output.direction)
    return (pin[0] - c, pin[1] - s), (pin[0] + c, pin[1] + s)


def _wrap(run: SheaveRun, turn: int, s: State, a: Point, b: Point, r: float) -> str:
    """The chain on the sheave: from the tangent point on the disc's side to that on the spring's."""
    ccw = float(run.wrap_side) * turn < 0  # a chain on the left turns clockwise round the sheave
    large = int(float(s.wrap[0]) > math.pi)
    n = svg.num
    return svg.tag(
        "path", d=f"M{n(a[0])} {n(a[1])} A{n(r)} {n(r)} 0 {large} {int(not ccw)} {n(b[0])} {n(b[1])}", class_="chain"
    )


def _drawn(part: Part, at: tuple[float, float, float, float], k: float) -> str:
    x, y, _, rotation = at
    c, s = math.cos(rotation), math.sin(rotation)

    def put(p: Point) -> Point:
        return (k * (x + c * p[0] - s * p[1]), -k * (y + s * p[0] + c * p[1]))

    if isinstance(part.body, Turned):
        return svg.circle(put((0.0, 0.0)), k * max(step.diameter for step in part.body.steps) / 2, "pin")
    kind = {"crank_disc": "disc", "stop": "pin"}.get(part.key, "body")
    holes: list[str] = []
    if part.key == "crank_disc":
        holes = [svg.circle(put(h.center), k * h.diameter / 2, "edge") for h in part.body.holes if h.name == "bore"]
    return svg.outline(part.body.outline, put, k, kind) + "".join(holes)


def mechanism_picture(e: Examination, key: str, name: str, theta: float) -> str:
    """The machine at one crank angle, without loads."""
    found = scene(e, theta)
    points, shown = list(found.points), Shown(e.design.identity.units)
    corner = (max(x for x, _ in points), _lowest(points, found.labels) + 26.0)
    body = [*found.body, *scale_bar(found.scale, shown, corner, points)]
    text = f"Seen from the front, crank angle {angle(theta)}°. O disc axis, A crank pin, B chain pin; {_way(e)}."
    return svg.picture(key, f"The mechanism at the {name}", text, body, points, found.labels)


def _way(e: Examination) -> str:
    if e.design.sheave is None:
        return "the tie leads from B to the output, which the spring pulls"
    return f"the {e.design.far_end.noun} runs from B to the sheave and on to the spring"


def frame_picture(e: Examination) -> str:
    """The machine at the hold with the largest load that it puts into its frame at each place."""
    found = scene(e, float(e.figures.events.hold))
    points, body = list(found.points), list(found.body)
    fixed = [item for item in found.labels if len(item.lines[0]) == 1]  # the pins' letters
    choices: list[list[svg.Label]] = [[item] for item in fixed]
    busy: list[Point] = []
    shown, rows = Shown(e.design.identity.units), worst_rows(e, "frame")
    largest = max((row.magnitude for row in rows), default=0.0)
    for row in rows:
        x, y = place(e, "frame", row.site)
        tail = (found.scale * x, -found.scale * y)
        if not found.whole and row.site in AT_SHEAVE:
            tail = found.chain_to
        if row.magnitude > 0.0:
            span = 26.0 + 54.0 * row.magnitude / largest
            tip = (tail[0] + span * row.force[0] / row.magnitude, tail[1] - span * row.force[1] / row.magnitude)
            body.append(svg.arrow(tail, tip))
            points += [tail, tip]
            busy += svg.along(tail, tip)
            choices.append(svg.beside(tail, tip, (row.site, shown.quantity(row.magnitude, "force"))))
        elif row.moment[2]:
            body.append(svg.turning_arrow(tail, TURN, row.moment[2] > 0.0))
            lines = (row.site, shown.quantity(abs(row.moment[2]), "torque"))
            choices.append(svg.around(tail, TURN, lines))
    labels = svg.settled(choices, busy)
    corner = (max(x for x, _ in points), _lowest(points, labels) + 30.0)
    body += scale_bar(found.scale, shown, corner, points)
    text = (
        "The machine at the hold, seen from the front, with the largest load at each place, whichever case it is in: "
    )
    text += "; ".join(row_text(e, row) for row in rows) + "."
    return svg.picture("frame", "Forces into the frame", text, body, points, labels)

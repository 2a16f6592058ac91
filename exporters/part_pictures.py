"""Pictures of parts with an arrow for each site at its worst case: plates from the front, turned parts from the side."""

from __future__ import annotations

import math

from exporters import svg
from exporters.shown import Shown, angle
from exporters.site_places import force_in_part, level, made, place, worst_rows
from loads.examine import Examination
from loads.records import LoadRow
from parts.outline import Part, Plate, Point, Turned
from parts.shape import polygon, profile

ROOM = (300.0, 230.0)  # picture units that a part is drawn into
ARROW = (24.0, 78.0)  # shortest and longest arrow
PUSHED = ("contact", "stop_flank")  # sites on an edge: their arrows come from outside and end there


def part_picture(e: Examination, key: str) -> str | None:
    """The picture of a made part as SVG; None for a part without one."""
    part = made(e, key)
    if part is None:
        return None
    rows = worst_rows(e, key)
    title = f"{part.title.split(',')[0]}: where its loads act"
    if isinstance(part.body, Plate):
        return _plate_picture(e, part, part.body, rows, title)
    return _turned_picture(e, part, part.body, rows, title)


def row_text(e: Examination, row: LoadRow) -> str:
    """One load in a sentence, for captions and for those who cannot see the picture."""
    shown = Shown(e.design.identity.units)
    when = f"{row.case}, crank angle {angle(row.crank_angle)}°"
    if row.magnitude == 0.0:
        if not any(row.moment):
            return f"{row.site}: no load"
        sense = "counter-clockwise" if row.moment[2] > 0.0 else "clockwise"
        return f"{row.site}: {shown.quantity(abs(row.moment[2]), 'torque')} {sense}, {when}"
    where = angle(math.atan2(row.force[1], row.force[0]))
    return f"{row.site}: {shown.quantity(row.magnitude, 'force')} towards {where}° of the {row.frame} frame, {when}"


def _describe(e: Examination, what: str, rows: list[LoadRow]) -> str:
    return what + " " + "; ".join(row_text(e, row) for row in rows) + "."


def _length(force: float, largest: float) -> float:
    short, long = ARROW
    return short + (long - short) * force / largest


def plate_body(plate: Plate, put: svg.Put, scale: float) -> list[str]:
    """Outline, holes, sinks, slots and strokes of a plate, seen from the front."""
    body = [svg.outline(plate.outline, put, scale, "body")]
    for sink in plate.counterbores:
        kind = "sink" if sink.face == "chain" else "hidden"
        body.append(svg.circle(put(sink.center), sink.diameter / 2 * scale, kind))
    body += [svg.circle(put(hole.center), hole.diameter / 2 * scale, "hole") for hole in plate.holes]
    corners = polygon(plate, 0.05)
    low, high = float(corners[:, 1].min()), float(corners[:, 1].max())
    for slot in plate.slots:
        body.append(svg.line(put((slot.x_from, low)), put((slot.x_from, high)), "hidden"))
    body += [svg.line(put(a), put(b), "mark") for mark in plate.marks for a, b in mark.strokes]
    return body


def _scale(width: float, height: float) -> float:
    return min(ROOM[0] / max(width, 1e-9), ROOM[1] / max(height, 1e-9))


def _plate_picture(e: Examination, part: Part, plate: Plate, rows: list[LoadRow], title: str) -> str:
    corners = polygon(plate, 0.05)
    low, high = corners.min(axis=0), corners.max(axis=0)
    k = _scale(*(high - low))

    def put(at: Point) -> Point:
        return (k * at[0], -k * at[1])

    body = plate_body(plate, put, k)
    points = [put((float(x), float(y))) for x, y in (low, high)]
    loads = [(row, *force_in_part(e, part, row)) for row in rows]
    largest = max((math.hypot(fx, fy) for _, fx, fy in loads), default=0.0)
    shown = Shown(e.design.identity.units)
    choices: list[list[svg.Label]] = []
    busy: list[Point] = [put(hole.center) for hole in plate.holes]
    for row, fx, fy in loads:
        size, site = math.hypot(fx, fy), put(place(e, part.key, row.site))
        if size == 0.0:
            choices.append([svg.Label(site[0], site[1] - 20.0, (row.site, "no load"), "middle")])
            continue
        span = _length(size, largest)
        run = (span * fx / size, -span * fy / size)
        pushed = row.site in PUSHED
        tail, tip = (
            ((site[0] - run[0], site[1] - run[1]), site) if pushed else (site, (site[0] + run[0], site[1] + run[1]))
        )
        body.append(svg.arrow(tail, tip, acts_at=site))
        points += [tail, tip]
        busy += svg.along(tail, tip)
        places = svg.beside(tail, tip, (row.site, shown.quantity(row.magnitude, "force")))
        choices.append(places[3:] + places[:3] if pushed else places)
    labels = svg.settled(choices, busy)
    lowest = max([y for _, y in points] + [item.box[3] for item in labels])
    corner = (points[0][0] + 4.0, lowest + 52.0)
    body += _axes(corner, ("x", "y"), points)
    body += scale_bar(k, shown, (max(points[1][0], corner[0] + 160.0), corner[1]), points)
    what = f"Seen from the front, in its own frame, to scale; outer size {_size(shown, *(high - low))}."
    return svg.picture(f"part-{part.key}", title, _describe(e, what, rows), body, points, labels)


def _size(shown: Shown, width: float, height: float) -> str:
    return f"{shown.number(width, 'length')} × {shown.quantity(height, 'length')}"


def _axes(corner: Point, names: tuple[str, str], points: list[Point]) -> list[str]:
    """The directions of the part's axes, drawn aside; grows the picture by what they take."""
    across, up = (corner[0] + 30.0, corner[1]), (corner[0], corner[1] - 30.0)
    points += [corner, (across[0] + 14.0, across[1] + 8.0), (up[0], up[1] - 14.0)]
    return [
        svg.arrow(corner, across, "axis"), svg.arrow(corner, up, "axis"),
        svg.label(svg.Label(across[0] + 5.0, across[1], (names[0],)), "small"),
        svg.label(svg.Label(up[0], up[1] - 8.0, (names[1],), "middle"), "small"),
    ]  # fmt: skip


def scale_bar(k: float, shown: Shown, right: Point, points: list[Point]) -> list[str]:
    """A bar of a round length that ends at ``right``; ``k`` picture units are one mm."""
    unit = 1.0 / shown.value(1.0, "length")  # mm in one unit shown
    aim = 90.0 / (k * unit)
    decade = 10.0 ** math.floor(math.log10(aim))
    length = max(step * decade for step in (1.0, 2.0, 5.0) if step * decade <= aim)
    a, b = (right[0] - length * unit * k, right[1]), right
    points += [a, b, (b[0], b[1] + 6.0), (b[0], b[1] - 18.0)]
    ticks = [svg.line((x, b[1] - 4.0), (x, b[1] + 4.0), "scale") for x in (a[0], b[0])]
    text = svg.Label((a[0] + b[0]) / 2, b[1] - 11.0, (f"{length:g} {shown.unit('length')}",), "middle")
    return [svg.line(a, b, "scale"), *ticks, svg.label(text, "small")]


def _turned_picture(e: Examination, part: Part, turned: Turned, rows: list[LoadRow], title: str) -> str:
    """From the side, in the plane that holds the first site's force: z to the right, towards the viewer of the machine."""
    edge = profile(turned)
    first, last = edge[0][0], edge[-1][0]
    widest = 2 * max(r for _, r in edge)
    k = _scale(last - first, widest)
    body = [
        svg.polyline([(k * z, -k * r) for z, r in edge] + [(k * z, k * r) for z, r in reversed(edge)], "body", True)
    ]
    for step in turned.steps[1:]:
        r = k * step.diameter / 2
        body.append(svg.line((k * step.z_from, -r), (k * step.z_from, r), "edge"))
    if turned.bore:
        for side in (1, -1):
            y = side * k * turned.bore / 2
            body.append(svg.line((k * first, y), (k * last, y), "hidden"))
    body.append(svg.line((k * first - 12.0, 0.0), (k * last + 12.0, 0.0), "centre"))
    points = [(k * first, k * widest / 2), (k * last, -k * widest / 2)]
    loads = [(row, *force_in_part(e, part, row)) for row in rows]
    largest = max((math.hypot(fx, fy) for _, fx, fy in loads), default=0.0)
    reference = next((math.atan2(fy, fx) for _, fx, fy in loads if fx or fy), 0.0)
    shown = Shown(e.design.identity.units)
    choices: list[list[svg.Label]] = []
    busy: list[Point] = []
    for row, fx, fy in loads:
        size = math.hypot(fx, fy)
        up = 1.0 if math.cos(math.atan2(fy, fx) - reference) >= 0.0 else -1.0
        z = level(e, part, row.site)
        if size == 0.0:
            choices.append([svg.Label(k * z, -8.0, (row.site, "no load"), "middle")])
            continue
        # from the axis, so that an arrow in a thick pin still comes out of it
        tail, tip = (k * z, 0.0), (k * z, -up * (k * widest / 2 + _length(size, largest) * 0.6))
        body.append(svg.arrow(tail, tip))
        points += [tail, tip]
        busy += svg.along(tail, tip)
        choices.append(svg.beside(tail, tip, (row.site, shown.quantity(row.magnitude, "force"))))
    labels = svg.settled(choices, busy)
    bottom = max([y for _, y in points] + [item.box[3] for item in labels])
    corner = (min(x for x, _ in points) + 4.0, bottom + 22.0)
    points.append((corner[0] + 60.0, corner[1]))
    body += [
        svg.arrow(corner, (corner[0] + 30.0, corner[1]), "axis"),
        svg.label(svg.Label(corner[0] + 36.0, corner[1], ("z",)), "small"),
    ]
    right = max(k * last, corner[0] + 180.0)
    body += scale_bar(k, shown, (right, corner[1]), points)
    what = (
        f"Seen from the side, to scale, {_size(shown, last - first, widest)}; "
        "up is the direction of the first site's force."
    )
    return svg.picture(f"part-{part.key}", title, _describe(e, what, rows), body, points, labels)

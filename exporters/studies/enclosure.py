"""The study of the enclosure as it leaves: rows of check.json, a section of the page with a picture, a line, a drawing."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path
from typing import Any

from exporters import svg
from exporters.check_json import Row, degrees, tidy
from exporters.shown import Shown, angle, shortfall
from exporters.studies.leaving import Leaving, Step
from loads.enclosure import SMOOTH, EnclosureStudy
from loads.examine import Examination
from loads.motions import BACKING_OFF, RELEASE, WINDING
from parts.outline import Point

ROOM = (460.0, 420.0)
LEAST_CRANK = 20.0  # picture units under which what is far away is cut off
KINDS = {WINDING: "curve", RELEASE: "hidden", BACKING_OFF: "load"}
MOST_SHORT = 8


def enclosure_rows(e: Examination, study: EnclosureStudy) -> list[Row]:
    """One row a sweep and wall or obstacle (``to``), of each sweep the nearest first; below zero it is run into.

    ``excess_mm``: the true clearance may be that much larger, never less.
    """
    return [
        {
            "sweep": sweep, "clearance_mm": tidy(at.clearance), "part": at.part,
            "crank_angle_deg": degrees(at.crank_angle), "x_mm": tidy(at.x), "y_mm": tidy(at.y), "to": at.target,
            "excess_mm": tidy(at.excess),
        }
        for sweep, near in study.near.items()
        for at in near
    ]  # fmt: skip


def enclosure_line(e: Examination, study: EnclosureStudy) -> str:
    """The nearest in each sweep."""
    shown = Shown(e.design.identity.units)
    parts = [
        f"{sweep} {shown.quantity(at.clearance, 'length', 3)} ({at.part} to {at.target})"
        for sweep, (at, *_) in study.near.items()
    ]
    return f"Enclosure, clearance: {', '.join(parts)}."


def enclosure_values(e: Examination, study: EnclosureStudy) -> dict[str, Any]:
    """What the page's section says."""
    shown = Shown(e.design.identity.units)
    return {
        "unit": shown.unit("length"),
        "picture": svg.markup(_picture(e, study, shown)),
        "short": any(near[0].clearance < 0.0 for near in study.near.values()),
        "sag": None if study.sag is None else shown.quantity(study.sag, "length", 3),
        "drawing": f"dxf/{_name(e)}",
        "excess": [(sweep, shown.quantity(excess, "length", 2)) for sweep, excess in study.excess.items()],
        "rows": [
            {
                "sweep": sweep, "to": at.target, "part": at.part, "clearance": shown.number(at.clearance, "length"),
                "angle": angle(at.crank_angle), "x": shown.number(at.x, "length"), "y": shown.number(at.y, "length"),
                "excess": shown.number(at.excess, "length", 2), "short": at.clearance < 0.0,
            }
            for sweep, near in study.near.items()
        for at in near
        ],
    }  # fmt: skip


def _picture(e: Examination, study: EnclosureStudy, shown: Shown) -> str:
    """The outlines of the three sweeps among walls and obstacles; what is too far away is cut off."""
    import shapely

    from exporters.part_pictures import scale_bar
    from exporters.sweeps_dxf import extents

    wish, m = e.design.enclosure, e.design.mechanism
    assert wish is not None
    box = extents(study.outlines, wish)
    k = min(ROOM[0] / (box[2] - box[0]), ROOM[1] / (box[3] - box[1]))
    if k * m.crank_radius < LEAST_CRANK:
        reach = 1.6 * (m.crank_radius + m.link_length)
        box = (max(box[0], -reach), max(box[1], -reach), min(box[2], reach), min(box[3], reach))
        k = min(ROOM[0] / (box[2] - box[0]), ROOM[1] / (box[3] - box[1]))
    window = shapely.box(*box)

    def put(x: float, y: float) -> Point:
        return (k * float(x), -k * float(y))

    def drawn(shape: Any, kind: str) -> Iterator[str]:
        for piece in shapely.get_parts(shape):
            yield svg.polyline((put(x, y) for x, y in shapely.get_coordinates(piece)), kind)

    body: list[str] = []
    for corners in wish.obstacles:
        area = shapely.intersection(shapely.Polygon(corners), window)
        for piece in shapely.get_parts(area):
            if piece.geom_type == "Polygon":
                body.append(svg.polyline((put(x, y) for x, y in piece.exterior.coords[:-1]), "body", closed=True))
    walls = [] if wish.outline is None else [shapely.Polygon(wish.outline).exterior]
    for key, ends in (
        ("above", lambda at: ((box[0], at), (box[2], at))), ("below", lambda at: ((box[0], -at), (box[2], -at))),
        ("ahead", lambda at: ((at, box[1]), (at, box[3]))), ("behind", lambda at: ((-at, box[1]), (-at, box[3]))),
    ):  # fmt: skip
        if (distance := getattr(wish, key)) is not None:
            walls.append(shapely.LineString(ends(distance)))
    for wall in walls:
        body += drawn(_lines(shapely.intersection(wall, window)), "scale")
    for sweep, whole in study.outlines.items():
        edge = shapely.boundary(shapely.simplify(whole, 0.3 / k))
        body += drawn(_lines(shapely.intersection(edge, window)), KINDS[sweep])
    body.append(svg.circle(put(0.0, 0.0), 2.5, "dot"))
    points = [put(box[0], box[1]), put(box[2], box[3])]
    for at, *_ in study.near.values():
        if box[0] <= at.x <= box[2] and box[1] <= at.y <= box[3]:
            body.append(svg.circle(put(at.x, at.y), 3.2, "load-head"))
    body += scale_bar(k, shown, (points[1][0], points[0][1] + 26.0), points)
    text = "What the machine sweeps over, seen from the front. " + enclosure_line(e, study)
    return svg.picture("enclosure-sweeps", "Swept shapes in the enclosure", text, body, points)


def _lines(shape: Any) -> Any:
    """The lines of what a cut leaves, pieces that hang together joined."""
    import shapely

    parts = [piece for piece in shapely.get_parts(shape) if piece.geom_type in ("LineString", "LinearRing")]
    return shapely.line_merge(
        shapely.multilinestrings([shapely.linestrings(shapely.get_coordinates(p)) for p in parts])
    )


def _name(e: Examination) -> str:
    who = e.design.identity
    return f"{who.number}-sweeps-{who.revision}.dxf"


def enclosure_files(e: Examination, study: EnclosureStudy) -> Iterator[Step]:
    """The swept shapes as one drawing."""

    def write(folder: Path) -> None:
        from exporters.sweeps_dxf import note_lines, write_sweeps

        who, wish = e.design.identity, e.design.enclosure
        assert wish is not None
        path = folder / "dxf" / _name(e)
        path.parent.mkdir(parents=True, exist_ok=True)
        short = sorted(e.falls_short, key=lambda row: row.check != study.checks[0].check)
        lines = [shortfall(row) for row in short[:MOST_SHORT]]
        if len(short) > MOST_SHORT:
            lines.append(f"and {len(short) - MOST_SHORT} more, see the bill of loads")
        write_sweeps(
            path, study.outlines, wish, units=who.units, falls_short=lines,
            titles=note_lines(who.number, who.title, who.revision, who.units, study.excess, SMOOTH),
        )  # fmt: skip

    yield "swept shapes", write


LEAVING = Leaving("Enclosure", enclosure_rows, enclosure_values, enclosure_line, enclosure_files)

"""The swept shapes as a drawing (DXF R2000), true size in the machine frame, for whoever builds the enclosure round them.

A layer for each sweep, one for the enclosure, one for obstacles, one for the disc axis; NOTE says that it is no cut file.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

import numpy as np
import shapely

from exporters.dxf import SCALE, fixed_metadata, new_document
from exporters.dxf_notes import FALLS_SHORT, Units, size
from loads.motions import BACKING_OFF, RELEASE, WINDING
from parts.design import Enclosure

LAYERS = {WINDING: "SWEEP_WINDING", RELEASE: "SWEEP_RELEASE", BACKING_OFF: "SWEEP_BACKING_OFF"}
WALLS, OBSTACLES, AXIS, NOTE = "ENCLOSURE", "OBSTACLES", "DISC_AXIS", "NOTE"
COLORS = {
    LAYERS[WINDING]: 5, LAYERS[RELEASE]: 3, LAYERS[BACKING_OFF]: 6, WALLS: 7, OBSTACLES: 30, AXIS: 2, NOTE: 8,
}  # fmt: skip
BEYOND = 0.05  # of the drawing's size by which a wall's line goes past what is swept
NO_CUT_FILE = "NOT A CUT FILE: swept shapes for the enclosure, seen along the disc axis. Nothing here is to be cut."
_WARNING_COLOR = 1


def write_sweeps(
    path: Path,
    outlines: Mapping[str, Any],
    enclosure: Enclosure,
    *,
    units: Units,
    titles: Sequence[str],
    falls_short: Sequence[str] = (),
) -> None:
    """Write the outlines (shapely, mm) of the sweeps with walls, obstacles and axis; ``titles`` are lines of the note."""
    document = new_document(units, COLORS)
    space, scale = document.modelspace(), SCALE[units]

    def closed(layer: str, ring: Any) -> None:
        points = np.asarray(shapely.get_coordinates(ring))[:-1] * scale
        space.add_lwpolyline([(float(x), float(y)) for x, y in points], close=True, dxfattribs={"layer": layer})

    def line(layer: str, a: tuple[float, float], b: tuple[float, float]) -> None:
        start, end = ((x * scale, y * scale) for x, y in (a, b))
        space.add_line(start, end, dxfattribs={"layer": layer})

    for sweep, whole in outlines.items():
        for area in shapely.get_parts(whole):
            for ring in (area.exterior, *area.interiors):
                closed(LAYERS[sweep], ring)
    if enclosure.outline is not None:
        closed(WALLS, shapely.Polygon(enclosure.outline).exterior)
    for corners in enclosure.obstacles:
        closed(OBSTACLES, shapely.Polygon(corners).exterior)
    left, low, right, high = extents(outlines, enclosure)
    for key, sign in (("above", 1.0), ("below", -1.0)):
        if (at := getattr(enclosure, key)) is not None:
            line(WALLS, (left, sign * at), (right, sign * at))
    for key, sign in (("ahead", 1.0), ("behind", -1.0)):
        if (at := getattr(enclosure, key)) is not None:
            line(WALLS, (sign * at, low), (sign * at, high))
    arm = 0.02 * (high - low)
    line(AXIS, (-arm, 0.0), (arm, 0.0))
    line(AXIS, (0.0, -arm), (0.0, arm))

    height = 0.015 * (high - low)
    lines = [(NO_CUT_FILE, True), *((text, False) for text in titles)]
    lines += [(f"{FALLS_SHORT}: {text}", True) for text in falls_short]
    bottom = low
    for text, warning in lines:
        bottom -= 1.8 * height
        attributes: dict[str, Any] = {"layer": NOTE, **({"color": _WARNING_COLOR} if warning else {})}
        entity = space.add_text(text, height=height * scale, dxfattribs=attributes)
        entity.set_placement((left * scale, bottom * scale))
    corner, other = (left * scale, bottom * scale, 0.0), (right * scale, high * scale, 0.0)
    document.header["$EXTMIN"], document.header["$EXTMAX"] = corner, other
    space.reset_extents(corner, other)
    middle = ((left + right) / 2.0 * scale, (bottom + high) / 2.0 * scale)
    document.set_modelspace_vport(1.05 * max(high - bottom, (right - left) / 1.6) * scale, middle)
    with fixed_metadata():
        document.saveas(path)


def extents(outlines: Mapping[str, Any], enclosure: Enclosure) -> tuple[float, float, float, float]:
    """Left, low, right, high (mm) of everything that is drawn, with a margin."""
    boxes = [shapely.bounds(area) for area in outlines.values()]
    given = [enclosure.outline] if enclosure.outline is not None else []
    boxes += [shapely.bounds(shapely.Polygon(corners)) for corners in (*given, *enclosure.obstacles)]
    known = np.array(boxes)
    left, low = known[:, :2].min(axis=0)
    right, high = known[:, 2:].max(axis=0)
    left, low = min(left, -(enclosure.behind or 0.0)), min(low, -(enclosure.below or 0.0))
    right, high = max(right, enclosure.ahead or 0.0), max(high, enclosure.above or 0.0)
    margin = BEYOND * max(right - left, high - low)
    return float(left - margin), float(low - margin), float(right + margin), float(high + margin)


def note_lines(
    number: str, title: str, revision: str, units: Units, excess: Mapping[str, float], smooth: float
) -> list[str]:
    """What the drawing says of itself beside the warning."""
    unit = "mm" if units == "metric" else "in"
    rows = [
        f"{number} {title}, revision {revision}. Unit: {unit}. Machine frame, origin on the disc axis (layer {AXIS}).",
        *(
            f"{layer}: {sweep}, never smaller than what is swept, larger by at most "
            f"{size(excess[sweep] + 2.0 * smooth, units)} {unit}."
            for sweep, layer in LAYERS.items()
            if sweep in excess
        ),
        "In them: disc, link, chain pin, chain end or tie, the straight chain, the sheave. Not in them: the bow of a slack "
        "chain, the run from the sheave to the spring, hub, shaft and frame behind the disc.",
    ]
    return rows

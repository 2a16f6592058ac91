"""Cut files read by a library that had no part in writing them."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest
import trimesh
from shapely.geometry import Polygon

from exporters.dxf import write_plate
from parts.cutting import hole_work
from parts.outline import Hole, Part, Plate
from parts.shape import perimeter, signed_area
from tests.exporters.examined import starter


def test_an_outside_reader_finds_the_same_outline(tmp_path: Path) -> None:
    """trimesh's own DXF reader: the cut outline and the holes have the area and the length that the part's records have."""
    for name in ("impact-rig", "seed-thrower"):
        for part in starter(name).parts:
            if not isinstance(part.body, Plate):
                continue
            path = tmp_path / f"{name}-{part.name}.dxf"
            write_plate(part, path, units="metric", number="N", revision="A")
            drawing = trimesh.load_path(path)
            # it drops the layer of an outline with bulges, and of text, which has no length
            kept = [e for e in drawing.entities if e.layer in ("CUT", None) and type(e).__name__ != "Text"]
            points = [e.discrete(drawing.vertices, scale=1e-3) for e in kept]
            cut = [h for h in part.body.holes if _way(part, h) == "cut"]
            length = sum(float(np.linalg.norm(np.diff(p, axis=0), axis=1).sum()) for p in points)
            assert length == pytest.approx(
                perimeter(part.body.outline) + sum(np.pi * h.diameter for h in cut), rel=2e-3
            )
            ring = _ordered(points)
            assert Polygon(ring).area == pytest.approx(abs(signed_area(part.body.outline)), rel=3e-3)


def _way(part: Part, hole: Hole) -> str:
    assert isinstance(part.body, Plate)
    return hole_work(hole, part.body.thickness).way


def _ordered(pieces: list[Any]) -> Any:
    """The pieces of the outermost closed line, end to end."""
    start = max(pieces, key=lambda p: float(np.abs(p).max()))
    ring, left = [np.asarray(start)], [p for p in pieces if p is not start]
    while np.linalg.norm(ring[-1][-1] - ring[0][0]) > 1e-6:
        end = ring[-1][-1]
        after = min(left, key=lambda p: min(np.linalg.norm(p[0] - end), np.linalg.norm(p[-1] - end)))
        left = [p for p in left if p is not after]
        ring.append(np.asarray(after) if np.linalg.norm(after[0] - end) < 1e-6 else np.asarray(after)[::-1])
    return np.concatenate(ring)

"""A machine run backwards worked out once more, in the machine frame and with geometry of its own, to check against."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import shapely

from loads.examine import Examination
from parts.assembly import placed, pose
from parts.design import Floats
from parts.outline import Plate
from parts.shape import polygon


def tangent(e: Examination, q: tuple[float, float]) -> tuple[float, float]:
    """Length from a point to where its chain line touches the pitch circle, and the direction of that line."""
    sheave = e.design.sheave
    assert sheave is not None
    dx, dy = sheave.center[0] - q[0], sheave.center[1] - q[1]
    away = math.hypot(dx, dy)
    side = 1.0 if sheave.wrap == "left" else -1.0
    return math.sqrt(away**2 - sheave.pitch_radius**2), math.atan2(dy, dx) + side * math.asin(
        sheave.pitch_radius / away
    )


def pull(e: Examination, q: tuple[float, float]) -> float:
    """p with the chain pin at q: straight length and arc against those of the start, by the sheave as it is drawn."""
    sheave = e.design.sheave
    assert sheave is not None
    side = 1.0 if sheave.wrap == "left" else -1.0
    m, start = e.design.mechanism, float(e.machine.start_direction)
    at = m.crank_radius + m.link_length
    first = tangent(e, (at * math.cos(start), at * math.sin(start)))
    now = tangent(e, q)
    turned = math.remainder(now[1] - first[1], 2.0 * math.pi)
    return now[0] - first[0] + side * sheave.pitch_radius * turned


def chain_pin(e: Examination, theta: float, link_angle: float) -> tuple[float, float]:
    """B in the machine frame."""
    m = e.design.mechanism
    turn = 1.0 if m.rotation == "ccw" else -1.0
    disc = float(e.machine.start_direction) + turn * theta
    link = disc + turn * (math.pi + link_angle)
    return (
        m.crank_radius * math.cos(disc) + m.link_length * math.cos(link),
        m.crank_radius * math.sin(disc) + m.link_length * math.sin(link),
    )


def shapes(e: Examination, theta: float, link_angle: float, chain: float | None = None) -> dict[str, Any]:
    """The outlines of all parts in one pose, as areas, by key; the first copy of each."""
    turn = 1.0 if e.design.mechanism.rotation == "ccw" else -1.0
    disc = float(e.machine.start_direction) + turn * theta
    along = tangent(e, chain_pin(e, theta, link_angle))[1] if chain is None else chain
    found: dict[str, Any] = {}
    for copy in placed(e.parts, pose(e.design, disc, disc + turn * (math.pi + link_angle), along)):
        if copy.part.key in found:
            continue
        x, y, _, angle = copy.at
        if isinstance(copy.part.body, Plate):
            corners = polygon(copy.part.body, 1e-3)  # inside the true outline
            c, s = math.cos(angle), math.sin(angle)
            found[copy.part.key] = shapely.Polygon(corners @ np.array([[c, s], [-s, c]]) + (x, y))
        else:
            radius = max(step.diameter for step in copy.part.body.steps) / 2.0
            found[copy.part.key] = shapely.Point(x, y).buffer(radius, quad_segs=64)
    return found


def straight(e: Examination, theta: float) -> float:
    """λ of a link in line with the chain, by bisection over the pull, which is least there."""
    at = np.linspace(0.0, 2.0 * math.pi, 721)
    values = [pull(e, chain_pin(e, theta, float(a))) for a in at]
    i = int(np.argmin(values))
    low, high = at[i] - 0.02, at[i] + 0.02
    for _ in range(60):
        a, b = low + (high - low) / 3.0, high - (high - low) / 3.0
        nearer = pull(e, chain_pin(e, theta, a)) < pull(e, chain_pin(e, theta, b))
        low, high = (low, b) if nearer else (a, high)
    return float((low + high) / 2.0)


def corners_of(area: Any) -> Floats:
    return np.asarray(shapely.get_coordinates(area))

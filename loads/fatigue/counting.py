"""Counted cycles of a closed stress history."""

from __future__ import annotations

import numpy as np
from rainflow import extract_cycles

from parts.design import Floats

ROUNDING = 1e-7


def closed(history: Floats) -> Floats:
    """Histories (fibres, n) of one shot with the rest before and after it: from no load to no load."""
    rest = np.zeros((len(history), 1))
    return np.hstack([rest, history, rest])


def most_cycles(history: Floats) -> Floats:
    """No fewer than the cycles of each closed history (fibres, n), which are half of its turning points.

    Each change between rising, resting and falling counts as a turning point, and one more for where the loop closes.
    """
    step = history[:, 1:] - history[:, :-1]
    least = ROUNDING * np.maximum(history.max(axis=1, keepdims=True), -history.min(axis=1, keepdims=True))
    way = (step > least).view(np.int8) - (step < -least).view(np.int8)
    changes = np.count_nonzero(way[:, 1:] != way[:, :-1], axis=1)
    return np.asarray(np.maximum(1.0, np.floor((1.0 + changes) / 2.0)))


def turning_points(history: Floats) -> Floats:
    """Peaks and valleys of one closed history, from its greatest round to its greatest.

    Steps below a ten-millionth of the largest stress are rounding, and count as none.
    """
    top = int(history.argmax())
    loop = np.concatenate([history[top:-1], history[: top + 1]])
    step = loop[1:] - loop[:-1]
    moves = np.flatnonzero(np.abs(step) > ROUNDING * max(float(loop.max()), -float(loop.min())))
    rises = step[moves] > 0.0
    turns = moves[1:][rises[1:] != rises[:-1]]
    return np.concatenate([loop[:1], loop[turns], loop[-1:]])


def count_cycles(points: Floats) -> tuple[Floats, Floats, Floats]:
    """Amplitudes, means and counts of the cycles between the turning points of a closed history that repeats.

    Rainflow, begun at the greatest stress, so that nothing is left over: the two halves of the largest cycle add up to
    a whole. Source: ASTM E1049-85 §5.4.4 and §5.4.5.2.
    """
    found = np.array([(r, m, n) for r, m, n, _, _ in extract_cycles(points.tolist())]).reshape(-1, 3)
    return found[:, 0] / 2.0, found[:, 1], found[:, 2]


def padded(cycles: list[tuple[Floats, Floats, Floats]]) -> tuple[Floats, Floats, Floats]:
    """Several fibres' cycles as arrays (fibres, most cycles), filled up with cycles that count for nothing."""
    whole = np.zeros((3, len(cycles), max((len(a) for a, _, _ in cycles), default=0)))
    for i, row in enumerate(cycles):
        whole[:, i, : len(row[0])] = row
    return whole[0], whole[1], whole[2]

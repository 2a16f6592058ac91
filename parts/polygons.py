"""Whether a polygon can stand for a wall or an obstacle: pure geometry on lists of corners, in mm."""

from __future__ import annotations

from collections.abc import Sequence

Corner = tuple[float, float]


def polygon_fault(corners: Sequence[Corner]) -> str | None:
    """Why a closed polygon cannot be used (too few corners, one repeated, folded, crossing itself), or None."""
    count = len(corners)
    if count < 3:
        return f"{count} corner{'' if count == 1 else 's'}: a polygon has three or more"
    for place, corner in enumerate(corners):
        if corner == corners[(place + 1) % count]:
            return f"corner {place + 1} is repeated by the next; the last is joined to the first without being repeated"
    sides = [(corners[place], corners[(place + 1) % count]) for place in range(count)]
    for one in range(count):
        for other in range(one + 1, count):
            if other == one + 1 or (one == 0 and other == count - 1):
                near, far = (sides[one], sides[other]) if other == one + 1 else (sides[other], sides[one])
                if _folds_back(near[0], near[1], far[1]):
                    return f"it turns back on itself at corner {(other if other == one + 1 else 0) + 1}"
            elif _meet(*sides[one], *sides[other]):
                return f"side {one + 1} meets side {other + 1}: it crosses itself"
    return None


def covers(corners: Sequence[Corner], point: Corner) -> bool:
    """Whether a point lies in a polygon or on its edge."""
    inside = False
    for place, a in enumerate(corners):
        b = corners[(place + 1) % len(corners)]
        if _turn(a, b, point) == 0 and _between(a, b, point):
            return True
        if (a[1] > point[1]) != (b[1] > point[1]):
            crossing = a[0] + (point[1] - a[1]) / (b[1] - a[1]) * (b[0] - a[0])
            inside ^= point[0] < crossing
    return inside


def _turn(a: Corner, b: Corner, c: Corner) -> float:
    return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])


def _between(a: Corner, b: Corner, point: Corner) -> bool:
    return min(a[0], b[0]) <= point[0] <= max(a[0], b[0]) and min(a[1], b[1]) <= point[1] <= max(a[1], b[1])


def _folds_back(a: Corner, b: Corner, c: Corner) -> bool:
    along = (b[0] - a[0]) * (c[0] - b[0]) + (b[1] - a[1]) * (c[1] - b[1])
    return _turn(a, b, c) == 0 and along < 0


def _meet(a: Corner, b: Corner, c: Corner, d: Corner) -> bool:
    turns = _turn(a, b, c), _turn(a, b, d), _turn(c, d, a), _turn(c, d, b)
    if turns[0] * turns[1] < 0 and turns[2] * turns[3] < 0:
        return True
    ends = ((turns[0], a, b, c), (turns[1], a, b, d), (turns[2], c, d, a), (turns[3], c, d, b))
    return any(turn == 0 and _between(p, q, point) for turn, p, q, point in ends)

"""Every pose that stop and chain allow while the chain is slack: for each crank angle the link angles that are left.

The spring is at rest, so the chain pin may be wherever p ≤ slack; the stop leaves λ from its front to its back. Such a
pose depends on where the disc stands, not on how often it has turned, so one turn, −π to π, holds them all. rad, mm.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from loads.linkage import Linkage, crank_pin_at, free_line
from loads.roots import bracketed_root
from parts.design import Floats

TURNS = (-1, 0, 1)  # whole turns by which the link angle may have to be shifted into the stop's range
NEARLY = 1e-9  # rad and mm of rounding


@dataclass(frozen=True, slots=True)
class SlackPoses:
    """``low`` and ``high`` (n, 3): ends of up to three intervals of λ at each crank angle (n), NaN where there is none.

    A column goes on from angle to angle. Where an interval begins or ends, and where it meets the stop, there is a row.
    """

    crank_angle: Floats
    low: Floats
    high: Floats

    @property
    def some(self) -> bool:
        return bool(np.any(np.isfinite(self.low)))

    @property
    def reach(self) -> tuple[float, float] | None:
        """The first and the last crank angle with a pose."""
        rows = np.flatnonzero(np.any(np.isfinite(self.low), axis=1))
        return (float(self.crank_angle[rows[0]]), float(self.crank_angle[rows[-1]])) if rows.size else None


def pull_at(machine: Linkage, theta: Floats, link_angle: Floats) -> Floats:
    """p (mm) with the link anywhere; both arrays of one shape (n)."""
    return _pull(machine.expanded(), theta, link_angle)


def _pull(m: Linkage, theta: Floats, link_angle: Floats) -> Floats:
    psi = theta + np.pi + link_angle
    x = m.crank_radius * np.cos(theta) + m.link_length * np.cos(psi)
    y = m.crank_radius * np.sin(theta) + m.link_length * np.sin(psi)
    return m.far.line(m.crank_radius, x, y, np.zeros(()), m.link_length).pull


def straight_angle(machine: Linkage, theta: Floats) -> Floats:
    """λ of a link in line with the chain, continuous over −π to π; π at θ = 0."""
    m = machine.expanded()
    qx, qy = crank_pin_at(m, theta)
    return np.asarray(np.pi + m.far.line(m.crank_radius, qx, qy, m.link_length, m.link_length).direction - theta)


def free_pull(machine: Linkage, theta: Floats) -> Floats:
    """p of a link in line with the chain: the least that the crank angle leaves."""
    return free_line(machine.expanded(), theta).pull


def chain_limits(machine: Linkage, theta: Floats) -> tuple[Floats, Floats]:
    """λ (n), (n) between which p ≤ slack, about the straight link; NaN where the chain is taut anyway.

    Over half a turn of the link either way p rises from its least, the link in line with the chain, to its greatest, in
    line once more and folded back; so each side has one root, found by bracketing.
    """
    m, straight, slack = machine.expanded(), straight_angle(machine, theta), float(machine.slack)
    least = free_pull(machine, theta)
    some = least <= slack + NEARLY
    limits = []
    for side in (-1.0, 1.0):
        far = straight + side * np.pi
        short = _pull(m, theta, far) > slack
        low, high = np.where(some & short, straight, np.nan), np.where(some & short, far, np.nan)

        def over(angle: Floats) -> Floats:
            return _pull(m, theta, angle) - slack

        with np.errstate(invalid="ignore"):
            root = bracketed_root(over, low, high, NEARLY)
        # right at the least the two ends of the bracket have one sign, by rounding
        begins = some & short & (least >= slack - NEARLY)
        limits.append(np.where(some, np.where(begins, straight, np.where(short, root, far)), np.nan))
    return limits[0], limits[1]


def intervals(machine: Linkage, back: float, theta: Floats) -> tuple[Floats, Floats]:
    """Ends (n, 3) of what chain and stop leave of λ, one column a whole turn; NaN where there is nothing."""
    low, high = chain_limits(machine, theta)
    front = float(machine.seat_angle)
    ends = []
    for k in TURNS:
        first, last = np.maximum(low - 2.0 * np.pi * k, front), np.minimum(high - 2.0 * np.pi * k, back)
        some = last >= first - NEARLY
        ends.append((np.where(some, first, np.nan), np.where(some, np.maximum(first, last), np.nan)))
    return np.stack([a for a, _ in ends], axis=-1), np.stack([b for _, b in ends], axis=-1)


def slack_poses(machine: Linkage, back: float, step: float) -> SlackPoses:
    """The map of one design over a turn: rows ``step`` rad apart at most, closer where intervals close.

    ``back`` is λ at the stop's back. Without slack there is nothing but the start dead centre, and the map is empty.
    """
    if float(machine.slack) <= NEARLY:
        none = np.empty((0, len(TURNS)))
        return SlackPoses(np.empty(0), none, none)
    theta = _nodes(machine, step)
    theta = np.unique(np.concatenate([theta, _corners(machine, back, theta)]))
    with np.errstate(invalid="ignore"):
        return SlackPoses(theta, *intervals(machine, back, theta))


def _nodes(machine: Linkage, step: float) -> Floats:
    """Crank angles at which the chain can be slack; where that ends they close up as a sine does, for there the intervals
    close as a root does."""
    slack = float(machine.slack)
    ends = []
    for side in (-1.0, 1.0):
        x = side * np.linspace(0.0, np.pi, 61)
        over = free_pull(machine, x) > slack
        if not bool(np.any(over)):
            ends.append(side * np.pi)
            continue
        i = int(np.argmax(over))
        bracket = (np.array([x[i - 1]]), np.array([x[i]]))
        ends.append(float(bracketed_root(lambda t: free_pull(machine, t) - slack, *bracket)[0]))
    middle, half = (ends[1] + ends[0]) / 2.0, (ends[1] - ends[0]) / 2.0
    count = max(8, int(np.ceil(np.pi * half / step)))
    if half >= np.pi - NEARLY:
        return np.linspace(-np.pi, np.pi, count + 1)
    found = middle + half * np.sin(np.linspace(-np.pi / 2.0, np.pi / 2.0, count + 1))
    found[0], found[-1] = ends
    return np.asarray(found)


def _corners(machine: Linkage, back: float, theta: Floats) -> Floats:
    """Crank angles between the rows at which the chain's limits pass the stop's, so that an interval has a corner there."""
    front = float(machine.seat_angle)
    found = []
    with np.errstate(invalid="ignore"):
        limits = chain_limits(machine, theta)
        for which in (0, 1):
            for level in (front + 2.0 * np.pi * k for k in TURNS):
                found.append(_crossings(machine, which, level, theta, limits[which]))
            for level in (back + 2.0 * np.pi * k for k in TURNS):
                found.append(_crossings(machine, which, level, theta, limits[which]))
    return np.concatenate(found)


def _crossings(machine: Linkage, which: int, level: float, theta: Floats, limit: Floats) -> Floats:
    above = limit - level
    rows = np.flatnonzero(above[:-1] * above[1:] < 0.0)
    if not rows.size:
        return np.empty(0)
    return bracketed_root(lambda t: chain_limits(machine, t)[which] - level, theta[rows], theta[rows + 1], NEARLY)

"""The motions that a machine must have room for, as poses for ``parts.sweeps``: winding, release, backing off. mm, rad."""

from __future__ import annotations

import math
from dataclasses import replace
from itertools import pairwise
from typing import TypeVar

import numpy as np

from loads.backing_off import BackingOff
from loads.linkage import Linkage, chain_line, free_line, state
from loads.members import History
from loads.roots import bracketed_root
from loads.slack_poses import TURNS, intervals, slack_poses
from parts.design import Floats
from parts.sweeps import Motion

FloatOrArray = TypeVar("FloatOrArray", float, Floats)
WINDING, RELEASE, BACKING_OFF = "winding", "release", "backing off"
STEP = math.radians(1.0)  # of a cell, in which three poses are taken
PIECE = math.radians(4.0)  # of a cell's freedom in the link angle
CUT = 6  # poses in which a cell is cut up where it matters, along each axis
MOST_CELLS = 900  # of the slack poses: with more freedom the steps are longer


def winding(past: History) -> list[Motion]:
    """From 0 to the release."""
    end = float(past.figures.events.release)
    return [_taut(past.machine, past.figures.events.catch, 0.0, end)]


def release_swing(past: History, study: BackingOff) -> list[Motion]:
    """The disc at the release, the link from its stop until it points along the chain, and on as far as a chain with the
    spring at rest lets it, never past the stop's back; and the release as it was simulated, where it is covered."""
    motions = [_swing_off(past.machine, float(past.figures.events.release), study.contact.link_angle)]
    if past.release is not None:
        theta = np.asarray(past.release.crank_angle)
        link_angle = np.asarray(past.release.link_direction) - theta - np.pi
        # between two moments disc and link turn so little unevenly that their angles may be interpolated
        ways = np.maximum(np.abs(np.diff(link_angle)), np.abs(np.diff(theta)))
        steps = np.concatenate([[0.0], np.cumsum(np.maximum(1.0, np.ceil(ways / STEP)))])
        at = np.arange(2.0 * steps[-1] + 1.0) / 2.0
        theta, link_angle = (np.interp(at, steps, values) for values in (theta, link_angle))
        motions.append(_poses(past.machine, theta, link_angle[:, None]))
    return motions


def _swing_off(machine: Linkage, end: float, back: float, sign: float = 1.0) -> Motion:
    """The link swings from its seat, the disc standing at ``end``; ``back`` is λ where it would meet the stop again."""
    front = float(machine.seat_angle)
    straight = float(np.pi + free_line(machine.expanded(), np.array([end])).direction[0]) - end
    last = front + math.fmod(straight - front + 4.0 * math.pi, 2.0 * math.pi)
    _, high = intervals(machine, back, np.array([math.remainder(end, 2.0 * math.pi)]))
    if bool(np.any(np.isfinite(high))):
        last = max(last, float(np.nanmax(high)))
    last = min(last, back)
    count = 2 * max(2, math.ceil((last - front) / STEP)) + 1
    link_angle = np.linspace(front, last, count)
    return _poses(machine, np.full(count, end), link_angle[:, None], sign=sign)


def backing_off(past: History, study: BackingOff, plate: float) -> list[Motion]:
    """From the hold back through the start dead centre to the stop's back, and everywhere that the chain can be slack.

    Where the machine is rated for it, on to the reversed machine's release and its swing. ``plate`` is the length of the
    chain's end between its holes, which hangs loose when the chain does.
    """
    machine, at = past.machine, past.figures.events
    motions = [_taut(machine, at.catch, 0.0, float(at.hold))]
    if study.back_contact is not None:
        ended = -study.back_contact
        if study.rated and study.release is not None:
            ended = -study.release
            motions.append(_swing_off(study.mirror, ended, 2.0 * math.pi - float(machine.seat_angle), -1.0))
        motions.append(_taut(study.mirror, study.reversed_figures.events.catch, 0.0, ended, -1.0))
    return motions + _slack(machine, study, plate)


def _taut(machine: Linkage, catch: Floats, start: float, end: float, sign: float = 1.0) -> Motion:
    """The pose of a taut chain over crank angle."""
    corners = [start, *(c for c in (float(catch),) if start < c < end), end]
    parts = [np.linspace(a, b, 2 * max(1, math.ceil((b - a) / STEP)) + 1) for a, b in pairwise(corners)]
    theta = np.concatenate([parts[0], *(p[1:] for p in parts[1:])])
    s = state(machine, theta, catch)
    return _poses(machine, theta, np.asarray(s.link_direction - theta - np.pi)[:, None], sign=sign)


def _slack(machine: Linkage, study: BackingOff, plate: float) -> list[Motion]:
    """Every pose of a slack chain: a grid for each run of crank angles over which an interval goes on."""
    for coarser in (1.0, 1.4, 2.0, 2.8, 4.0, 5.6, 8.0):
        piece = coarser * PIECE
        found = slack_poses(machine, study.contact.link_angle, coarser * STEP)
        if np.nansum(np.ceil(_pieces(found.high - found.low, piece))) <= MOST_CELLS:
            break
    motions = []
    for column in range(len(TURNS)):
        there = np.isfinite(found.low[:, column]) if found.crank_angle.size else np.zeros(0, bool)
        edges = np.flatnonzero(np.diff(np.concatenate([[0], there.astype(int), [0]])))
        for first, last in zip(edges[::2], edges[1::2], strict=True):
            theta = found.crank_angle[first:last]
            theta = theta if theta.size > 1 else np.repeat(theta, 2)
            motions.append(_grid(machine, study.contact.link_angle, column, _halved(theta), piece, plate))
    return motions


def _pieces(width: FloatOrArray, piece: float) -> FloatOrArray:
    """How many pieces an interval of link angles is cut into, so that the longest, in its middle, is no longer than one."""
    return width * (np.pi / 2.0) / piece


def _halved(x: Floats) -> Floats:
    """The same with the middle of each step put in."""
    found = np.empty(2 * x.size - 1)
    found[::2], found[1::2] = x, (x[:-1] + x[1:]) / 2.0
    return found


def _grid(machine: Linkage, back: float, column: int, theta: Floats, piece: float, plate: float) -> Motion:
    """One run of slack poses: the interval of λ in as many equal shares at each crank angle."""
    low, high = _ends(machine, back, column, theta)
    pieces = max(1, math.ceil(_pieces(float(np.max(high - low)), piece)))
    # closer at both ends, where the end of the chain comes loose as a root does
    tau = np.linspace(0.0, np.pi, 2 * pieces + 1)
    return _shares(machine, back, column, theta, tau, plate)


def _shares(machine: Linkage, back: float, column: int, theta: Floats, tau: Floats, plate: float) -> Motion:
    """Slack poses at crank angles (n) and shares (1 − cos τ)/2 of their interval (k); each cell of them can be cut up."""
    low, high = _ends(machine, back, column, theta)
    share = (1.0 - np.cos(tau)) / 2.0

    def finer(row: int, place: int) -> Motion:
        some, others = (np.linspace(x[i], x[i + 2], CUT + 1) for x, i in ((theta, row), (tau, place)))
        return _shares(machine, back, column, some, others, plate)

    motion = _poses(machine, theta, low[:, None] + (high - low)[:, None] * share, plate)
    return replace(motion, finer=finer)


def _ends(machine: Linkage, back: float, column: int, theta: Floats) -> tuple[Floats, Floats]:
    with np.errstate(invalid="ignore"):
        low, high = (ends[:, column] for ends in intervals(machine, back, theta))
    # a middle may miss by rounding what its neighbours have
    for ends in (low, high):
        gone = ~np.isfinite(ends)
        if bool(np.any(gone)) and not bool(np.all(gone)):
            ends[gone] = np.interp(theta[gone], theta[~gone], ends[~gone])
    return low, high


def _poses(
    machine: Linkage, theta: Floats, link_angle: Floats, plate: float | None = None, sign: float = 1.0
) -> Motion:
    """Crank angles (n) and link angles (n, k) as poses in the machine frame.

    ``plate``: the chain's end may hang loose; ``sign`` is −1 for a machine that is another one's mirror image.
    """
    turn, start = float(machine.turn), float(machine.start_direction)
    m, disc = machine.expanded(), theta[:, None] + np.zeros_like(link_angle)
    link = disc + np.pi + link_angle
    x = m.crank_radius * np.cos(disc) + m.link_length * np.cos(link)
    y = m.crank_radius * np.sin(disc) + m.link_length * np.sin(link)
    line = chain_line(m, x, y)
    swing = np.zeros_like(link) if plate is None else _swing(machine, line.direction, x, y, plate)
    direction = np.unwrap(np.unwrap(line.direction, axis=0), axis=1)
    return Motion(
        crank_angle=sign * theta, disc=start + turn * disc, link=start + turn * link, chain=start + turn * direction,
        chain_to=np.broadcast_to(np.asarray(line.free_length, dtype=float), link.shape), swing=swing,
    )  # fmt: skip


def _swing(machine: Linkage, direction: Floats, x: Floats, y: Floats, plate: float) -> Floats:
    """By how much (rad) the end of a slack chain can stand off the line to the sheave, either way.

    Its far hole F is as far as the chain lets it: p(F) + a ≤ slack, a the plate's length, p taken as if F were the chain
    pin. Rising with the angle on each side, so one root on each; the larger counts for both.
    """
    m, slack = machine.expanded(), float(machine.slack)

    def over(angle: Floats) -> Floats:
        towards = direction + angle
        line = chain_line(m, x + plate * np.cos(towards), y + plate * np.sin(towards))
        return np.asarray(line.pull + plate - slack)

    most = np.zeros_like(direction)
    with np.errstate(invalid="ignore"):
        for side in (-1.0, 1.0):
            far = np.full_like(direction, side * np.pi)
            held, free = over(far) > 0.0, over(np.zeros_like(direction)) < 0.0
            some = held & free
            root = bracketed_root(over, np.where(some, 0.0, np.nan), np.where(some, far, np.nan), 1e-7)
            most = np.maximum(most, np.where(some, np.abs(root), np.where(held, 0.0, np.pi)))
    return most

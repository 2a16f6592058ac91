"""The winding cycle: its events, its peaks and its largest loads, for one design or for many.

Leading axes of the machines broadcast; nothing is picked off a grid: events are bracketed roots, peaks are refined.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields

import numpy as np

from loads.linkage import Linkage, State, expanded_state, free_line, lift, seated_line, state
from loads.roots import bracketed_root, first_down_crossing, refined_peak
from loads.spring_law import spring_energy
from parts.design import Floats

SCAN = 144  # cells in which a sign change is looked for over a turn; a coarse look, refined afterwards
CHUNK = 256  # machines in work at once: they stay in the processor's cache and in bounds of memory
RIVAL = 0.02  # of a quantity's range
STAGE = 90  # cells a stage in which the highest point is looked for


@dataclass(frozen=True, slots=True)
class Events:
    """Crank angles in rad, NaN where the mechanism has no such event. All shaped like the machines."""

    catch: Floats
    null: Floats
    release: Floats
    hold: Floats

    @property
    def first_end(self) -> Floats:
        """The first of null and release: where winding is over."""
        return np.minimum(self.null, self.release)


def events(machine: Linkage) -> Events:
    """Catch, null, release and hold of each machine, as bracketed roots (rad)."""
    m = machine.expanded()
    grid = np.linspace(0.0, 2.0 * np.pi, SCAN + 1)

    def slack_of_seat(theta: Floats) -> Floats:
        return np.asarray(np.pi + free_line(machine, theta).direction - theta - machine.seat_angle)

    x = np.broadcast_to(grid, (*machine.shape, SCAN + 1))
    gap = np.pi + free_line(m, x).direction - x - m.seat_angle
    catch = bracketed_root(slack_of_seat, *first_down_crossing(x, gap))

    x = catch[..., None] + grid[1:]
    line = seated_line(m, x)
    hold_on = lift(m, line, x)

    def both(t: Floats) -> Floats:  # null and release at once
        there = seated_line(machine, t)
        return np.stack([there.arm[0], lift(machine, there, t)[1]])

    lows, highs = zip(first_down_crossing(x, line.arm), first_down_crossing(x, hold_on), strict=True)
    null, release = bracketed_root(both, np.stack(lows), np.stack(highs))
    # a link that is not pressed on its stop just behind the catch was never caught
    release = np.where(hold_on[..., 0] > 0.0, release, np.nan)
    return Events(catch, null, release, np.minimum(null, release) - machine.hold_margin)


@dataclass(frozen=True, slots=True)
class Cycle:
    """Figures of the whole mechanism, winding, frictionless, no shock factor. mm, N, N·mm, rad; shaped like the machines.

    ``*_at`` are the crank angles of the peaks. The largest loads are over 0 to the release.
    """

    events: Events
    first_peak: Floats
    first_peak_at: Floats
    second_peak: Floats
    second_peak_at: Floats
    middle_least: Floats
    middle_least_at: Floats
    pull_at_hold: Floats
    draw_at_hold: Floats
    most_pull: Floats
    stored_energy: Floats
    hold_torque: Floats
    mean_torque: Floats
    largest_tension: Floats
    largest_crank_pin: Floats
    largest_stop: Floats
    largest_link_bending: Floats
    largest_tension_at: Floats
    largest_crank_pin_at: Floats
    largest_stop_at: Floats
    largest_link_bending_at: Floats
    least_wrap: Floats
    most_wrap: Floats


def _span(low: Floats, high: Floats, cells: int) -> Floats:
    return np.asarray(low[..., None] + (high - low)[..., None] * np.linspace(0.0, 1.0, cells + 1))


# what is refined: name in State, from, to, factor; the windows are named by event
_PEAKS = (
    ("torque", "start", "catch", 1.0),
    ("torque", "catch", "end", 1.0),
    ("tension", "start", "release", 1.0),
    ("pin_force", "start", "release", 1.0),
    ("stop_force", "catch", "release", 1.0),
    ("link_bending", "catch", "release", 1.0),
    ("pull", "start", "release", 1.0),
    # the torque has a corner at the catch, so the least between the peaks is looked for on each side of it
    ("torque", "first", "catch", -1.0),
    ("torque", "catch", "second", -1.0),
)


def cycle(machine: Linkage) -> Cycle:
    """Events, peaks and largest loads of each machine. Machines that have no cycle come out as NaN."""
    corners = 1 if machine.spring.draws is None else len(machine.spring.draws)
    rows = max(1, CHUNK // (1 + corners // 16))  # a table of many corners takes its room too
    if machine.shape and machine.shape[0] > rows:
        return _in_chunks(machine, rows)
    with np.errstate(invalid="ignore"):
        return _cycle(machine)


def _cycle(machine: Linkage) -> Cycle:
    at = events(machine)
    zero = np.zeros(machine.shape)
    coarse = np.concatenate([_span(zero, at.catch, STAGE), _span(at.catch, at.release, STAGE)[..., 1:]], axis=-1)
    m, catch = machine.expanded(), at.catch[..., None]
    corners = _corners(m, catch, coarse)
    if corners.shape[-1]:
        coarse = np.sort(np.concatenate([coarse, np.minimum(corners, coarse[..., -1:])], axis=-1), axis=-1)
    rough = expanded_state(m, coarse, catch)
    ends = {"start": zero, "catch": at.catch, "end": at.first_end, "release": at.release}

    # rough places of the two peaks, between which the least lies
    ends["first"] = _highest(coarse, rough.torque, zero, at.catch)
    ends["second"] = _highest(coarse, rough.torque, at.catch, at.first_end)

    found = np.stack([factor * getattr(rough, name) for name, _, _, factor in _PEAKS], axis=-2)
    low, high = _best_cells(
        coarse[..., None, :],
        found,
        np.stack([ends[start] for _, start, _, _ in _PEAKS], -1),
        np.stack([ends[end] for _, _, end, _ in _PEAKS], -1),
    )
    # the two highest humps of each: which is the higher shows when both are refined
    place, height = refined_peak(lambda x: _chosen(m, catch, x), low, high)
    humps = (*height.shape[:-1], -1, len(_PEAKS))
    place, height = place.reshape(humps), height.reshape(humps)
    which = np.argmax(height, axis=-2)[..., None, :]
    place = np.take_along_axis(place, which, -2)[..., 0, :]
    height = np.take_along_axis(height, which, -2)[..., 0, :]
    lower = np.asarray(height[..., 8] > height[..., 7])[..., None] + np.array(7)

    hold = expanded_state(m, at.hold[..., None], catch)
    draw_at_hold = hold.draw[..., 0]
    energy = spring_energy(machine.spring, draw_at_hold)
    return Cycle(
        events=at,
        first_peak=height[..., 0], first_peak_at=place[..., 0], second_peak=height[..., 1], second_peak_at=place[..., 1],
        middle_least=-np.take_along_axis(height, lower, -1)[..., 0],
        middle_least_at=np.take_along_axis(place, lower, -1)[..., 0],
        pull_at_hold=hold.pull[..., 0], draw_at_hold=draw_at_hold, most_pull=height[..., 6], stored_energy=energy,
        hold_torque=hold.torque[..., 0], mean_torque=energy / machine.efficiency / at.hold,
        largest_tension=height[..., 2], largest_crank_pin=height[..., 3], largest_stop=height[..., 4],
        largest_link_bending=height[..., 5], largest_tension_at=place[..., 2], largest_crank_pin_at=place[..., 3],
        largest_stop_at=place[..., 4], largest_link_bending_at=place[..., 5],
        least_wrap=rough.wrap.min(-1), most_wrap=rough.wrap.max(-1),
    )  # fmt: skip


def _corners(m: Linkage, catch: Floats, x: Floats) -> Floats:
    """Crank angles (..., k) at which the slack is taken up or the draw passes a corner of the spring's table.

    Each level is passed upwards in the free stage, upwards in the seated stage and, with a link that seats late,
    downwards between; a passage that is not there comes out as 0. ``m`` and ``catch`` are expanded, ``x`` the samples.
    """
    knots = np.zeros(1) if m.spring.draws is None else m.spring.draws[:-1]
    if m.spring.draws is None and not np.any(m.slack > 0.0):
        return np.empty((*x.shape[:-1], 0))
    level = m.slack + knots
    pull = expanded_state(m, x, catch).pull[..., None, :]
    angles = np.broadcast_to(x[..., None, :], (*level.shape, x.shape[-1]))
    short = level[..., None] - pull
    ways = (
        first_down_crossing(angles[..., : STAGE + 1], short[..., : STAGE + 1]),
        first_down_crossing(angles[..., STAGE:], short[..., STAGE:]),
        first_down_crossing(angles, -short),
    )
    low, high = (np.concatenate([way[end] for way in ways], axis=-1) for end in (0, 1))
    levels = np.concatenate([level] * len(ways), axis=-1)
    places = bracketed_root(lambda t: levels - expanded_state(m, t, catch).pull, low, high)
    return np.nan_to_num(places, nan=0.0)


def _best_cells(x: Floats, f: Floats, start: Floats, end: Floats) -> tuple[Floats, Floats]:
    """The cells around the highest sample within [start, end] and around the next highest hump, cut off at its ends.

    ``f`` has shape (..., k, n); the ends of the cells come back as (..., 2k), the highest first, or as (..., k) where no
    next hump comes near the highest.
    """
    start, end = start[..., None], end[..., None]
    x = np.broadcast_to(x, f.shape)
    inside = (x >= start) & (x <= end)
    g = np.where(inside, f, -np.inf)
    edge = np.full((*g.shape[:-1], 1), -np.inf)
    hump = inside & (g >= np.concatenate([edge, g[..., :-1]], -1)) & (g >= np.concatenate([g[..., 1:], edge], -1))
    humps = np.where(hump, g, -np.inf)
    first = np.argmax(humps, axis=-1)[..., None]
    # an interval that lies between two samples has none inside: take the cell that holds it
    first = np.where(inside.any(-1, keepdims=True), first, np.argmax(x >= start, axis=-1)[..., None])
    here = np.arange(f.shape[-1])
    others = np.where(np.abs(here - first) > 1, humps, -np.inf)
    second = np.argmax(others, axis=-1)[..., None]
    second = np.where(np.isfinite(np.take_along_axis(others, second, -1)), second, first)
    # a hump this much lower than the best between samples that lie so close can not be the higher one
    rival = np.take_along_axis(g, second, -1) > np.take_along_axis(g, first, -1) - RIVAL * np.ptp(f, -1, keepdims=True)
    humps_worth = (first, second) if np.any(rival & (second != first)) else (first,)
    ends = []
    for index, side in ((-1, np.maximum), (1, np.minimum)):
        cut = start if index < 0 else end
        at = [np.take_along_axis(x, np.clip(i + index, 0, x.shape[-1] - 1), -1) for i in humps_worth]
        ends.append(np.concatenate([side(a, cut)[..., 0] for a in at], axis=-1))
    return ends[0], ends[1]


def _highest(x: Floats, f: Floats, start: Floats, end: Floats) -> Floats:
    inside = (x >= start[..., None]) & (x <= end[..., None])
    index = np.argmax(np.where(inside, f, -np.inf), axis=-1)[..., None]
    return np.take_along_axis(x, index, -1)[..., 0]


def _chosen(m: Linkage, catch: Floats, x: Floats) -> Floats:
    """Values at x (..., k or 2k, cuts): in each row the quantity that is looked for there, the k in turn."""
    s = expanded_state(m, x.reshape(*x.shape[:-2], -1), catch)
    found = {name: getattr(s, name).reshape(x.shape) for name in {row[0] for row in _PEAKS}}
    rows = [
        factor * found[name][..., row, :]
        for row, (name, _, _, factor) in enumerate(_PEAKS * (x.shape[-2] // len(_PEAKS)))
    ]
    return np.stack(rows, axis=-2)


def _in_chunks(machine: Linkage, rows: int) -> Cycle:
    parts = [cycle(machine.chunk(slice(i, i + rows))) for i in range(0, machine.shape[0], rows)]
    joined = {f.name: np.concatenate([getattr(p, f.name) for p in parts]) for f in fields(Cycle) if f.name != "events"}
    when = {f.name: np.concatenate([getattr(p.events, f.name) for p in parts]) for f in fields(Events)}
    return Cycle(events=Events(**when), **joined)


def corner_angles(machine: Linkage, figures: Cycle) -> Floats:
    """Crank angles (rad) of one design at which its spring or its slack makes a corner, 0 to the release."""
    at = figures.events
    x = np.concatenate([_span(np.zeros(()), at.catch, STAGE), _span(at.catch, at.release, STAGE)[1:]])
    angles = _corners(machine.expanded(), at.catch[..., None], x)
    return angles[(angles > 0.0) & (angles < float(at.release))]


def trace_angles(figures: Cycle, step: float = np.radians(0.5)) -> Floats:
    """Crank angles (rad) of one design's trace: each step from 0 to the release and each event, sorted, none twice."""
    at = figures.events
    end = float(at.release)
    steps = np.arange(0.0, end, step)
    marks = np.array(
        [figures.first_peak_at, figures.second_peak_at, figures.middle_least_at, at.catch, at.null, at.hold, end]
    )
    angles = np.sort(np.concatenate([steps, marks[(marks >= 0.0) & (marks <= end)]]))
    # two that print alike are one: the last is kept, so that the release is
    keep = np.asarray(np.diff(np.round(np.degrees(angles), 6), append=np.inf) > 0.0)
    return np.asarray(angles[keep])


def trace(machine: Linkage, figures: Cycle, step: float = np.radians(0.5)) -> State:
    """One design over crank angle; see ``trace_angles``."""
    return state(machine, trace_angles(figures, step), figures.events.catch)


def curves(machine: Linkage, figures: Cycle, step: float, names: Sequence[str]) -> tuple[Floats, dict[str, Floats]]:
    """Many machines over crank angle: the angles (n) and, for each name of ``State``, values of shape (..., n).

    The angles run from 0 to the last machine's release by ``step`` rad; behind its own release a machine has NaN.
    """
    last = float(np.nanmax(figures.events.release))
    theta = np.arange(0.0, last + step / 2.0, step)
    found = {name: np.empty((*machine.shape, len(theta))) for name in names}
    rows = [slice(None)] if not machine.shape else [slice(i, i + CHUNK) for i in range(0, machine.shape[0], CHUNK)]
    for some in rows:
        part = machine.chunk(some) if machine.shape else machine
        catch = np.asarray(figures.events.catch)[some] if machine.shape else figures.events.catch
        release = np.asarray(figures.events.release)[some] if machine.shape else figures.events.release
        x = np.broadcast_to(theta, (*part.shape, len(theta)))
        with np.errstate(invalid="ignore"):
            s = state(part, x, catch)
            beyond = x > np.asarray(release)[..., None]
        for name in names:
            found[name][some] = np.where(beyond, np.nan, getattr(s, name))
    return theta, found

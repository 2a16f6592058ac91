"""Bands of crank angle by what the machine does without its drive, for many machines at once.

Where the arm of the chain line about O beats the arms of friction the machine moves; both torques are the tension times
their arm, so the tension drops out, and with it the sheave's efficiency. Without tension nothing moves.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np

from loads.cycle import Events, events
from loads.linkage import Linkage, expanded_state, lift, seated_line
from loads.roots import bracketed_root, refined_peak
from loads.spring_law import SpringLaw
from parts.design import Floats

Fate = Literal["unwinds", "stays", "runs on"]
UNWINDS: Fate = "unwinds"
STAYS: Fate = "stays"
RUNS_ON: Fate = "runs on"

CELLS = 90  # a stage, in which sign changes are looked for
LEAST_WIDTH = 1e-9  # rad under which a band is rounding
LATEST = 0.5  # rad past the geometric release up to which friction is followed

_Function = Callable[[Floats], Floats]


@dataclass(frozen=True, slots=True)
class Stretch:
    """Crank angles (rad) that share a fate."""

    start: float
    end: float
    fate: Fate


def arms(m: Linkage, catch: Floats, theta: Floats) -> tuple[Floats, Floats]:
    """Arm of the chain line about O and of friction (mm): torque over tension, M/T and M_f/T.

    ``m`` and ``catch`` are expanded to meet the crank angles. M_f/T = μ_b ρ_b + μ ρ |1 − dφ/dθ|, the pin that of the
    crank while the link is free, that of the chain while it is seated. Source: Coulomb friction of a pin, common
    practice, no source.
    """
    arm, rub, _ = _looked_at(m, catch, theta)
    return arm, rub


def _looked_at(m: Linkage, catch: Floats, theta: Floats) -> tuple[Floats, Floats, Floats]:
    """Both arms and the pull (mm)."""
    s = expanded_state(m, theta, catch)
    pins = np.where(s.seated, m.friction_chain_pin, m.friction_crank_pin)
    return s.line.arm, np.asarray(m.friction_bearing + pins * np.abs(1.0 - s.line.turning)), s.pull


def idle_draw(spring: SpringLaw) -> float:
    """Draw (mm) up to which the spring pulls with nothing: the flat foot of a table, else 0."""
    if spring.draws is None or spring.forces is None:
        return 0.0
    idle = np.flatnonzero(spring.forces > 0.0)
    first = int(idle[0]) if len(idle) else len(spring.draws)
    return float(spring.draws[first - 1]) if first > 0 else 0.0


def release_with_friction(machine: Linkage, at: Events) -> Floats:
    """Crank angle (rad) at which the link leaves its stop against the friction of both pins.

    Past the geometric release the pull turns the link off its stop with T L sin α. Its two pins turn the same way as
    they did, under T each as nothing rests on the stop any more, and hold it back with T (μ_p ρ_A + μ_c ρ_B); it leaves
    where both are equal: −lift = (μ_p ρ_A + μ_c ρ_B)/L. Derived from moments about A; NaN where friction never lets go.
    """
    hold = (machine.friction_crank_pin + machine.friction_chain_pin) / machine.link_length

    def over(theta: Floats) -> Floats:
        return np.asarray(lift(machine, seated_line(machine, theta), theta) + hold)

    late = at.release + LATEST
    some = np.isfinite(late) & (over(np.nan_to_num(late)) < 0.0)
    return bracketed_root(over, np.where(some, at.release, np.nan), np.where(some, late, np.nan))


def stretches(machine: Linkage, at: Events) -> list[list[Stretch]]:
    """Every machine's bands from 0 to the release, in order, without gap or overlap; edges are bracketed roots.

    ``machine`` has one leading axis. A machine without a cycle has no bands.
    """
    m, catch = machine.expanded(), at.catch[..., None]
    zero = np.zeros(machine.shape)
    taken_up = (machine.slack + idle_draw(machine.spring))[..., None]

    def margins(x: Floats) -> Floats:
        """Over forwards and backwards motion and over slack, from crank angles (2, 3, ...): all roots in one go."""
        arm, rub, pull = _looked_at(m, catch, x)
        return np.stack([arm[:, 0] + rub[:, 0], arm[:, 1] - rub[:, 1], pull[:, 2] - taken_up], axis=1)

    # the catch itself belongs to the free stage
    low, high = np.stack([zero, np.nextafter(at.catch, np.inf)]), np.stack([at.catch, at.release])
    with np.errstate(invalid="ignore"):
        x = low[..., None] + (high - low)[..., None] * np.linspace(0.0, 1.0, CELLS + 1)
        roots = _roots(margins, np.repeat(x[:, None], 3, axis=1))
        edges = [zero[..., None], catch, at.release[..., None], *(row for stage in roots for row in stage)]
        nodes = np.sort(np.concatenate(edges, axis=-1), axis=-1)
        middle = (nodes[..., 1:] + nodes[..., :-1]) / 2.0
        arm, rub, pull = _looked_at(m, catch, middle)
        pulls = pull > taken_up
        sign = np.where(pulls & (arm > rub), 1, np.where(pulls & (arm < -rub), -1, 0))
    rows = range(machine.shape[0])
    return [_joined(nodes[i], sign[i]) if np.isfinite(at.release[i]) else [] for i in rows]


def _roots(function: _Function, x: Floats) -> Floats:
    """Roots (..., k) of a function over its samples' range (..., n), NaN where there are fewer; touching pairs too."""
    f = function(x)
    size = np.abs(f)
    # where it comes nearest to zero between samples of one sign it may cross twice: look there more closely
    near = (size[..., 1:-1] <= size[..., :-2]) & (size[..., 1:-1] <= size[..., 2:])
    near &= (f[..., 1:-1] * f[..., :-2] > 0.0) & (f[..., 1:-1] * f[..., 2:] > 0.0)
    if np.any(near):
        index = _first(near)
        kind = np.sign(np.take_along_axis(f, np.where(index < 0, 0, index + 1), -1))[..., None]

        def shallow(points: Floats) -> Floats:
            values = function(points.reshape(*points.shape[:-2], -1)).reshape(points.shape)
            return np.asarray(-kind * values)

        start, end = (np.take_along_axis(x, np.where(index < 0, 0, index + k), -1) for k in (0, 2))
        place, _ = refined_peak(shallow, start, end)
        x = np.sort(np.concatenate([x, np.where(index < 0, x[..., :1], place)], -1), -1)
        f = function(x)
    change = np.sign(f[..., :-1]) * np.sign(f[..., 1:]) <= 0.0
    index = _first(change)
    low, high = (np.take_along_axis(x, np.where(index < 0, 0, index + k), -1) for k in (0, 1))
    missing = index < 0
    return bracketed_root(function, np.where(missing, np.nan, low), np.where(missing, np.nan, high))


def _first(mask: np.ndarray[tuple[int, ...], np.dtype[np.bool_]]) -> np.ndarray[tuple[int, ...], np.dtype[np.intp]]:
    """Indices (..., k) of what is true along the last axis, −1 where a row has fewer than the fullest."""
    most = int(mask.sum(-1).max(initial=0))
    order = np.argsort(~mask, axis=-1, kind="stable")[..., :most]
    return np.where(np.take_along_axis(mask, order, -1), order, -1)


def _joined(nodes: Floats, sign: np.ndarray[tuple[int, ...], np.dtype[np.int_]]) -> list[Stretch]:
    """Neighbours of one fate joined; what is narrower than rounding goes to the band before it."""
    fates: dict[int, Fate] = {1: UNWINDS, 0: STAYS, -1: RUNS_ON}
    found: list[Stretch] = []
    nodes = nodes[np.isfinite(nodes)]
    for low, high, which in zip(nodes[:-1].tolist(), nodes[1:].tolist(), sign.tolist(), strict=False):
        fate = fates[which]
        if (high - low <= LEAST_WIDTH and found) or (high - low > LEAST_WIDTH and found and found[-1].fate == fate):
            found[-1] = replace(found[-1], end=high)
        elif high - low > LEAST_WIDTH:
            found.append(Stretch(found[-1].end if found else nodes[0].item(), high, fate))
    return found


@dataclass(frozen=True, slots=True)
class Outcome:
    """What the bands come to. Angles in rad; None where there is no such thing."""

    stretches: tuple[Stretch, ...]
    release: float  # against friction
    self_firing: tuple[float, float] | None  # from the null to where friction lets the link go
    fires_from: float | None  # where the spring drives it on against friction too

    @property
    def unwinds_to(self) -> float:
        """End of the last band that unwinds; 0 where none does."""
        return max((s.end for s in self.stretches if s.fate == UNWINDS), default=0.0)

    @property
    def middle(self) -> tuple[Stretch, ...]:
        """What lies between bands that unwind and does not."""
        first = min((s.start for s in self.stretches if s.fate == UNWINDS), default=0.0)
        return tuple(s for s in self.stretches if s.fate != UNWINDS and first < s.start and s.end <= self.unwinds_to)


def outcomes(machine: Linkage) -> tuple[Events, list[Outcome | None]]:
    """Events and bands of machines along one leading axis; None for one without a cycle."""
    at = events(machine)
    lets_go = release_with_friction(machine, at)
    found: list[Outcome | None] = []
    for i, rows in enumerate(stretches(machine, at)):
        if not rows or not np.isfinite(at.null[i]):
            found.append(None)
            continue
        release, null = float(lets_go[i]), float(at.null[i])
        last = rows[-1]
        fires = last.start if last.fate == RUNS_ON and last.start >= null - LEAST_WIDTH else None
        found.append(Outcome(tuple(rows), release, (null, release) if null < release else None, fires))
    return at, found

"""What a machine that is let go could coast through: energy against angle, with no losses but its joints' friction.

The most that can happen: no loss on the sheave, none in the drive, none where the stop takes or leaves the link, the
link in line with a taut chain. Behind θ = 0 the link is free until it meets the back of its stop, and seated there from
then on. mm, N, N·mm, rad, kg, kg·mm².
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from loads.cycle import Cycle, corner_angles
from loads.inertia import Inertia
from loads.linkage import Linkage, State, free_line, state
from loads.roots import bracketed_root, first_down_crossing
from loads.spring_law import spring_energy
from parts.design import Floats

CELL = math.radians(2.0)
_POINTS, _WEIGHTS = (np.asarray(a, dtype=np.float64) for a in np.polynomial.legendre.leggauss(5))
WORK = 1000.0  # kg·mm²/s² in a N·mm
TURNS_BACK, FIRES, IN_REVERSE, UNKNOWN = "turns back", "fires", "fires in reverse", "beyond what can be told"

LEAST_INERTIA = 1e-9  # kg·mm²


@dataclass(frozen=True, slots=True)
class Coast:
    """One machine let go at ``start``. Angles in rad, energies N·mm, speed rad/s."""

    start: float
    end: float | None  # where it first stands still; None where it does not
    how: str  # TURNS_BACK, FIRES, IN_REVERSE or UNKNOWN
    kinetic_at_start: float | None  # as it passes θ = 0; None where it does not
    speed: float  # the fastest, of the disc without its drive
    speed_at: float
    speed_with_drive: float | None  # the fastest while the drive turns with it


@dataclass(frozen=True)
class Path:
    """Energies over the crank angles that a machine could coast through; ``machine`` has no losses on its sheave."""

    machine: Linkage
    behind: Linkage  # the same with the link on the back of its stop
    figures: Cycle
    inertia: Inertia
    back_contact: float  # rad, below 0
    last: float  # where friction lets the link go at the end, or the release

    def state(self, theta: Floats) -> State:
        """Forwards of the back contact; behind it see ``_both``."""
        return state(self.machine, theta, self.figures.events.catch)

    def _both(self, theta: Floats) -> tuple[Floats, Floats, Floats, Floats, Floats]:
        """Spring energy, friction torque, torque, and the inertia's link angle and rate, at crank angles (n)."""
        front, back = self.state(theta), state(self.behind, theta, np.asarray(-np.inf))
        on_back = theta < self.back_contact

        def pick(a: Floats, b: Floats) -> Floats:
            return np.where(on_back, b, a)

        energy = spring_energy(self.machine.spring, pick(front.draw, back.draw))
        rate = np.where(front.seated | on_back, 1.0, front.line.turning)
        return (
            energy, pick(front.friction_torque, back.friction_torque), pick(front.torque, back.torque),
            pick(front.link_angle, back.link_angle), rate,
        )  # fmt: skip

    @cached_property
    def nodes(self) -> Floats:
        """Crank angles (n) between which everything is smooth, but for corners of a spring's table behind θ = 0."""
        at, first = self.figures.events, -2.0 * math.pi
        steps = np.arange(math.ceil(first / CELL), math.floor(self.last / CELL) + 1) * CELL
        free = np.linspace(self.back_contact, 0.0, 91)
        slack = self.machine.slack - self.state(free).pull
        taut = bracketed_root(
            lambda t: self.machine.slack - state(self.machine, t[None], at.catch).pull[0],
            *first_down_crossing(free[::-1], slack[::-1]),
        )
        marks = [
            0.0,
            self.back_contact,
            float(at.catch),
            np.nextafter(float(at.catch), np.inf),
            float(at.null),
            self.last,
        ]
        marks += [float(taut)] if np.isfinite(taut) else []
        nodes = np.unique(np.concatenate([steps, corner_angles(self.machine, self.figures), marks]))
        nodes = nodes[(nodes <= self.last) & (nodes >= first)]
        known = np.isfinite(self._both(nodes)[0])
        gaps = np.flatnonzero(~known & (nodes < 0.0))
        return nodes[gaps[-1] + 1 :] if len(gaps) else nodes

    @cached_property
    def energy(self) -> Floats:
        return self._both(self.nodes)[0]

    @cached_property
    def rubbed(self) -> Floats:
        """Work of friction from the first node on (N·mm), Gauss quadrature cell by cell."""
        low, high = self.nodes[:-1, None], self.nodes[1:, None]
        x = (low + high) / 2.0 + (high - low) / 2.0 * _POINTS
        torque = self._both(x.ravel())[1].reshape(x.shape)
        work = (torque * _WEIGHTS).sum(-1) * (high - low)[:, 0] / 2.0
        return np.concatenate([[0.0], np.cumsum(work)])

    @cached_property
    def _inertia(self) -> Floats:
        _, _, _, angle, rate = self._both(self.nodes)
        return self.inertia.about_disc(float(self.machine.crank_radius), angle, rate)

    def level(self, theta: float) -> tuple[float, float]:
        """Spring energy at a crank angle and the work of friction up to it (N·mm)."""
        i = int(np.clip(np.searchsorted(self.nodes, theta, side="right") - 1, 0, len(self.nodes) - 2))
        half = (theta - float(self.nodes[i])) / 2.0
        x = np.concatenate([float(self.nodes[i]) + half + half * _POINTS, [theta]])
        energy, torque, *_ = self._both(x)
        return float(energy[-1]), float(self.rubbed[i] + (torque[:-1] * _WEIGHTS).sum() * half)

    def kinetic(self, start: float, theta: float) -> float:
        """Kinetic energy (N·mm) at ``theta`` of a machine let go at ``start``, below 0 where it does not get there."""
        return self._left(self.level(start), theta)

    def _left(self, level: tuple[float, float], theta: float) -> float:
        energy, work = self.level(theta)
        return level[0] - energy - abs(work - level[1])

    def coast(self, start: float, forwards: bool) -> Coast:
        """Let go at a crank angle (rad) from which the spring drives it that way."""
        begin = self.level(start)
        way = 1.0 if forwards else -1.0
        ahead = np.flatnonzero(way * (self.nodes - start) > 0.0)
        ahead = ahead if forwards else ahead[::-1]
        kinetic = begin[0] - self.energy[ahead] - np.abs(self.rubbed[ahead] - begin[1])
        # the first cell may be too short to tell rounding from a stop
        over = np.flatnonzero((kinetic < 0.0) & (np.abs(self.nodes[ahead] - start) > 1e-6))
        end: float | None = None
        how = FIRES if forwards else self._unbounded
        run = ahead
        if len(over):
            j = int(over[0])
            before = float(self.nodes[ahead[j - 1]]) if j else start
            low, high = np.array([before]), np.array([float(self.nodes[ahead[j]])])
            end = float(bracketed_root(lambda t: np.array([self._left(begin, float(t[0]))]), low, high, 1e-10)[0])
            how, run = TURNS_BACK, ahead[:j]
        reached = self.nodes[run]
        twice, turning = 2.0 * WORK * np.maximum(kinetic[: len(run)], 0.0), self._inertia[run]
        turning = np.maximum(turning, LEAST_INERTIA)  # holes larger than their disc fall short, they do not crash
        speeds, drive = np.sqrt(twice / turning), self.inertia.drive
        fastest = int(np.argmax(speeds)) if len(run) else -1
        passes = not forwards and (end is None or end < 0.0) and bool(np.any(reached <= 0.0))
        return Coast(
            start, end, how, self.kinetic(start, 0.0) if passes else None,
            float(speeds[fastest]) if len(run) else 0.0, float(reached[fastest]) if len(run) else start,
            None if drive is None else float(np.sqrt(twice / (turning + drive)).max(initial=0.0)),
        )  # fmt: skip

    @property
    def _unbounded(self) -> str:
        """What lies where a coasting machine never stood still."""
        _, _, torque, *_ = self._both(self.nodes)
        reversed_null = np.any((torque > 0.0) & (self.nodes < self.back_contact))
        return IN_REVERSE if reversed_null else UNKNOWN


def make_path(machine: Linkage, figures: Cycle, inertia: Inertia, back_seat: float, last: float) -> Path:
    """Of one machine; ``back_seat`` is the link angle (rad) at which the link meets the back of its stop."""
    at = figures.events

    def room(theta: Floats) -> Floats:
        return np.asarray(back_seat - (math.pi + free_line(machine, theta).direction - theta))

    grid = np.linspace(0.0, -1.5 * math.pi, 109)
    m = machine.expanded()
    free = back_seat - (math.pi + free_line(m, grid).direction - grid)
    contact = float(bracketed_root(room, *first_down_crossing(grid, free)))
    lossless = replace(machine, efficiency=np.ones(machine.shape))
    end = last if math.isfinite(last) else float(at.release)
    behind = replace(lossless, seat_angle=np.asarray(back_seat))
    return Path(lossless, behind, figures, inertia, contact if math.isfinite(contact) else -math.inf, end)

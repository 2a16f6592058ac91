"""The release run through time, with its energy kept account of. mm, s, tonne, N, rad.

Between events (payload leaves, mass caught) the motion is integrated by a Runge-Kutta method of order 8 (Dormand and
Prince); contacts are stiff springs, so that every force can be read off.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from loads.release.lift_off import lets_go
from loads.release.scene import SOLID, Forces, Motion, Scene, forces, stored
from parts.design import Floats

REL, ABS = 1e-7, 1e-8
LONGEST_STEP = 1e-3  # s
LONGEST = 1.5  # s that are looked at
MOST_TURN = math.radians(90.0)  # by which the disc may have gone on
SAMPLES = 8  # moments a step that are kept, so that a peak between two steps of the integration is not missed
WEAK = 0.25  # of the pull at the start: no later pull can be this strong once the motion has settled without a snatch
WEAK_TORQUE = 0.5  # the same of the torque, of the pull at the start times the crank radius
NOTHING = 2e-3  # of the stored energy: with that left it is at rest
PATIENCE = 3.0  # times as long as the pull took to calm down is waited for a greater torque
MOST_EVALUATIONS = 70_000
LOST_COUNT = 1e-3  # of the stored energy, that the account may be out by


class NoStart(ValueError):
    """The release with a still disc is an unstable balance: it has no motion of its own."""


@dataclass(frozen=True)
class Course:
    """The motion at every step of the integration, shapes (n); ``settled`` tells whether the snatch is over."""

    time: Floats
    theta: Floats
    psi: Floats
    psi_rate: Floats
    draw: Floats
    draw_rate: Floats
    forces: dict[str, Floats]  # every field of ``Forces``
    stored_at_start: float
    given_to_payload: float  # kinetic energy when it leaves
    payload_speed: float | None
    payload_time: float | None
    straight: float | None  # time at which the link first points along the line
    slack_first: float | None  # time at which the line first goes slack
    settled: bool  # no later pull of the line can be stronger
    left_over: float  # energy of motion at the end, over what was stored
    energy_error: float  # over what was stored

    @property
    def sound(self) -> bool:
        """Whether its numbers may be given at all."""
        return self.settled and self.energy_error <= LOST_COUNT

    @property
    def turn(self) -> float:
        """Time at which the swing ends and the snatch begins: the first slack or the straight link; else its last moment."""
        return min((t for t in (self.slack_first, self.straight) if t is not None), default=float(self.time[-1]))


def start(k: Scene) -> Motion:
    """The link on its stop, carried round by the disc; the line stretched until it holds the spring."""
    psi = k.theta + math.pi + k.front
    r, length = k.crank_radius, k.link_length
    bx = r * math.cos(k.theta) + length * math.cos(psi)
    by = r * math.sin(k.theta) + length * math.sin(psi)
    pull = float(k.far.line(r, bx, by, 0.0, length).pull) - k.slack  # type: ignore[arg-type]
    weight = (k.weighing + k.payload) * k.gravity
    # by bisection, as the line may be softer than the spring
    low, high = pull - (k.spring(pull) + abs(weight)) / k.stiffness, pull
    for _ in range(80):
        draw = (low + high) / 2.0
        held = k.stiffness * (pull - draw) >= k.spring(draw) + weight
        low, high = (draw, high) if held else (low, draw)
    draw = (low + high) / 2.0
    return Motion(psi, k.speed, draw, 0.0, 0.0, 0.0)


def simulate(k: Scene) -> Course:
    """The whole release of a scene. Raises ``NoStart`` where the disc stands still."""
    if k.speed <= 0.0:
        raise NoStart
    rubs = k.pin_friction + k.chain_pin_friction
    k = replace(k, theta=lets_go(k.far, k.crank_radius, k.link_length, k.front, k.theta, rubs))
    first = start(k)
    energy = stored(k, 0.0, first, k.payload)
    run = _Run(k, max(k.spring_work(first.draw), 1e-9))
    run.go(first)
    return run.course(energy)


class _Run:
    """One simulation under way."""

    def __init__(self, k: Scene, held: float) -> None:
        self.k, self.held = k, held
        self.times: list[float] = []
        self.rows: list[Motion] = []
        self.kept: list[Forces] = []
        self.payload, self.caught = k.payload, False
        self.given, self.payload_speed, self.payload_time = 0.0, None, None
        self.taken = 0.0  # energy of a mass that something else has caught
        self.end = min(LONGEST, MOST_TURN / k.speed)
        self.evaluations = 0
        self.over = False
        self.turned = False  # the line has gone slack, or the link straight: what comes now is the snatch
        self.most_pull = self.most_torque = self.weak = 0.0
        self.calm, self.calm_at = False, 0.0
        self.rest, self.rest_pull = 0.0, 0.0

    payload_speed: float | None
    payload_time: float | None

    def go(self, y: Motion) -> None:
        """From event to event until it has settled or the time is up."""
        from scipy.integrate import DOP853

        t = 0.0
        self._keep(t, y)
        self.weak = WEAK * abs(self.kept[0].line)
        self.rest, self.rest_pull = at_rest(self.k, self.payload)
        while t < self.end and not self.over:
            solver = DOP853(
                self._slope, t, np.array(y), self.end, rtol=REL, atol=ABS, max_step=LONGEST_STEP, vectorized=False
            )
            event: str | None = None
            while solver.status == "running" and event is None and not self.over:
                before = Motion(*solver.y)
                solver.step()
                if solver.status == "failed" or self.evaluations > MOST_EVALUATIONS:
                    return
                t, y = float(solver.t), Motion(*(float(v) for v in solver.y))
                event = self._event(before, y)
                if event is not None:
                    t, y = self._back_to(event, solver, t)
                self._keep_up_to(t, y, solver)
                self.caught = self.caught and y.draw_rate == 0.0  # else the line has pulled it off
                self.over = event is None and self._rests(t, y)
            if event is not None:
                y = self._take(event, t, y)
            elif solver.status == "finished":
                return

    def _slope(self, t: float, y: Floats) -> list[float]:
        self.evaluations += 1
        m = Motion(*y)
        f = forces(self.k, t, m, self.payload, self.caught)
        return [m.psi_rate, f.psi_turn, m.draw_rate, f.draw_turn, f.drive_power, f.loss]

    def _levels(self) -> dict[str, float]:
        """Draws at which something happens when the mass comes down to them."""
        found = {}
        if self.payload > 0.0:
            found["payload"] = self.k.leaves_at
        if self.k.caught_at is not None and not self.caught:
            found["caught"] = self.k.caught_at
        return found

    def _event(self, before: Motion, after: Motion) -> str | None:
        levels = self._levels()
        passed = [(level, name) for name, level in levels.items() if before.draw > level >= after.draw]
        # a mass that has come to the level already, as the payload left just there
        here = before.draw <= levels.get("caught", -math.inf) and after.draw_rate < 0.0
        passed += [(before.draw, "caught")] if here else []
        return max(passed)[1] if passed else None

    def _back_to(self, event: str, solver: object, t: float) -> tuple[float, Motion]:
        """The moment within the last step at which the draw passes the event's level."""
        level = self._levels()[event]
        if float(solver.y_old[2]) <= level:  # type: ignore[attr-defined]
            return float(solver.t_old), Motion(*(float(v) for v in solver.y_old))  # type: ignore[attr-defined]
        between: Callable[[float], Floats] = solver.dense_output()  # type: ignore[attr-defined]
        low, high = float(solver.t_old), t  # type: ignore[attr-defined]
        for _ in range(60):
            middle = (low + high) / 2.0
            low, high = (middle, high) if float(between(middle)[2]) > level else (low, middle)
        return high, Motion(*(float(v) for v in between(high)))

    def _take(self, event: str, t: float, y: Motion) -> Motion:
        if event == "payload":
            self.given = self.payload * y.draw_rate**2 / 2.0 + self.payload * self.k.gravity * y.draw
            self.payload_speed, self.payload_time = abs(y.draw_rate), t
            self.payload = 0.0
            self.rest, self.rest_pull = at_rest(self.k, 0.0)
            return y
        self.caught = True
        self.taken += (self.k.mass + self.payload) * y.draw_rate**2 / 2.0
        return y._replace(draw_rate=0.0)

    def _keep(self, t: float, y: Motion) -> None:
        self.times.append(t)
        self.rows.append(y)
        self.kept.append(forces(self.k, t, y, self.payload, self.caught))
        self._look()

    def _keep_up_to(self, t: float, y: Motion, solver: object) -> None:
        """Moments within the last step, then its end."""
        between: Callable[[float], Floats] = solver.dense_output()  # type: ignore[attr-defined]
        since, quiet = self.times[-1], self._slack(self.kept[-1])
        # while the line is slack and the stop not touched there is no peak to be missed
        quiet = quiet and self._slack(forces(self.k, t, y, self.payload, self.caught))
        for i in range(1, SAMPLES if t > since and not quiet else 1):
            at = since + (t - since) * i / SAMPLES
            self._keep(at, Motion(*(float(v) for v in between(at))))
        self._keep(t, y)

    def _slack(self, f: Forces) -> bool:
        return f.line == 0.0 and f.stop == 0.0

    def _motion(self, y: Motion) -> float:
        """Energy of what moves against the disc and of what is stretched or pressed, beyond where it all rests."""
        k = self.k
        stretch = self.kept[-1].stretch
        left = k.inertia * (y.psi_rate - k.speed) ** 2 / 2.0
        left += k.stiffness * (stretch if k.pushes else max(0.0, stretch)) ** 2 / 2.0
        if self.caught:
            return left
        left += (k.mass + self.payload) * y.draw_rate**2 / 2.0 + held_at(k, y.draw, self.payload)
        return max(0.0, left - self.rest)

    def _rests(self, t: float, y: Motion) -> bool:
        """Whether nothing stronger can come: all the energy that is left would stretch the line less far than it has been
        in the snatch, or not far at all. ``calm`` tells it of the pull; the torque of a later pull on a longer arm, as the
        disc goes on, is waited for three times as long."""
        k, left = self.k, self._motion(y)
        if left < NOTHING * self.held:
            self.calm = True
            return True
        reach = (0.0 if self.caught else self.rest_pull) + math.sqrt(2.0 * k.stiffness * left)
        if not self.calm and self.turned and reach < max(self.most_pull, self.weak):
            self.calm, self.calm_at = True, t
        arm = k.crank_radius
        if self.calm and t > PATIENCE * self.calm_at:
            return True
        return self.calm and reach * arm < max(self.most_torque, WEAK_TORQUE * abs(self.kept[0].line) * arm)

    def _look(self) -> None:
        """Whether the snatch has begun, and its greatest pull and torque so far."""
        f = self.kept[-1]
        if not self.turned:
            slack = not self.k.pushes and f.line <= 0.0
            self.turned = slack or abs(self._swung(-1) - self._swung(0)) >= math.pi
            return
        self.most_pull = max(self.most_pull, abs(f.line))
        self.most_torque = max(self.most_torque, abs(f.torque))

    def _swung(self, i: int) -> float:
        """Angle (rad) of the link against the line: folded back at the start, and half a turn further straight."""
        return self.rows[i].psi - math.atan2(self.kept[i].uy, self.kept[i].ux)

    def course(self, energy: float) -> Course:
        k, rows = self.k, self.rows
        arrays = {name: np.array([getattr(r, name) for r in rows]) for name in Motion._fields}
        kept = {name: np.array([getattr(f, name) for f in self.kept]) for name in Forces._fields}
        time = np.array(self.times)
        last = rows[-1]
        now = stored(k, float(time[-1]), last, self.payload)
        error = abs(now + self.given + self.taken + last.lost - last.driven - energy) / self.held
        swung = arrays["psi"] - np.arctan2(kept["uy"], kept["ux"])
        return Course(
            time=time, theta=k.theta + k.speed * time, psi=arrays["psi"], psi_rate=arrays["psi_rate"],
            draw=arrays["draw"], draw_rate=arrays["draw_rate"], forces=kept, stored_at_start=self.held,
            given_to_payload=self.given, payload_speed=self.payload_speed, payload_time=self.payload_time,
            straight=_first(time, np.abs(swung - swung[0]) - math.pi),
            slack_first=None if k.pushes else _first(time, np.where(kept["line"] > 0.0, -1.0, 0.0)),
            settled=self.calm,
            left_over=self._motion(last) / self.held, energy_error=error,
        )  # fmt: skip


def _first(time: Floats, value: Floats) -> float | None:
    """The moment at which a value first reaches 0, straight on between two moments."""
    at = np.flatnonzero(value >= 0.0)
    if not at.size:
        return None
    i = int(at[0])
    if i == 0 or value[i] == value[i - 1]:
        return float(time[i])
    return float(time[i] - value[i] * (time[i] - time[i - 1]) / (value[i] - value[i - 1]))


def held_at(k: Scene, draw: float, payload: float) -> float:
    """Energy (N·mm) of spring, weight and bumper with the mass at a draw."""
    into = max(0.0, k.bumper_travel - draw) if k.bumper > 0.0 else 0.0
    solid = SOLID * max(0.0, -draw) ** 2 if k.bumper > 0.0 else 0.0
    return k.spring_work(draw) + (k.weighing + payload) * k.gravity * draw + k.bumper * (into**2 + solid) / 2.0


def at_rest(k: Scene, payload: float) -> tuple[float, float]:
    """Energy (N·mm) and pull of the line (N) of a mass that has come to rest on bumper or straight link."""
    weight = (k.weighing + payload) * k.gravity

    def outwards(x: float) -> float:
        push = k.bumper * (max(0.0, k.bumper_travel - x) + SOLID * max(0.0, -x)) if k.bumper > 0.0 else 0.0
        return push + k.stiffness * max(0.0, -k.slack - x) - k.spring(x) - weight

    high = start(k).draw
    low = -k.slack - (k.spring(0.0) + abs(weight)) / k.stiffness - 1.0
    if k.caught_at is not None:
        low = max(low, k.caught_at)
    for _ in range(60):
        middle = (low + high) / 2.0
        low, high = (middle, high) if outwards(middle) > 0.0 else (low, middle)
    stretch = max(0.0, -k.slack - high)
    return held_at(k, high, payload) + k.stiffness * stretch**2 / 2.0, k.stiffness * stretch

"""Chain, rope or webbing beyond its strength: length (a chain's in whole pitches), wear, speed, what slack does.

The adjustment table lets someone tune the machine by pitches or by a thread: every row is the same machine with another
slack, all solved in one call of the cycle, slack along the leading axis. mm, N, N·mm, rad.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from loads.cycle import Cycle, cycle
from loads.lines import SheaveRun
from loads.linkage import Linkage
from loads.members import History
from parts.design import Design
from parts.far_ends.base import FarEnd
from parts.far_ends.chain import Chain
from parts.sizes import Sizes

DISCARD = 0.03  # elongation at which a chain is taken off; common practice, no source
LIFTING_SPEED = 500.0  # mm/s, 30 m/min: speed up to which leaf chains lift; common practice, no source
BY_DESIGN, BY_WEAR, BY_THREAD = "as designed", "worn by 3 %", "thread of the anchor"
BY_PITCHES = "links"  # a pair of pitches: an inner and an outer link
BY_ONE_PITCH = {"roller": "offset link or the other end fitting", "leaf": "the other end fitting"}
THREAD_STEP, THREAD_STEPS = 5.0, 4  # mm a step of the thread where there are no pitches, and steps each way
PITCHES, QUARTERS = 4, 4  # pitches that the table goes up and down; steps into which the thread divides the first


@dataclass(frozen=True, slots=True)
class Adjustment:
    """One slack and what the machine does with it. ``pitches`` is the whole chain's, where its length is known."""

    slack: float
    by: str
    pitches: int | None
    draw_at_hold: float
    stored_energy: float
    first_peak: float
    second_peak: float
    middle_least: float
    hold_torque: float
    hold_margin: float  # to the first of null and release; slack does not move either
    largest_tension: float


@dataclass(frozen=True, slots=True)
class ChainStudy:
    """Lengths at the start dead centre, between first and last pin, taut. What goes by pitches is None without them."""

    pitch: float | None
    straight: float  # from the chain's first pin to the sheave
    on_sheave: float
    run_to_spring: float | None
    angle_per_link: float | None  # between two pins that lie on the sheave; None where a link is longer than it is wide
    sheave_in_pitches: float | None  # pitch radius over pitch
    most_reach: float  # mm of chain a rad of the disc, at the fastest while it winds
    most_reach_at: float
    release_reach: float
    disc_speed: float | None  # rad/s
    rows: tuple[Adjustment, ...]

    @property
    def up_to_sheave(self) -> float:
        return self.straight + self.on_sheave

    @property
    def taut_length(self) -> float | None:
        return None if self.run_to_spring is None else self.up_to_sheave + self.run_to_spring

    @property
    def whole_pitches(self) -> int | None:
        """The least number of pitches that is long enough."""
        return None if self.taut_length is None or self.pitch is None else whole(self.taut_length, self.pitch)

    @property
    def slack_of_whole(self) -> float | None:
        """What the least number of pitches leaves over."""
        if self.taut_length is None or self.whole_pitches is None or self.pitch is None:
            return None
        return max(0.0, self.whole_pitches * self.pitch - self.taut_length)

    @property
    def wear(self) -> float:
        """What 3 % of the chain, or of its known part, comes to; nothing for what is not discarded by its length."""
        if self.pitch is None:
            return 0.0
        return DISCARD * (self.up_to_sheave if self.taut_length is None else self.taut_length)

    @property
    def limit_disc_speed(self) -> float:
        """Disc speed (rad/s) at which the winding chain reaches the speed of lifting; infinite where it never moves taut."""
        return LIFTING_SPEED / self.most_reach if self.most_reach > 0.0 else math.inf

    def row(self, by: str) -> Adjustment | None:
        return next((row for row in self.rows if row.by == by), None)


def whole(length: float, pitch: float) -> int:
    """Pitches that it takes to be as long as ``length``, to a rounding's width."""
    return math.ceil(length / pitch - 1e-9)


def angle_per_link(pitch: float, radius: float) -> float | None:
    """Angle (rad) that a link turns in its joints when it runs on the sheave: 2 asin(p / 2R), chord of the pitch circle.

    ``pitch`` and pitch radius in mm; None where the chord does not fit into the circle. Source: geometry.

    >>> round(math.degrees(angle_per_link(10.0, 10.0) or 0.0), 6)
    60.0
    """
    return 2.0 * math.asin(pitch / (2.0 * radius)) if pitch <= 2.0 * radius else None


def chain_study(design: Design, machine: Linkage, figures: Cycle, past: History, sizes: Sizes) -> ChainStudy | None:
    """Length, speed and bending of what runs over a design's sheave, and its adjustment table; None without a sheave."""
    chain, m, run = design.far_end, design.mechanism, machine.far
    if not isinstance(run, SheaveRun):
        return None
    radius, pitch = float(run.pitch_radius), chain.grain
    straight = float(run.distance) - m.crank_radius - m.link_length - sizes.chain_end.length
    taut = past.winding.pull >= chain.slack
    reach = np.where(taut, np.abs(past.winding.line.arm), 0.0)
    fastest = int(np.argmax(reach))
    study = ChainStudy(
        pitch=pitch, straight=straight, on_sheave=radius * float(run.start_wrap),
        run_to_spring=chain.run_to_spring, angle_per_link=None if pitch is None else angle_per_link(pitch, radius),
        sheave_in_pitches=None if pitch is None else radius / pitch, most_reach=float(reach[fastest]),
        most_reach_at=float(past.winding.crank_angle[fastest]), release_reach=float(reach[-1]),
        disc_speed=None if design.moving is None else design.moving.disc_speed, rows=(),
    )  # fmt: skip
    steps = slack_steps(chain, study, float(figures.pull_at_hold), least_slack(machine, figures))
    return replace(study, rows=adjustments(machine, steps, m.hold_margin))


def least_slack(machine: Linkage, figures: Cycle) -> float:
    """The least slack (mm) at which the spring's table still tells of the largest draw."""
    return max(0.0, float(figures.most_pull) - machine.spring.last_draw)


def slack_steps(chain: FarEnd, study: ChainStudy, pull: float, least: float) -> list[tuple[float, str, int | None]]:
    """Slack, what it is set by, and the chain's pitches; rising, each once, between ``least`` and the pull at the hold.

    Where the length is known the chain has whole pitches and the steps are what those leave; else they count from the
    slack that the design gives. A chain of the same ends changes by two pitches, an inner and an outer link; by one with
    an offset link (roller chain) or with the other kind of fitting at one end.
    """
    p, given = chain.grain, chain.slack
    found: list[tuple[float, str, int | None]] = [(given, BY_DESIGN, None)]
    if p is None:  # cut to length: a thread sets it
        found += [(given + k * THREAD_STEP, BY_THREAD, None) for k in range(-THREAD_STEPS, THREAD_STEPS + 1)]
        return _kept(found, pull, least)
    single = BY_ONE_PITCH[chain.kind] if isinstance(chain, Chain) else ""
    found.append((given + study.wear, BY_WEAR, None))
    if study.taut_length is not None and study.whole_pitches is not None:
        first = study.whole_pitches
        base = first * p - study.taut_length
        found += [(base + k * p, BY_PITCHES if k % 2 == 0 else single, first + k) for k in range(PITCHES + 1)]
    else:
        found += [(given + k * p, BY_PITCHES if k % 2 == 0 else single, None) for k in range(-PITCHES, PITCHES + 1)]
    found += [(given + k * p / QUARTERS, BY_THREAD, None) for k in range(-QUARTERS + 1, QUARTERS)]
    return _kept(found, pull, least)


def _kept(found: list[tuple[float, str, int | None]], pull: float, least: float) -> list[tuple[float, str, int | None]]:
    """Rising, each once, within what the spring's table tells and what the hold still draws."""
    kept: dict[float, tuple[float, str, int | None]] = {}
    for slack, by, pitches in found:
        key = round(max(slack, 0.0), 6)
        if slack > -1e-9 and least - 1e-9 <= slack < pull - 1e-9:
            before = kept.get(key)
            if before is None:
                kept[key] = (max(slack, 0.0), by, pitches)
            elif before[2] is None and pitches is not None:
                kept[key] = (before[0], before[1], pitches)
    return [kept[key] for key in sorted(kept)]


def adjustments(
    machine: Linkage, steps: list[tuple[float, str, int | None]], hold_margin: float
) -> tuple[Adjustment, ...]:
    """The machine at every slack, in one call of the cycle."""
    if not steps:
        return ()
    slacks = np.array([slack for slack, _, _ in steps])
    c = cycle(replace(machine.copies(slacks.shape), slack=slacks))
    return tuple(
        Adjustment(
            slack, by, pitches, float(c.draw_at_hold[i]), float(c.stored_energy[i]), float(c.first_peak[i]),
            float(c.second_peak[i]), float(c.middle_least[i]), float(c.hold_torque[i]), hold_margin,
            float(c.largest_tension[i]),
        )
        for i, (slack, by, pitches) in enumerate(steps)
    )  # fmt: skip

"""The seat angle: the least that unwinds, what it costs at the end, which one to take, and shims that set it.

Searches go over the seat angle as one leading axis of the same machine. Angles in rad, lengths in mm.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np

from loads.cycle import Events, events
from loads.linkage import Linkage, expanded_state
from loads.power_loss.bands import Outcome, arms, outcomes, release_with_friction
from loads.roots import bracketed_root, first_down_crossing, refined_peak
from loads.spring_law import SpringLaw, spring_energy
from parts.design import Floats

# rules of our own: common practice, no source
SCATTER = 1.5  # by which the joints' friction may be worse than taken
SETTING = math.radians(0.5)  # a seat angle above the least, for play and for setting it
GRAIN = math.radians(0.25)  # to which a recommended seat angle is rounded up
MOST_GIVEN = 0.02  # of the energy at the null, what the spring may give the disc before the link lets go

FROM, TO, STEP = math.radians(-3.0), math.radians(5.0), math.radians(1.0)  # of the table, unless it has to be wider
STEEPEST = math.radians(20.0)  # to which the least seat angle is looked for
COARSE = 30  # cells a stage in which the least is looked for
AS_DESIGNED, LEAST, RECOMMENDED = "as designed", "least", "recommended"


def with_seat(machine: Linkage, seats: Floats, friction: Floats | float = 1.0) -> Linkage:
    """One machine with many seat angles, its joints' friction taken so many times."""
    many = machine.copies(seats.shape)
    return replace(
        many, seat_angle=seats, friction_bearing=many.friction_bearing * friction,
        friction_crank_pin=many.friction_crank_pin * friction, friction_chain_pin=many.friction_chain_pin * friction,
    )  # fmt: skip


def middle_clearance(machine: Linkage) -> Floats:
    """Least by which the chain line's arm beats friction's between the two humps of the torque (mm), one a machine.

    Below zero the machine has a place in the middle from which it does not unwind. For a far sheave it is
    r sin β − μ_b ρ_b − max(μ_p ρ_A, μ_c ρ_B), at the catch. ``machine`` has one leading axis; NaN without a cycle.
    """
    at = events(machine)
    m, catch = machine.expanded(), at.catch[..., None]

    def short(x: Floats) -> Floats:
        arm, rub = arms(m, catch, x.reshape(*x.shape[:-2], -1))
        return np.asarray(rub - arm).reshape(x.shape)

    # the free stage and the seated one
    low = np.stack([np.zeros(machine.shape), np.nextafter(at.catch, np.inf)])
    high = np.stack([at.catch, at.first_end])
    order, free = np.arange(COARSE + 1), np.array([True, False]).reshape(2, *[1] * (at.catch.ndim + 1))
    with np.errstate(invalid="ignore"):
        x = low[..., None] + (high - low)[..., None] * np.linspace(0.0, 1.0, COARSE + 1)
        arm, rub = arms(m, catch, x)
        hump = np.argmax(np.nan_to_num(arm, nan=-np.inf), axis=-1)[..., None]
        between = np.where(free, order >= hump, order <= hump)
        i = np.argmin(np.where(between, arm - rub, np.inf), axis=-1)[..., None]
        # the cell behind the hump may be looked at too: it is higher than the least
        start, end = (np.take_along_axis(x, np.clip(i + k, 0, COARSE), -1) for k in (-1, 1))
        least = -refined_peak(short, start, end, rounds=3)[1][..., 0]
    return np.where(np.isfinite(at.release), least.min(0), np.nan)


def least_seat_angles(machine: Linkage, frictions: tuple[float, ...] = (1.0, SCATTER)) -> list[float | None]:
    """The least seat angle (rad) from which the middle unwinds, for friction taken so many times; None up to 20°.

    Bracketed in a table over seat angle, then as a root: above it the machine unwinds from everywhere short of the band
    that friction keeps round the null, which no seat angle takes away.
    """
    grid = np.arange(FROM, STEEPEST + STEP / 2.0, STEP)
    times = np.array(frictions)
    clearance = middle_clearance(with_seat(machine, np.tile(grid, len(times)), np.repeat(times, len(grid))))
    # the smallest number above zero: where the clearance is exactly nothing it does not unwind yet
    lacking_at = np.nextafter(0.0, 1.0) - clearance.reshape(len(times), -1)
    low, high = first_down_crossing(np.tile(grid, (len(times), 1)), lacking_at)
    some = np.isfinite(low)

    def lacking(seats: Floats) -> Floats:
        return -middle_clearance(with_seat(machine, seats, times))

    safe = [np.where(some, end, grid[0]) for end in (low, high)]
    found = np.where(some, bracketed_root(lacking, safe[0], safe[1], tolerance=1e-10), np.nan)
    return [float(v) if math.isfinite(v) else None for v in found]


def given_before_release(machine: Linkage, at: Events) -> Floats:
    """Share of the energy at the null that the spring gives the disc before the link lets go; 0 where it does not."""
    lets_go = release_with_friction(machine, at)
    ends = expanded_state(machine.expanded(), np.stack([at.null, lets_go], -1), at.catch[..., None])
    energy = spring_energy(_law(machine), ends.draw)
    with np.errstate(invalid="ignore", divide="ignore"):
        share = 1.0 - energy[..., 1] / energy[..., 0]
        found = np.where((at.null < lets_go) & (energy[..., 0] > 0.0), share, 0.0)
    return np.where(np.isfinite(at.null), found, np.nan)


def recommended(machine: Linkage, least: float | None, scattered: float | None) -> tuple[float | None, str]:
    """A seat angle (rad) and its reason, by a rule of our own; None where no seat angle is fit for it.

    The least that unwinds with half as much friction again, at the least half a degree above the least; while the spring
    gives the disc no more than a fiftieth of the energy before the link lets go.
    """
    if least is None:
        return None, f"no seat angle up to {_deg(STEEPEST)}° unwinds from everywhere in the middle with this friction"
    if scattered is None:
        wanted, why = (
            least + SETTING,
            f"half a degree above the least, as with {SCATTER:g} times the friction none does",
        )
    elif scattered >= least + SETTING:
        wanted, why = scattered, f"unwinds from the middle with {SCATTER:g} times the friction too"
    else:
        wanted, why = least + SETTING, "half a degree above the least, for play and setting"
    wanted = math.ceil(wanted / GRAIN - 1e-9) * GRAIN
    seats = np.arange(wanted, least - 1e-9, -GRAIN)
    many = with_seat(machine, seats)
    share = given_before_release(many, events(many))
    fits = np.flatnonzero(share <= MOST_GIVEN)
    given = "the spring gives the disc"
    if len(fits) == 0:
        text = f"even at the least, {_deg(least)}°, {given} more than {MOST_GIVEN:.0%} of its energy before the link lets go"
        return None, f"{text}: less friction, or an interlock in place of unwinding"
    best = int(fits[0])
    if best > 0:
        why = f"the most at which {given} no more than {MOST_GIVEN:.0%} of its energy before the link lets go"
    else:
        why += (
            f"; {given} {max(float(share[0]), 0.0):.1%} of its energy before the link lets go, at most {MOST_GIVEN:.0%}"
        )
    return float(seats[best]), f"{why} (a rule of our own)"


def _deg(value: float) -> str:
    return f"{math.degrees(value):.2f}".rstrip("0").rstrip(".")


@dataclass(frozen=True, slots=True)
class SeatRow:
    """The machine with another seat angle: its bands, and figures. Angles in rad, energies N·mm."""

    seat: float
    marks: tuple[str, ...]
    outcome: Outcome
    clearance: float  # mm by which it unwinds in the middle
    middle_energy: (
        float  # the most that is stored where it does not unwind in the middle; 0 where there is no such band
    )
    null: float
    given: float  # share of the energy at the null that goes to the disc before the link lets go
    hold: float
    energy_at_hold: float

    @property
    def middle(self) -> tuple[float, float] | None:
        """Where it does not unwind in the middle, from the first edge to the last."""
        gap = self.outcome.middle
        return (gap[0].start, gap[-1].end) if gap else None


def trade(machine: Linkage, marked: Mapping[str, float | None]) -> tuple[SeatRow, ...]:
    """The table over seat angle: whole degrees from −3° to 5° or as far as needed, and the marked angles among them."""
    named = {name: value for name, value in marked.items() if value is not None}
    top = max([TO, *(math.ceil(v / STEP - 1e-9) * STEP for v in named.values())])
    bottom = min([FROM, *(math.floor(v / STEP + 1e-9) * STEP for v in named.values())])
    plain = np.arange(round(bottom / STEP), round(top / STEP) + 1) * STEP
    apart = [v for v in plain.tolist() if all(abs(v - w) > 1e-6 for w in named.values())]
    seats = np.array(sorted({*apart, *named.values()}))
    many = with_seat(machine, seats)
    at, found = outcomes(many)
    clearance, share = middle_clearance(many), given_before_release(many, at)
    # at the hold, and where the most is stored in the middle: at an end of one of its bands
    spots = [
        [float(at.hold[i]), *(e for g in (o.middle if o else ()) for e in (g.start, g.end))]
        for i, o in enumerate(found)
    ]
    most = max(map(len, spots))
    angles = np.array([[*row, *[row[0]] * (most - len(row))] for row in spots])
    energy = spring_energy(_law(many), expanded_state(many.expanded(), angles, at.catch[..., None]).draw)
    return tuple(
        SeatRow(
            seat=float(seats[i]), marks=tuple(n for n, v in named.items() if abs(v - seats[i]) < 1e-9), outcome=outcome,
            clearance=float(clearance[i]), middle_energy=float(energy[i, 1 : len(spots[i])].max(initial=0.0)),
            null=float(at.null[i]), given=float(share[i]), hold=float(at.hold[i]), energy_at_hold=float(energy[i, 0]),
        )
        for i, outcome in enumerate(found)
        if outcome is not None
    )  # fmt: skip


def _law(machine: Linkage) -> SpringLaw:
    """The spring as draws with one more axis want it."""
    return machine.spring if machine.spring.draws is not None else machine.spring.expanded()

"""The trigger: how far short of firing the disc really stands, over all that may be off the drawing. rad, mm, N·mm.

The causes are those of ``loads.tolerances``, the machines those of ``loads.spread``. Samples are quasi-random: a scrambled
Sobol sequence through the inverse of each cause's distribution. Source: A. Owen, Scrambled Sobol and Niederreiter-Xing
points, Journal of Complexity 14 (1998); the sequence is scipy's.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from loads import tolerances
from loads.chain_study import chain_study
from loads.checks.context import COMMON, Context
from loads.jolt import Jolt, jolts
from loads.records import HOLD, Check
from loads.spread import WINDOW, Nominal, outcome
from loads.spring_law import spring_energy
from loads.tolerances import Cause
from parts.design import Assumed, Design, Floats

ALL = (
    "crank_radius", "link_length", "stop_position", "link_width", "play_across", "play_along", "sheave_x", "sheave_y",
    "tie_length", "output_x", "output_y", "arm", "draw_direction", "chain_length", "encoder_offset", "backlash",
)  # fmt: skip
COUNTED = 100  # samples below a margin from which their share is taken as the chance
LEAST_COUNTED = 1e-3  # and the least chance that is taken so
TAIL_BEGINS = 20.0  # times the least counted chance: the other point of the line that the tail is continued by
LEAST_CHANCE = 1e-12  # no model of a tail is worth anything below
BARS = 24  # of the histogram
METHOD = (
    "shares of quasi-random samples; below the least share that they resolve, the normal distribution through two "
    "quantiles of the lower tail"
)


@dataclass(frozen=True, slots=True)
class Spread:
    mean: float
    deviation: float


@dataclass(frozen=True, slots=True)
class Effect:
    """One cause. ``slope`` is the change of the hold margin a unit of the cause (rad/mm or 1); ``share`` of the margin's
    variance by first order."""

    cause: Cause
    slope: float
    share: float


@dataclass(frozen=True, slots=True)
class Tail:
    """Chances of a margin by the samples' quantiles and, below what they resolve, a line in normal coordinates."""

    samples: Floats  # rising
    counted: float  # the least chance that is counted

    def quantile(self, chance: float) -> float:
        """The margin that is fallen short of with a chance. Source: quantiles of samples; the tail as in ``line``."""
        if chance >= self.counted:
            return float(np.quantile(self.samples, chance))
        near, far, slope = self._line()
        return near + (_z(chance) - far) * slope

    def chance(self, margin: float) -> float:
        """The chance of less than a margin, at least ``LEAST_CHANCE``: a chance is never 0."""
        share = float(np.searchsorted(self.samples, margin, side="right")) / len(self.samples)
        if share >= self.counted:
            return share
        near, far, slope = self._line()
        if slope <= 0.0:  # nothing is spread: it is either side of it for certain
            return LEAST_CHANCE if margin < near else 1.0
        return min(max(_p(far + (margin - near) / slope), LEAST_CHANCE), self.counted)

    def _line(self) -> tuple[float, float, float]:
        """Margin and normal coordinate of the lower of two quantiles, and margin a normal coordinate between them.

        A straight line on normal probability paper, through the least counted chance and ``TAIL_BEGINS`` times that.
        Common practice, no source.
        """
        inner = min(TAIL_BEGINS * self.counted, 0.4)
        low, high = (float(np.quantile(self.samples, p)) for p in (self.counted, inner))
        z_low, z_high = _z(self.counted), _z(inner)
        return low, z_low, (high - low) / (z_high - z_low)


def _z(chance: float) -> float:
    from scipy.special import ndtri

    return float(ndtri(chance))


def _p(z: float) -> float:
    from scipy.special import ndtr

    return float(ndtr(z))


@dataclass(frozen=True, slots=True)
class TriggerStudy:
    chance: float  # that may be left
    samples: int
    seed: int
    hold_margin: float  # as drawn
    margin: Spread
    null: Spread
    release: Spread
    pull: Spread
    draw: Spread
    energy: Spread
    worn_length: float  # mm by which a worn chain is longer
    worn_draw: Spread | None
    worn_energy: Spread | None
    firing_chance: float
    counted: int  # samples that have fired
    margin_for_chance: float  # hold margin that leaves the stated chance
    first_order: float  # standard deviation of the margin by first order
    effects: tuple[Effect, ...]  # the greatest share first
    edges: Floats  # of the histogram's bars, rad
    shares: Floats  # of the samples in each bar
    jolt: Jolt
    assumed: tuple[Assumed, ...]

    @property
    def at_least_resolved(self) -> bool:
        """Whether the firing chance is at the end of what any method tells."""
        return self.firing_chance <= LEAST_CHANCE

    @property
    def checks(self) -> tuple[Check, ...]:
        return (
            Check(
                "assembly", "hold", "hold margin for the stated chance", HOLD, None,
                math.degrees(self.margin_for_chance), math.degrees(self.hold_margin), "°", 1.0,
                f"hold margin that leaves a chance of {self.chance:g} to fire at the hold: {METHOD}",
                f"tolerances as listed, {COMMON}",
                "the margin that the tolerances ask for, against the design's",
            ),
        )  # fmt: skip

    @property
    def cautions(self) -> tuple[str, ...]:
        if self.firing_chance <= self.chance:
            return ()
        return (
            f"The machine may fire as soon as it is held: the chance is {chance_text(self.firing_chance)}, and "
            f"{self.chance:g} was asked for; a hold margin of {math.degrees(self.margin_for_chance):.2f}° would leave that.",
        )


def chance_text(value: float) -> str:
    """A chance in two figures; "less than" at the end of what can be told."""
    return f"less than {LEAST_CHANCE:g}" if value <= LEAST_CHANCE else f"{value:.2g}"


def trigger_study(c: Context) -> TriggerStudy | None:
    """The study of one design, or None where it has no table ``[tolerances]``."""
    wish = c.design.tolerances
    if wish is None:
        return None
    figures, machine = c.past.figures, c.past.machine
    chain = chain_study(c.design, machine, figures, c.past, c.sizes)
    found = tolerances.causes(c, chain)
    at = figures.events
    nominal = Nominal(float(machine.start_direction * machine.turn), float(at.null), float(at.release), float(at.hold))
    slopes = sensitivities(c.design, nominal, found)
    n = 1 << max(0, wish.samples - 1).bit_length()  # the sequence is even in whole powers of two
    result = outcome(c.design, nominal, drawn(found, n, wish.seed))
    # a machine without null or release does not hold
    margins = np.sort(np.where(np.isfinite(result.margin), result.margin, -WINDOW))
    tail = Tail(margins, max(LEAST_COUNTED, COUNTED / n))
    longer, worn_assumed = tolerances.worn(c, chain)
    hold_margin = c.design.mechanism.hold_margin
    shares, edges = np.histogram(margins, bins=BARS)
    slacker = np.maximum(result.draw - longer, 0.0)
    worn = (spread(slacker), spread(spring_energy(machine.spring, slacker))) if longer > 0.0 else (None, None)
    return TriggerStudy(
        chance=wish.chance, samples=n, seed=wish.seed, hold_margin=hold_margin, margin=spread(margins),
        null=spread(result.null), release=spread(result.release), pull=spread(result.pull), draw=spread(result.draw),
        energy=spread(result.energy), worn_length=longer, worn_draw=worn[0], worn_energy=worn[1],
        firing_chance=tail.chance(0.0), counted=int(np.searchsorted(margins, 0.0, side="right")),
        margin_for_chance=max(0.0, hold_margin - tail.quantile(wish.chance)),
        first_order=math.sqrt(sum((s * x.deviation) ** 2 for s, x in zip(slopes, found, strict=True))),
        effects=effects(found, slopes), edges=np.asarray(edges), shares=np.asarray(shares / len(margins)),
        jolt=jolts(c), assumed=(*tolerances.assumed(found), *(() if worn_assumed is None else (worn_assumed,))),
    )  # fmt: skip


def spread(values: Floats) -> Spread:
    """Mean and standard deviation of what is there."""
    return Spread(float(np.nanmean(values)), float(np.nanstd(values)))


def drawn(found: tuple[Cause, ...], n: int, seed: int) -> dict[str, Floats]:
    """Samples of every cause, (n) each; 0 of what has no spread. ``n`` is a power of two."""
    values = {key: np.zeros(n) for key in ALL}
    if not found:
        return values
    from scipy.special import ndtri
    from scipy.stats import qmc

    even = qmc.Sobol(len(found), scramble=True, rng=seed).random(n)
    even = np.clip(even, 0.5 / n**2, 1.0 - 0.5 / n**2)  # the normal distribution has no end
    for i, cause in enumerate(found):
        if cause.law == "normal":
            values[cause.key] = cause.mean + cause.deviation * ndtri(even[:, i])
        else:
            values[cause.key] = cause.low + (cause.high - cause.low) * even[:, i]
    return values


def sensitivities(design: Design, nominal: Nominal, found: tuple[Cause, ...]) -> list[float]:
    """Change of the hold margin a unit of each cause, by central differences about the causes' means, a standard deviation
    each way. Source: propagation of variance by first order, JCGM 100 (GUM) equation 10.
    """
    if not found:
        return []
    k = len(found)
    values = {key: np.zeros(2 * k) for key in ALL}
    for i, cause in enumerate(found):
        values[cause.key][:] = cause.mean
        values[cause.key][2 * i] += cause.deviation
        values[cause.key][2 * i + 1] -= cause.deviation
    margin = outcome(design, nominal, values).margin
    return [
        float(margin[2 * i] - margin[2 * i + 1]) / (2.0 * cause.deviation) for i, cause in enumerate(found)
    ]  # fmt: skip


def effects(found: tuple[Cause, ...], slopes: list[float]) -> tuple[Effect, ...]:
    """Each cause with its share of the margin's variance, the greatest first."""
    parts = [(s * x.deviation) ** 2 for s, x in zip(slopes, found, strict=True)]
    whole = sum(parts)
    rows = [
        Effect(cause, slope, part / whole if whole > 0.0 else 0.0)
        for cause, slope, part in zip(found, slopes, parts, strict=True)
    ]
    return tuple(sorted(rows, key=lambda row: -row.share))

"""Fatigue of every feature for the stated number of shots: lives, factors, checks. MPa, shots.

One shot is a closed cycle of stress: from rest through the winding to the release, through swing and snatch where the
release is covered, and back to rest.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from loads.checks.context import COMMON, Context
from loads.fatigue.counting import closed, count_cycles, most_cycles, padded, turning_points
from loads.fatigue.data import chain_cycles, endurance, inspection, surface
from loads.fatigue.fasteners import Fastened, fasteners
from loads.fatigue.fibres import Site, sites
from loads.fatigue.strength import (
    SNLine,
    damage,
    goodman_factor,
    growth_to_failure,
    reliability_factor,
    strength_fraction,
    surface_factor,
)
from loads.records import Check
from parts.design import Fatigue, Floats

Indices = NDArray[np.intp]

CHECK = "fatigue"
RELEASE = "swing and snatch after the release are NOT in the stress history, as the release is not covered"


@dataclass(frozen=True, slots=True)
class FatigueRow:
    """One feature. ``life`` in shots and ``factor`` are of its worst fibre; None: for ever, or nothing to say.

    ``factor``: by how much all stresses may grow until the stated shots use up the life. ``endless_factor``: Goodman's
    for an infinite life; None where the metal has no endurance limit.
    """

    part: str
    site: str
    life: float | None
    factor: float | None
    endless: bool
    endless_factor: float | None
    life_factor: float | None
    amplitude: float  # of the largest cycle of the worst fibre
    mean: float
    cycles_a_shot: float
    endurance_limit: float
    ultimate: float
    note: str


@dataclass(frozen=True, slots=True)
class FatigueStudy:
    shots: float
    reliability: float
    surfaces: Mapping[str, str]  # by what has them
    rows: tuple[FatigueRow, ...]
    checks: tuple[Check, ...]
    inspect_after: int | None  # a suggestion; None: nothing wears out
    with_release: bool = False  # swing and snatch are in the stress history

    @property
    def cautions(self) -> tuple[str, ...]:
        """What is to be said beside the lives."""
        return (
            f"Fatigue lives are estimates for parts as drawn, {100.0 * self.reliability:.6g} % of which hold"
            + ("." if self.with_release else f"; {RELEASE}."),
            "Fatigue: corrosion, wear, fretting in running joints, nicks and welds are not in the lives.",
        )

    @property
    def weakest(self) -> FatigueRow | None:
        """The row with the least factor."""
        loaded = [row for row in self.rows if row.factor is not None]
        return min(loaded, key=lambda row: row.factor or 0.0, default=None)


def fatigue_study(c: Context) -> FatigueStudy | None:
    """The study, where the design has its table."""
    wish = c.design.fatigue
    if wish is None:
        return None
    looked_at = list(sites(c))
    lines = [line_of(site, wish) for site in looked_at]
    worst = worst_fibres(
        [candidates(s.stress, line, wish.shots) for s, line in zip(looked_at, lines, strict=True)], wish.shots
    )
    found = [_judged(c, *row, wish) for row in zip(looked_at, lines, worst, strict=True)]
    found += [_fastened(c, one, wish) for one in fasteners(c)]
    if c.design.far_end.over_sheave:  # a tie is a plate, with eyes like the rest
        found.append(_chain(c, wish))
    rows = tuple(row for row, _ in found)
    lives = [row.life for row in rows if row.life is not None]
    share, least = inspection()
    after = max(least, int(share * min(min(lives), wish.shots))) if lives else None
    checks = tuple(check for _, check in found)
    with_release = c.past.release is not None
    return FatigueStudy(wish.shots, wish.reliability, wish.surfaces, rows, checks, after, with_release)


def line_of(site: Site, wish: Fatigue) -> SNLine:
    """The S–N line of a feature: S_e = k_a k_b k_e S_e'; k_c stands with the stresses. Source: Shigley equation 6-18."""
    s_ut = site.material.ultimate_strength(site.size)
    metal = endurance(site.material)
    k_a = float(surface_factor(s_ut, *surface(wish.surfaces[site.surface])))
    s_e = k_a * site.k_b * reliability_factor(wish.reliability) * metal.limit(s_ut)
    values = (s_ut, float(strength_fraction(s_ut)), s_e, metal.cycles, float(metal.endless))
    return SNLine(*(np.array([[v]]) for v in values))


@dataclass(frozen=True, slots=True)
class Worst:
    """The worst fibre of a feature: which, by how much its stresses may grow, its life (None: endless), its cycles."""

    fibre: int
    growth: float
    life: float | None
    amplitude: Floats
    mean: Floats
    count: Floats


@dataclass(frozen=True, slots=True)
class Candidates:
    """The fibres of one feature that can be its worst, their counted cycles, and bounds of their growth to failure."""

    fibres: Indices
    cycles: list[tuple[Floats, Floats, Floats]]
    low: Floats
    high: Floats
    line: SNLine


def candidates(stress: Floats, line: SNLine, shots: float) -> Candidates:
    """Of histories (fibres, angles) of one shot, the rest before and after not in them, those that can be the worst.

    The cycle between a fibre's greatest and least stress does more harm than any other of its cycles, and there
    are no more than :func:`most_cycles`. That bounds its growth from both sides; only what is left is counted.
    """
    top, bottom = np.maximum(stress.max(axis=1), 0.0), np.minimum(stress.min(axis=1), 0.0)
    half, middle = ((top - bottom) / 2.0)[:, None], ((top + bottom) / 2.0)[:, None]
    high = goodman_factor(half, middle, line.strength(shots), line.s_ut)[:, 0]
    least = float(high.min())
    if not np.isfinite(least):
        return Candidates(np.zeros(0, dtype=np.intp), [], np.zeros(0), np.zeros(0), line)
    loops = closed(stress)
    most = most_cycles(loops)[:, None]
    low = goodman_factor(half, middle, line.strength(shots * most), line.s_ut)[:, 0]
    kept = np.flatnonzero(low <= least)
    cycles = [count_cycles(turning_points(loops[i])) for i in kept]
    return Candidates(kept, cycles, low[kept] * 0.999, high[kept] * 1.001, line)


def worst_fibres(found: list[Candidates], shots: float) -> list[Worst]:
    """The fibre of least growth of each feature, all features at once."""
    amplitude, mean, count = padded([cycle for one in found for cycle in one.cycles])
    line = SNLine(*(
        np.concatenate([np.broadcast_to(getattr(one.line, name), (len(one.cycles), 1)) for one in found])
        for name in ("s_ut", "f", "s_e", "knee", "endless")
    ))  # fmt: skip
    low, high = np.concatenate([one.low for one in found]), np.concatenate([one.high for one in found])
    growth = growth_to_failure(amplitude, mean, count, line, shots, low, high)
    harm = damage(amplitude, mean, count, line)
    rows, begin = [], 0
    for one in found:
        end = begin + len(one.cycles)
        if begin == end:
            nothing = np.zeros(0)
            rows.append(Worst(0, float("inf"), None, nothing, nothing, nothing))
            continue
        i = begin + int(np.argmin(growth[begin:end]))
        real = count[i] > 0.0
        life = None if harm[i] == 0.0 else float(1.0 / harm[i])
        rows.append(
            Worst(int(one.fibres[i - begin]), float(growth[i]), life, amplitude[i][real], mean[i][real], count[i][real])
        )
        begin = end
    return rows


def _judged(c: Context, site: Site, line: SNLine, worst: Worst, wish: Fatigue) -> tuple[FatigueRow, Check]:
    s_e, s_ut = float(line.s_e[0, 0]), float(line.s_ut[0, 0])
    metal = endurance(site.material)
    loaded = len(worst.amplitude) > 0
    largest = int(np.argmax(worst.amplitude)) if loaded else 0
    amplitude = float(worst.amplitude[largest]) if loaded else 0.0
    mean = float(worst.mean[largest]) if loaded else 0.0
    factors = goodman_factor(worst.amplitude, worst.mean, line.s_e[0], s_ut)
    row = FatigueRow(
        part=site.part, site=site.site, life=worst.life, factor=worst.growth if loaded else None,
        endless=worst.life is None, endless_factor=float(factors.min()) if loaded and metal.endless else None,
        life_factor=None if worst.life is None else worst.life / wish.shots, amplitude=amplitude, mean=mean,
        cycles_a_shot=float(worst.count.sum()), endurance_limit=s_e, ultimate=s_ut, note=site.note,
    )  # fmt: skip
    s_f = float(line.strength(wish.shots)[0, 0])
    method = (
        f"rainflow, Goodman, Miner; largest cycle {amplitude:.4g} about {mean:.4g} MPa, S_f {s_f:.4g} at {wish.shots:g} "
        f"shots, S_e {s_e:.4g}, S_ut {s_ut:.4g} MPa; {site.how}"
    )
    source = site.source + (f"; {metal.source}" if "Shigley" not in metal.source else "")
    return row, _check(c, site.part, site.site, row.factor, _angle(c, site, worst), method, source, site.note)


def _fastened(c: Context, one: Fastened, wish: Fatigue) -> tuple[FatigueRow, Check]:
    """Bolts and dowels by their own lines, to which neither surface, size nor reliability is applied.

    A preloaded joint has no factor beyond the growth at which it opens or its screw yields.
    """
    line, loaded = one.line, bool(np.max(one.amplitude, initial=0.0) > 0.0)
    largest = int(np.argmax(one.amplitude)) if loaded else 0
    amplitude, mean = (float(one.amplitude[largest]), float(one.mean[largest])) if loaded else (0.0, 0.0)
    life = line.life(one.amplitude, one.count) if loaded else None
    growth = line.growth(one.amplitude, one.count, wish.shots)
    most = max(one.bound, 1.0)
    factor = None if growth is None else min(growth, most)
    row = FatigueRow(
        part=one.part, site=one.site, life=life, factor=factor, endless=loaded and life is None,
        endless_factor=min(line.endless / amplitude, most) if loaded else None,
        life_factor=None if life is None else life / wish.shots, amplitude=amplitude, mean=mean,
        cycles_a_shot=float(one.count.sum()), endurance_limit=line.endless, ultimate=one.ultimate, note=one.note,
    )  # fmt: skip
    method = (
        f"rainflow, Miner; largest cycle {amplitude:.4g} about {mean:.4g} MPa, {line.limit:.4g} MPa at {line.cycles:g}, "
        f"slope {line.slope:g}; {one.how}"
    )
    return row, _check(c, one.part, one.site, factor, one.at if loaded else None, method, one.source, one.note)


def _angle(c: Context, site: Site, worst: Worst) -> int | None:
    """Index of the crank angle at which the worst fibre has its greatest stress, either way."""
    return int(np.argmax(np.abs(site.stress[worst.fibre]))) if len(worst.amplitude) else None


def _check(
    c: Context, part: str, site: str, factor: float | None, at: int | None, method: str, source: str, note: str
) -> Check:
    """The demand is the share of the growth to failure that is used up, 1/n; the capacity is 1."""
    angle = None if at is None else float(c.past.state.crank_angle[at])
    case = "" if at is None else c.past.case_at(at)
    demand = 0.0 if factor is None else 1.0 / factor
    return Check(part, site, CHECK, case, angle, demand, 1.0, "1", 1.0, method, source, note)


def _chain(c: Context, wish: Fatigue) -> tuple[FatigueRow, Check]:
    """The chain by its dynamic strength, straight on logarithmic paper from the least tensile strength at one pull.

    No chain is listed with a dynamic strength yet; without one in the design file the row has no factor.
    """
    chain = c.design.far_end
    cycles, source = chain_cycles()
    pull = np.linalg.norm(c.members.chain_on_pin, axis=0)
    at, force = int(np.argmax(pull)), float(np.max(pull))
    rated = wish.chain_dynamic_strength
    if rated is None:
        note = "no rating: give the maker's dynamic strength as chain_dynamic_strength in [fatigue]"
        blank = FatigueRow(chain.noun, "strand", None, None, False, None, None, 0.0, 0.0, 1.0, 0.0, 0.0, note)
        return blank, _check(c, chain.noun, "strand", None, None, "no rating, nothing was checked", COMMON, note)
    slope = np.log10(rated / chain.min_tensile_strength) / np.log10(cycles)
    strength = rated if wish.shots >= cycles else chain.min_tensile_strength * wish.shots**slope
    endless = force <= rated
    life = None if endless else float((force / chain.min_tensile_strength) ** (1.0 / slope))
    factor = float(strength / force)
    row = FatigueRow(
        chain.noun, "strand", life, factor, endless, rated / force, None if life is None else life / wish.shots,
        force / 2.0, force / 2.0, 1.0, rated, chain.min_tensile_strength, "N, not MPa",
    )  # fmt: skip
    method = (
        f"pull {force:.4g} N against {strength:.4g} N at {wish.shots:g} shots, from {chain.min_tensile_strength:.4g} N at "
        f"one to {rated:.4g} N at {cycles:g} (line between: {COMMON})"
    )
    return row, _check(c, chain.noun, "strand", factor, at, method, source, "")

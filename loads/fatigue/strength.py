"""Strength against repeated stress: Marin factors, S–N line, Goodman's line, Miner's sum. MPa, mm, cycles.

Equation and table numbers are those of Shigley's Mechanical Engineering Design, 9th edition.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
from statistics import NormalDist

import numpy as np

from parts.design import Floats

AXIAL = 0.85  # k_c, equation 6-26
LOW_CYCLES = 1e3  # where the S–N line begins
BISECTIONS = 26


def surface_factor(s_ut: Floats | float, a: float, b: float) -> Floats:
    """k_a = a S_ut^b, at most 1; S_ut in MPa. Source: Shigley equation 6-19 with table 6-2."""
    return np.asarray(np.minimum(a * np.asarray(s_ut, dtype=float) ** b, 1.0))


def size_factor(d: Floats | float) -> Floats:
    """k_b of a round section of diameter ``d`` (mm) in bending: 1 up to 2.79 mm, that of 254 mm beyond it.

    Source: Shigley equation 6-20; what stands outside 2.79 to 254 mm is this project's own continuation.
    """
    d = np.clip(np.asarray(d, dtype=float), 2.79, 254.0)
    return np.asarray(np.minimum(np.where(d <= 51.0, 1.24 * d**-0.107, 1.51 * d**-0.157), 1.0))


def rectangle_diameter(width: float, thickness: float) -> float:
    """d_e = 0.808 sqrt(h b) in mm, the round section that is as prone to fail as a rectangle in bending.

    Source: Shigley equation 6-25.
    """
    return 0.808 * math.sqrt(width * thickness)


def reliability_factor(reliability: float) -> float:
    """k_e = 1 − 0.08 z of a share 0.5 ≤ R < 1 of parts that hold. Source: Shigley equation 6-29 and table 6-5."""
    if not 0.5 <= reliability < 1.0:
        raise ValueError(f"reliability is from 0.5 to less than 1, not {reliability}")
    return 1.0 - 0.08 * NormalDist().inv_cdf(reliability)


def strength_fraction(s_ut: Floats | float) -> Floats:
    """f, the share of S_ut that 1000 cycles of reversed stress leave: 0.9 below 490 MPa, less above.

    f = 1.06 − 4.1e-4 S_ut + 1.5e-7 S_ut², at most 0.9, from 1400 MPa on the value there. Source: the curve of Shigley
    figure 6-18; its equation as in the 11th edition, equation 6-11, from memory.
    """
    s = np.minimum(np.asarray(s_ut, dtype=float), 1400.0)
    return np.asarray(np.minimum(1.06 - 4.1e-4 * s + 1.5e-7 * s**2, 0.9))


def neuber_length(s_ut: Floats | float) -> Floats:
    """√a in √mm of steel in bending or axial load, from S_ut in MPa. Source: Shigley equation 6-35a (inches and kpsi).

    Holds from 340 to 1700 MPa; the value at the nearer end outside.
    """
    s = np.clip(np.asarray(s_ut, dtype=float), 340.0, 1700.0) / 6.894757
    root = 0.246 - 3.08e-3 * s + 1.51e-5 * s**2 - 2.67e-8 * s**3
    return np.asarray(np.maximum(root, 0.0) * math.sqrt(25.4))


def torsion_neuber_length(s_ut: Floats | float) -> Floats:
    """√a in √mm of steel in torsion, from S_ut in MPa; ends as :func:`neuber_length`. Source: Shigley equation 6-35b."""
    s = np.clip(np.asarray(s_ut, dtype=float), 340.0, 1700.0) / 6.894757
    root = 0.190 - 2.51e-3 * s + 1.35e-5 * s**2 - 2.67e-8 * s**3
    return np.asarray(np.maximum(root, 0.0) * math.sqrt(25.4))


def notch_factor(k_t: Floats | float, r: Floats | float, s_ut: Floats | float) -> Floats:
    """K_f = 1 + (K_t − 1)/(1 + √(a/r)), r the notch's radius in mm. Source: Shigley equation 6-33."""
    return _notched(k_t, r, neuber_length(s_ut))


def torsion_notch_factor(k_ts: Floats | float, r: Floats | float, s_ut: Floats | float) -> Floats:
    """K_fs of shear, as :func:`notch_factor` with the length of torsion. Source: Shigley equations 6-32 and 6-33."""
    return _notched(k_ts, r, torsion_neuber_length(s_ut))


def _notched(k_t: Floats | float, r: Floats | float, root: Floats) -> Floats:
    return np.asarray(1.0 + (np.asarray(k_t) - 1.0) / (1.0 + root / np.sqrt(r)))


@dataclass(frozen=True)
class SNLine:
    """Reversed stress against cycles: straight on logarithmic paper from S_ut over f S_ut at 10³ to S_e at ``knee``.

    Arrays broadcast against each other. ``endless``: below S_e it lives for ever; else the line goes on falling.
    """

    s_ut: Floats
    f: Floats
    s_e: Floats
    knee: Floats
    endless: Floats  # 1 or 0

    @cached_property
    def exponent(self) -> Floats:
        """b of S_f = a N^b. Source: Shigley equation 6-15, the knee anywhere instead of at 10⁶."""
        return np.asarray(-np.log10(self.f * self.s_ut / self.s_e) / np.log10(self.knee / LOW_CYCLES))

    @cached_property
    def factor(self) -> Floats:
        """a of S_f = a N^b. Source: Shigley equation 6-14, (f S_ut)²/S_e where the knee is at 10⁶."""
        return np.asarray(self.f * self.s_ut * LOW_CYCLES**-self.exponent)

    def strength(self, cycles: Floats | float) -> Floats:
        """S_f in MPa that so many cycles leave. Source: Shigley equations 6-13 and 6-17 (below 10³ cycles)."""
        n = np.maximum(np.asarray(cycles, dtype=float), 1.0)
        low = self.s_ut * n ** (np.log10(self.f) / 3.0)
        high = self.factor * n**self.exponent
        beyond = (self.endless > 0.0) & (n >= self.knee)
        return np.where(n < LOW_CYCLES, low, np.where(beyond, self.s_e, high))

    def cycles(self, stress: Floats) -> Floats:
        """Cycles N to failure at a reversed stress, the line going on below S_e. Source: Shigley equation 6-16."""
        s = np.clip(np.asarray(stress, dtype=float), 1e-3, 1e6)
        short = s > self.f * self.s_ut
        power = np.where(short, 3.0 / np.log10(self.f), 1.0 / self.exponent)
        return np.asarray(np.clip((s / np.where(short, self.s_ut, self.factor)) ** power, 1e-12, 1e60))


def reversed_stress(amplitude: Floats, mean: Floats, s_ut: Floats | float) -> Floats:
    """σ_rev = σ_a/(1 − σ_m/S_ut), the reversed stress that does the same harm; infinite from σ_m = S_ut on.

    A mean in compression gives no relief. Source: modified Goodman, Shigley page 347 and equation 6-46.
    """
    room = 1.0 - np.maximum(mean, 0.0) / s_ut
    return np.where(room > 0.0, amplitude / np.maximum(room, 1e-12), np.inf)


def goodman_factor(amplitude: Floats, mean: Floats, strength: Floats, s_ut: Floats | float) -> Floats:
    """n of σ_a/S + σ_m/S_ut = 1/n, S being S_e for ever or S_f for so many cycles; infinite without stress.

    Source: modified Goodman, Shigley equation 6-46; without the mean where that is in compression.
    """
    use = amplitude / strength + np.maximum(mean, 0.0) / s_ut
    return np.where(use > 0.0, 1.0 / np.maximum(use, 1e-300), np.inf)


def damage(amplitude: Floats, mean: Floats, count: Floats, line: SNLine, growth: Floats | float = 1.0) -> Floats:
    """Miner's sum Σ n/N of one shot, fibres × cycles, all stresses grown by ``growth``.

    No harm where each cycle of a fibre stays below an endless S_e. As soon as one does not, the line goes on falling
    for the others, as larger cycles take the limit away from smaller ones ("elementary" Miner, the safe side).
    ``line`` holds columns (fibres, 1). Source: Shigley equation 6-58 (Palmgren and Miner).
    """
    growth = np.asarray(growth, dtype=float)
    grown = growth[..., None] if growth.ndim else growth
    stress = np.where(count > 0.0, reversed_stress(amplitude * grown, mean * grown, line.s_ut), 0.0)
    total = np.sum(count / line.cycles(stress), axis=-1)
    harmless = np.all(stress <= line.s_e, axis=-1) & (line.endless[..., 0] > 0.0)
    return np.where(harmless, 0.0, total)


def growth_to_failure(
    amplitude: Floats, mean: Floats, count: Floats, line: SNLine, shots: float, low: Floats, high: Floats
) -> Floats:
    """The factor by which all stresses of each fibre may grow until ``shots`` shots use up its life.

    Bisection between ``low`` (holds) and ``high`` (fails); finite, greater than 0.
    """
    low, high = low.copy(), high.copy()
    for _ in range(BISECTIONS):
        middle = np.sqrt(low * high)
        fails = damage(amplitude, mean, count, line, middle) * shots > 1.0
        low, high = np.where(fails, low, middle), np.where(fails, middle, high)
    return low

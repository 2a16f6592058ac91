"""Bolts under alternating load: the share of a pull that a preloaded bolt feels, and lives by a straight S–N line.

mm, N, MPa, cycles. Equation numbers of Shigley are those of Shigley's Mechanical Engineering Design, 9th edition.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from parts.design import Floats

CONE = math.tan(math.radians(30.0))  # half the apex angle of the pressure cone, Shigley §8-5


def thread_stiffness(a_t: float, modulus: float, grip: float) -> float:
    """k_b = A_t E/l in N/mm of a screw that is threaded all the way; mm², MPa, mm. Source: Shigley equation 8-17."""
    return a_t * modulus / grip


def frustum_stiffness(t: float, outer: float, d: float, modulus: float) -> float:
    """k of one frustum of a pressure cone: thickness t, small end ``outer`` > d, hole d; mm, MPa, N/mm.

    k = 0.5774 π E d/ln[((1.155 t + D − d)(D + d))/((1.155 t + D + d)(D − d))]. Source: Shigley equation 8-20.
    """
    wide = 2.0 * CONE * t + outer
    return CONE * math.pi * modulus * d / math.log((wide - d) * (outer + d) / ((wide + d) * (outer - d)))


def effective_grip(h: float, t_2: float, d: float) -> float:
    """l = h + min(t_2, d)/2 of a screw through h mm into a tapped part t_2 mm thick. Source: Shigley table 8-7."""
    return h + min(t_2, d) / 2.0


def member_stiffness(h: float, grip: float, head: float, d: float, upper: float, lower: float) -> float:
    """k_m of a plate h mm thick (modulus ``upper``) and the tapped part under it (``lower``), N/mm; h ≤ grip.

    Two cones from the ends of the grip, ``head`` wide there, meet in its middle; where that is not between the parts the
    longer one is cut there. Source: Shigley equation 8-18 and example 8-5.
    """
    half, below = grip / 2.0, grip - h
    if h >= half:
        cut = [(half, head, upper), (h - half, head + 2.0 * below * CONE, upper), (below, head, lower)]
    else:
        cut = [(h, head, upper), (half - h, head + 2.0 * h * CONE, lower), (half, head, lower)]
    return 1.0 / sum(1.0 / frustum_stiffness(t, wide, d, e) for t, wide, e in cut if t > 0.0)


def joint_constant(k_b: float, k_m: float) -> float:
    """C = k_b/(k_b + k_m), the share of an outer pull that the bolt feels. Source: Shigley §8-7, equation f."""
    return k_b / (k_b + k_m)


def added_force(pull: Floats, c: float, preload: float) -> Floats:
    """What a pull adds to a bolt's preload F_i (N): C P while the parts touch, P − F_i once they part.

    A pull below 0 presses the parts together and takes from the bolt.
    They part at P = F_i/(1 − C). Source: Shigley equations 8-24 and 8-25, the second until F_m = 0.
    """
    return np.asarray(np.maximum(c * pull, pull - preload))


def opening_factor(pull: float, c: float, preload: float) -> float:
    """n_0 = F_i/((1 − C) P), the growth of a pull P > 0 at which the parts part; N. Source: Shigley equation 8-30."""
    return preload / ((1.0 - c) * pull)


def yield_factor(pull: float, c: float, preload: float, proof: float) -> float:
    """n_L = (S_p A_t − F_i)/(C P), the growth of a pull P > 0 at which the bolt yields; ``proof`` S_p A_t; N.

    Source: Shigley equation 8-29.
    """
    return (proof - preload) / (c * pull)


def thread_limit(d: float, constants: tuple[float, ...]) -> float:
    """σ_ASV = 0.85 (150/d + 45) in MPa: the amplitude that a thread rolled before heat treatment stands 2·10⁶ times.

    On the stress area, whatever the mean; for d ≤ 40 mm, the value there beyond. ``constants`` are 0.85, 150 and 45.
    Source: VDI 2230-1:2015 equation R9/5-1.
    """
    factor, numerator, offset = constants
    return factor * (numerator / min(d, 40.0) + offset)


@dataclass(frozen=True, slots=True)
class PowerLine:
    """S–N line σ^m N = constant through ``limit`` at ``cycles``. Amplitudes in MPa.

    Where all cycles stay below ``endless`` they do no harm; beyond ``most`` the line says nothing, and nothing holds.
    """

    limit: float
    cycles: float
    slope: float
    endless: float
    most: float

    def harm(self, amplitude: Floats, count: Floats) -> float:
        """Miner's sum Σ n/N of one shot, N = N_D (σ_D/σ)^m.

        Source: VDI 2230-1:2015 equation R9/6-1 (m = 3); EN 1993-1-9:2005 §7.1(2) (m = 5); Palmgren and Miner.
        """
        return float(np.sum(count * (amplitude / self.limit) ** self.slope) / self.cycles)

    def life(self, amplitude: Floats, count: Floats) -> float | None:
        """Shots; None for ever, 0 beyond ``most``. Smaller cycles count as soon as a larger one does harm."""
        top = float(np.max(amplitude, initial=0.0))
        if top <= self.endless:
            return None
        return 0.0 if top > self.most else 1.0 / self.harm(amplitude, count)

    def growth(self, amplitude: Floats, count: Floats, shots: float) -> float | None:
        """By how much all stresses may grow until ``shots`` use up the life; None without stress."""
        top = float(np.max(amplitude, initial=0.0))
        if top <= 0.0:
            return None
        lasts = (self.harm(amplitude, count) * shots) ** (-1.0 / self.slope)
        return float(min(max(lasts, self.endless / top), self.most / top))


def thread_line(limit: float, cycles: float, slope: float, least: float) -> PowerLine:
    """A thread's line: endless below its limit, and for no fewer than ``least`` cycles. Source: VDI 2230-1:2015 R9/6."""
    return PowerLine(limit, cycles, slope, limit, limit * (cycles / least) ** (1.0 / slope))


def shear_line(category: float, cycles: float, slope: float, cut_off: float, f_y: float, most: float) -> PowerLine:
    """The line of bolts in shear, as amplitudes: half of Δτ_C at 2·10⁶, no harm below the cut-off, Δτ ≤ 1.5 f_y/√3.

    Source: EN 1993-1-9:2005 §7.1 figure 7.2, §8(1), table 8.1.
    """
    half = category / 2.0
    return PowerLine(half, cycles, slope, half * (cycles / cut_off) ** (1.0 / slope), most * f_y / math.sqrt(3.0) / 2.0)


def slip_factor(shear: Floats, pull: Floats, c: float, preload: float, mu: float) -> float:
    """Least factor by which all loads may grow until friction at a bolt gives way: μ F_i = V g + μ (1 − C) P g.

    N; a pull below 0 presses the parts together and counts for nothing. Source: Coulomb's friction, Shigley equation 8-25.
    """
    use = (np.asarray(shear) / mu + (1.0 - c) * np.maximum(pull, 0.0)) / preload
    top = float(np.max(use, initial=0.0))
    return 1.0 / top if top > 0.0 else math.inf

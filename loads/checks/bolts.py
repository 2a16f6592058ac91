"""A bolt's seat and thread: pressure under its head, the floor under it punched through, its thread stripped."""

from __future__ import annotations

import math
from dataclasses import dataclass

from loads.checks.context import STEELS
from loads.practice import value
from parts.design import Material
from parts.hardware import CapScrew


def surface_pressure_limit(material: Material, size: float) -> float:
    """p_G in MPa that a plate ``size`` mm thick bears under a bolt's head: a share of its tensile strength.

    VDI 2230 lists p_G material by material; the share is below what it lists for any steel, or any other wrought metal.
    Source: VDI 2230:2003, as in ``bolt_seat`` of ``loads/data/joints.toml``.
    """
    return value("bolt_seat", "steel" if material.kind in STEELS else "other") * material.ultimate_strength(size)


def punching_capacity(d_m: float, t_p: float, f_u: float) -> float:
    """B_p,R = 0.6 π d_m t_p f_u in N, γM2 = 1: a head d_m wide pulled through a plate t_p thick; mm, MPa.

    d_m is the mean of a head across points and across flats, of a round head its diameter; 0 where there is no plate.
    Source: EN 1993-1-8:2005 table 3.4.
    """
    return 0.6 * math.pi * d_m * max(t_p, 0.0) * f_u


@dataclass(frozen=True, slots=True)
class ThreadLimits:
    """Where a coarse metric thread 6g in 6H is thinnest, mm."""

    pitch: float
    d: float  # bolt, least major diameter
    d_2: float  # bolt, least pitch diameter
    D_1: float  # hole, greatest minor diameter
    D_2: float  # hole, greatest pitch diameter


def thread_pitch(d: float, a_s: float) -> float:
    """P in mm of a thread d with the stress area A_s = π/4 (d − 0.9382 P)². Source: ISO 898-1, solved for P."""
    return (d - math.sqrt(4.0 * a_s / math.pi)) / 0.9382


def thread_limits(d: float, pitch: float) -> ThreadLimits:
    """Limits of a metric thread d × P, tolerance 6g on the bolt and 6H in the hole; mm, from M3 on.

    Basic profile of ISO 68-1; es, T_d, T_d2, T_D2 and T_D1 of grade 6 by the formulas of ISO 965-1, d itself for the mean
    of its range of diameters. Source: ISO 965-1, from memory.
    """
    root = math.sqrt(3.0) * pitch  # 2 H
    major = 180.0 * pitch ** (2.0 / 3.0) - 3.15 / math.sqrt(pitch)
    middle = 90.0 * pitch**0.4 * d**0.1
    minor = 433.0 * pitch - 190.0 * pitch**1.22 if pitch < 0.9 else 230.0 * pitch**0.7
    es = 15.0 + 11.0 * pitch
    d_2 = d - 0.375 * root
    return ThreadLimits(
        pitch, d - (es + major) * 1e-3, d_2 - (es + middle) * 1e-3, d - 0.625 * root + minor * 1e-3,
        d_2 + 1.32 * middle * 1e-3,
    )  # fmt: skip


def external_thread_area(t: ThreadLimits, length: float) -> float:
    """A_SS = π D_1 (m/P) (P/2 + (d_2 − D_1)/√3) in mm²: the bolt's thread cut off at the hole's minor diameter; m in mm.

    Source: VDI 2230, the same as FED-STD-H28/2B for a flank of 30°.
    """
    return math.pi * t.D_1 * length / t.pitch * (t.pitch / 2.0 + (t.d_2 - t.D_1) / math.sqrt(3.0))


def internal_thread_area(t: ThreadLimits, length: float) -> float:
    """A_SG = π d (m/P) (P/2 + (d − D_2)/√3) in mm²: the hole's thread cut off at the bolt's major diameter; m in mm.

    Source: VDI 2230, the same as FED-STD-H28/2B for a flank of 30°.
    """
    return math.pi * t.d * length / t.pitch * (t.pitch / 2.0 + (t.d - t.D_2) / math.sqrt(3.0))


def widening(s: float, d: float) -> float:
    """C_1 = 3.8 s/d − (s/d)² − 2.61, at most 1 (from s/d = 1.9 on), at least 0: walls that give way let the thread slip.

    s is twice the distance (mm) from the bolt's middle to the nearest edge. The formula holds from s/d = 1.4 on and falls
    steeply below. Source: VDI 2230, from memory.
    """
    ratio = s / d
    return 1.0 if ratio >= 1.9 else max(0.0, 3.8 * ratio - ratio**2 - 2.61)


def stripping_capacity(screw: CapScrew, length: float, wall: float, f_u: float) -> tuple[float, str]:
    """Pull (N) at which a thread engaged over ``length`` mm strips, and whose thread that is.

    C_1 C_2,3 · 0.6 R_m A_S, the lower of the bolt's and of the hole's, R_m f_ub or f_u; A_S over m_eff = length − 0.8 P, as
    both ends are chamfered. ``wall`` mm from the bolt's middle to the nearest edge. C_2 and C_3, which allow for bent
    threads and depend on which of them is stronger, are taken at their least. mm, MPa. Source: VDI 2230, thread stripping,
    from memory.
    """
    thread = thread_limits(screw.diameter, thread_pitch(screw.diameter, screw.stress_area))
    effective = max(0.0, length - value("thread", "run_out") * thread.pitch)
    share = widening(2.0 * wall, screw.diameter) * value("thread", "bent") * value("thread", "shear")
    bolt = share * value("bolts", "ultimate") * external_thread_area(thread, effective)
    hole = share * f_u * internal_thread_area(thread, effective)
    return (bolt, "the bolt's thread") if bolt <= hole else (hole, "the tapped thread")

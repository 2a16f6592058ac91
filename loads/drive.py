"""The drive: what winding asks of a motor, and what a given motor makes of it. N·mm, rad, s, V, A; energies in N·mm.

The motor is a direct current motor on a steady supply: a straight line from its stall torque to its free speed, current in
proportion to torque. Turning is slow enough that what turns needs no torque of its own to speed up.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from loads.checks.context import COMMON, Context
from loads.cycle import corner_angles
from loads.linkage import Linkage, state
from loads.practice import value
from loads.records import HOLD, Check
from parts.design import Assumed, Drive, Floats

STEP = math.radians(2.0)  # cells of the integrals to begin with, each with ``POINTS`` points
POINTS = 4
AGREE = 1e-7  # of an integral by which halving the cells may still change it
HALVINGS = 7
LINE = "straight torque–speed line of a direct current motor"


# ------------------------------------------------------------------------------------------------ motor and gear


def at_motor(torque: Floats, reduction: float, efficiency: float, backwards: float) -> Floats:
    """Torque (N·mm) at the motor for one at the disc: M/(N η) where the motor drives, M η_b/N where the disc does.

    Source: power balance of a gear, its efficiency in each direction.
    """
    return np.where(torque >= 0.0, torque / (reduction * efficiency), torque * backwards / reduction)


def motor_speed(torque: Floats, stall: float, free: float) -> Floats:
    """Speed (rad/s) at a torque (N·mm): ω = ω_0 (1 − τ/τ_s); above ω_0 where the load drives, 0 from the stall on.

    Source: back EMF and Ohm's law of a direct current motor with a permanent field.
    """
    return np.asarray(free * np.maximum(1.0 - torque / stall, 0.0))


def rates(values: Floats, speed: Floats) -> Floats:
    """Values over a speed; infinite where it stands still and the value is not 0."""
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(speed > 0.0, values / speed, np.where(values == 0.0, 0.0, np.inf))


# -------------------------------------------------------------------------------------------------- over a shot


@dataclass(frozen=True, slots=True)
class Winding:
    """One machine as the drive feels it, from 0 to the hold."""

    machine: Linkage
    catch: float
    hold: float
    corners: Floats  # crank angles between which everything is smooth, 0 and the hold among them

    def load(self, theta: Floats) -> Floats:
        """Torque (N·mm) that the disc takes in motion, friction included."""
        s = state(self.machine, theta, np.asarray(self.catch))
        return np.asarray(s.torque + s.friction_torque)

    def integral(self, of: Callable[[Floats], Floats]) -> Floats:
        """Integrals (k) over crank angle from 0 to the hold of functions of the load (k, n).

        Gauss-Legendre in cells that are halved until all agree to ``AGREE``; what is infinite somewhere comes out so.
        """
        before = np.asarray(np.inf)
        for halving in range(HALVINGS):
            theta, weights = self._nodes(STEP / 2**halving)
            values = of(self.load(theta))
            finite = np.isfinite(values)
            if not finite.all():
                return np.where(finite.all(axis=-1), np.where(finite, values, 0.0) @ weights, np.inf)
            now = np.asarray(values @ weights)
            if np.all(np.abs(now - before) <= AGREE * np.abs(now)):
                break
            before = now
        return now

    def _nodes(self, step: float) -> tuple[Floats, Floats]:
        x, w = np.polynomial.legendre.leggauss(POINTS)
        pieces = [
            np.linspace(a, b, 1 + max(1, math.ceil((b - a) / step)))[:-1]
            for a, b in zip(self.corners[:-1], self.corners[1:], strict=True)
        ]
        low = np.concatenate(pieces)
        half = np.diff(np.append(low, self.corners[-1])) / 2.0
        return ((low + half)[:, None] + half[:, None] * x).ravel(), (half[:, None] * w).ravel()


def winding(c: Context) -> Winding:
    at = c.past.figures.events
    hold, catch = float(at.hold), float(at.catch)
    inside = [x for x in (catch, *corner_angles(c.past.machine, c.past.figures)) if 0.0 < x < hold]
    return Winding(c.past.machine, catch, hold, np.unique([0.0, *inside, hold]))


@dataclass(frozen=True, slots=True)
class Disc:
    """What the machine asks for at the disc. Friction is in all but the hold."""

    peak: float
    peak_at: float
    peak_with_shock: float
    start: float  # to start from a standstill, at the worst angle
    start_at: float
    mean: float  # over the angle
    energy: float  # of a shot
    least: float  # below 0 where the spring drives the disc forwards
    hold: float
    back_drive: float  # largest torque that unloading backwards asks for
    back_brake: float  # largest that it gives back, which has to be held


def at_disc(c: Context, w: Winding) -> Disc:
    """Torques at the disc, over the angles of the history up to the first of null and release.

    Backwards the sheave's efficiency and all friction turn round: T = F η where the spring unwinds, F/η where it is drawn.
    """
    s, eta = c.past.winding, float(c.past.machine.efficiency)
    on = s.crank_angle <= float(c.past.figures.events.first_end)
    theta, torque, rubbing = s.crank_angle[on], s.torque[on], s.friction_torque[on]
    moving, starting = torque + rubbing, torque + value("motor", "breakaway") * rubbing
    i, k = int(np.argmax(moving)), int(np.argmax(starting))
    energy = float(w.integral(lambda load: load[None, :])[0])
    wound = theta <= w.hold
    slack = np.where(torque >= 0.0, eta**2, 1.0)[wound]
    need = (rubbing[wound] - torque[wound]) * slack
    return Disc(
        peak=float(moving[i]), peak_at=float(theta[i]),
        peak_with_shock=float(moving[i]) * c.design.targets.shock_factor, start=float(starting[k]),
        start_at=float(theta[k]), mean=energy / w.hold, energy=energy, least=float(moving.min()),
        hold=float(c.past.figures.hold_torque), back_drive=max(0.0, float(need.max())),
        back_brake=max(0.0, float(-need.min())),
    )  # fmt: skip


@dataclass(frozen=True, slots=True)
class Demands:
    """What to look for in a motor with its gear, to wind in ``time``; everything at the gear's output."""

    time: float
    speed: float  # rad/s, mean over the winding
    peak_power: float  # N·mm/s, at that speed
    mean_power: float
    stall: float  # N·mm: stall torque times reduction times the gear's efficiency
    free: float  # rad/s: free speed over reduction
    largest_power: float  # N·mm/s that such a motor can give at all


def demands(w: Winding, disc: Disc, time: float) -> Demands:
    """A motor whose stall torque is the usual margin over the peak has to be so fast: with ω = ω_0 (1 − M/M_s) the time is
    ∫dθ/ω, so ω_0 = (1/t) ∫dθ/(1 − M/M_s). Its power is greatest, M_s ω_0/4, at half of each. Source: the straight
    line of a direct current motor.
    """
    stall = value("motor", "stall_margin") * disc.peak
    free = float(w.integral(lambda load: rates(np.ones_like(load), motor_speed(load, stall, 1.0))[None, :])[0]) / time
    speed = w.hold / time
    return Demands(time, speed, disc.peak * speed, disc.energy / time, stall, free, stall * free / 4.0)


@dataclass(frozen=True, slots=True)
class Driven:
    """What a given motor makes of it. ``None``: it stalls, or the design does not tell."""

    time: float | None
    peak: float  # N·mm at the motor, in motion
    mean: float
    start: float  # from a standstill
    stall: float
    peak_power: float | None  # N·mm/s at the motor's shaft
    mean_power: float | None
    shaft_energy: float | None
    peak_current: float | None
    hold_current: float | None
    hold_power: float | None  # W
    charge: float | None  # A·s a shot
    energy: float | None  # J a shot from the supply, at full voltage
    starts_anywhere: bool
    unloads: bool
    back_brake: float  # N·mm at the motor that unloading asks it to hold back


def driven(w: Winding, disc: Disc, drive: Drive, stall: float, free: float) -> Driven:
    """A motor over the winding: t = N ∫dθ/ω, charge = N ∫(τ/k) dθ/ω while the motor drives. Source: as the motor's line."""
    n, eta, back = drive.reduction, drive.efficiency, drive.backdriving_efficiency

    def motor(load: Floats | float) -> Floats:
        return at_motor(np.asarray(load), n, eta, back)

    def integrands(load: Floats) -> Floats:
        torque = motor(load)
        speed = motor_speed(torque, stall, free)
        return np.stack([n * rates(np.ones_like(load), speed), n * rates(np.maximum(torque, 0.0), speed), n * torque])

    time, pushed, work = (float(x) for x in w.integral(integrands))
    peak, start = float(motor(disc.peak)), float(motor(disc.start))
    winds = math.isfinite(time) and peak < stall
    k, volts = drive.torque_constant, drive.supply_voltage
    power = None
    if winds:
        torque = motor(w.load(np.linspace(0.0, w.hold, 721)))
        power = float(np.max(torque * motor_speed(torque, stall, free)))
    holding = at_hold(disc, drive)
    charge = pushed / k if k is not None and winds else None
    own = k is not None and drive.holding_torque is None
    hold_current = holding / k if k is not None and own else None
    return Driven(
        time=time if winds else None, peak=peak, mean=work / (n * w.hold), start=start, stall=stall, peak_power=power,
        mean_power=work / time if winds else None, shaft_energy=work,
        peak_current=None if k is None else peak / k, hold_current=hold_current,
        # the supply's resistance and the winding's are V over the current at the stall
        hold_power=None if hold_current is None or k is None or volts is None else hold_current**2 * volts * k / stall,
        charge=charge, energy=None if charge is None or volts is None else charge * volts,
        starts_anywhere=start < stall, unloads=max(float(motor(disc.back_drive)), disc.back_brake * back / n) < stall,
        back_brake=disc.back_brake * back / n,
    )  # fmt: skip


def at_hold(disc: Disc, drive: Drive) -> float:
    """Torque (N·mm) that holds at the motor: what the spring asks for at the disc, less what the gear itself holds."""
    return max(0.0, disc.hold) * drive.backdriving_efficiency / drive.reduction


# ------------------------------------------------------------------------------------------------------- study


@dataclass(frozen=True, slots=True)
class DriveStudy:
    disc: Disc
    demands: Demands | None  # None where a motor is given, and no time to wind in
    drive: Drive | None
    driven: Driven | None  # None without a motor
    counts: float  # a turn of the disc that the encoder needs
    counts_there: float | None  # and has
    assumed: tuple[Assumed, ...]

    @property
    def holds_with(self) -> float | None:
        """N·mm at the motor: the brake's, else the motor's at a standstill."""
        if self.drive is None:
            return None
        return self.drive.stall_torque if self.drive.holding_torque is None else self.drive.holding_torque

    @property
    def checks(self) -> tuple[Check, ...]:
        return tuple(_checks(self))

    @property
    def cautions(self) -> tuple[str, ...]:
        d = self.driven
        if d is None or self.drive is None:
            return ()
        found = []
        if not d.unloads:
            found.append("The motor can not let the machine down backwards under control: it would run away or stall.")
        if self.drive.holding_torque is None and at_hold(self.disc, self.drive) > 0.0:
            found.append(
                "Nothing but the motor's own current holds the disc at the hold: without power the machine moves, and a "
                "motor that stands still under current gets hot."
            )
        return tuple(found)


def _checks(study: DriveStudy) -> list[Check]:
    """Rows of a given motor, brake and encoder."""
    rows, disc, drive = [], study.disc, study.drive
    if study.driven is not None:
        d = study.driven
        line = "N η at the gear; friction as given"
        rows += [
            Check(
                "motor", "shaft", "starts from every angle", "", disc.start_at, d.start, d.stall, "N·mm", 1.0,
                f"stall torque over torque and {value('motor', 'breakaway'):g} times the friction at a standstill",
                COMMON, line,
            ),
            Check(
                "motor", "shaft", "stall torque", "", disc.peak_at, d.peak, d.stall, "N·mm", value("motor", "stall_margin"),
                f"{LINE}, torque in motion", COMMON, line,
            ),
        ]  # fmt: skip
        if study.demands is not None:
            time = 1e12 if d.time is None else d.time
            rows.append(
                Check(
                    "motor", "shaft", "winding time", "", None, time, study.demands.time, "s", 1.0,
                    f"∫dθ/ω along the {LINE}", COMMON, "" if d.time is not None else "it stalls before the hold",
                )
            )  # fmt: skip
    if drive is not None and study.holds_with is not None:
        by = "motor at a standstill" if drive.holding_torque is None else "brake"
        locks = "the gear locks itself" if drive.backdriving_efficiency == 0.0 else ""
        rows.append(
            Check(
                "motor", "brake", "holds at the hold", HOLD, None, at_hold(disc, drive), study.holds_with, "N·mm",
                value("motor", "hold_margin"), f"{by}, over M η_b/N", COMMON, locks,
            )
        )  # fmt: skip
    if study.counts_there is not None:
        rows.append(
            Check(
                "motor", "encoder", "encoder resolution", HOLD, None, study.counts, study.counts_there, "a turn", 1.0,
                f"one count at most {value('motor', 'count_share'):g} of the hold margin", COMMON,
            )
        )  # fmt: skip
    return rows


def drive_study(c: Context) -> DriveStudy:
    """Of every design: the demands on a motor; with a motor in ``[drive]``, how it does."""
    drive = c.design.drive
    w = winding(c)
    disc = at_disc(c, w)
    assumed: tuple[Assumed, ...] = ()
    wanted = None if drive is None else drive.winding_time
    result = None
    if drive is not None and drive.stall_torque is not None and drive.free_speed is not None:
        result = driven(w, disc, drive, drive.stall_torque, drive.free_speed)
    elif wanted is None:
        wanted = value("motor", "winding_time")
        assumed = (Assumed("drive.winding_time", wanted, "time", f"a motor is looked for, {COMMON}"),)
    there = None
    if drive is not None and drive.encoder_counts is not None:
        there = drive.encoder_counts * (drive.reduction if drive.encoder_on == "motor" else 1.0)
    return DriveStudy(
        disc=disc, demands=None if wanted is None else demands(w, disc, wanted), drive=drive, driven=result,
        counts=math.tau / (value("motor", "count_share") * c.design.mechanism.hold_margin), counts_there=there,
        assumed=assumed,
    )  # fmt: skip

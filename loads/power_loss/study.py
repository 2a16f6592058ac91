"""The study of what happens when the drive is gone. It runs for every design."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from loads.checks.context import Context
from loads.cycle import Events
from loads.inertia import Inertia, inertia_of
from loads.linkage import Linkage, expanded_state, state
from loads.power_loss.bands import RUNS_ON, STAYS, UNWINDS, Fate, Stretch
from loads.power_loss.cautions import power_loss_cautions
from loads.power_loss.coast import Coast, Path, make_path
from loads.power_loss.seat import (
    AS_DESIGNED,
    LEAST,
    RECOMMENDED,
    SeatRow,
    least_seat_angles,
    recommended,
    trade,
)
from loads.power_loss.shims import INCH, METRIC, Shim, shims
from loads.records import Check
from loads.roots import refined_peak
from loads.spring_law import spring_energy
from parts.design import Floats
from parts.stop_back import back_contact

UNWOUND, LOADED, FIRES, STILL = "unwound", "at rest, loaded", "fires", "stays where it is"


@dataclass(frozen=True, slots=True)
class Hill:
    """What a coasting machine finds in the middle, where it does not unwind (N·mm)."""

    arriving: float  # kinetic energy with which it arrives there
    takes: float  # what it loses on the way over


@dataclass(frozen=True, slots=True)
class Band:
    """Crank angles (rad) that share a fate. Energies N·mm, torques N·mm."""

    start: float
    end: float
    fate: Fate
    energy_start: float
    energy_end: float
    creeps_to: float | None  # quasi-static; None where it fires
    creep_ends: str  # "unwound", "at rest, loaded", "fires", "stays where it is"
    creep_energy: float | None
    torque_forward: float  # most that the drive needs to move it out of the band forwards, 0 where it goes by itself
    torque_back: float
    coast: Coast | None  # None where it stays
    hill: Hill | None  # on the way back from above the middle; None where nothing lies in the way


@dataclass(frozen=True, slots=True)
class PowerLoss:
    """Angles in rad, inertia kg·mm²; None where there is no such thing."""

    bands: tuple[Band, ...]
    least: float | None
    recommended: float | None
    reason: str
    rows: tuple[SeatRow, ...]
    shims: tuple[Shim, ...]
    inertia: Inertia
    seated_inertia: float  # about the disc's axis, the link on its stop, without the drive
    back_contact: float | None  # where a machine that runs backwards meets the back of its stop, taut
    hold: float
    seat: float
    cautions: tuple[str, ...] = ()
    checks: tuple[Check, ...] = ()

    @property
    def designed(self) -> SeatRow:
        return next(row for row in self.rows if AS_DESIGNED in row.marks)

    @property
    def fate_at_hold(self) -> Fate:
        return next((b.fate for b in self.bands if b.start < self.hold <= b.end), STAYS)

    @property
    def least_hold_margin(self) -> float:
        """The hold margin from which on the machine unwinds at its hold too."""
        row = self.designed
        first_end = min(row.null, self.bands[-1].end)
        return max(0.0, first_end - row.outcome.unwinds_to)

    @property
    def hold_margin_wanted(self) -> float:
        """The same, rounded up to a tenth of a degree that people can write into the design."""
        tenths = math.degrees(self.least_hold_margin) * 10.0
        return math.radians(math.ceil(tenths + 1e-6) / 10.0) if tenths > 1e-6 else 0.0


def power_loss_study(c: Context) -> PowerLoss | None:
    """Bands, coasting, seat angles and shims of one design; the machine in the context has its friction."""
    machine, figures, design = c.past.machine, c.past.figures, c.design
    m = design.mechanism
    least, scattered = least_seat_angles(machine)
    choice, reason = recommended(machine, least, scattered)
    marked = {AS_DESIGNED: m.seat_angle, LEAST: least, RECOMMENDED: choice}
    rows = trade(machine, marked)
    own = next((row for row in rows if AS_DESIGNED in row.marks), None)
    if own is None:
        return None
    inertia = inertia_of(c.parts, design.drive)
    back = back_contact(c.parts, design, c.sizes).link_angle
    path = make_path(machine, figures, inertia, back, own.outcome.release)
    sheets = METRIC if design.identity.units == "metric" else INCH
    study = PowerLoss(
        bands=make_bands(machine, figures.events, path, own), least=least, recommended=choice, reason=reason, rows=rows,
        shims=shims(m, c.sizes.link.width, c.sizes.stop, sheets, {LEAST: least, RECOMMENDED: choice}), inertia=inertia,
        seated_inertia=inertia.seated(m.crank_radius, m.seat_angle),
        back_contact=path.back_contact if math.isfinite(path.back_contact) else None, hold=float(figures.events.hold),
        seat=m.seat_angle,
    )  # fmt: skip
    return replace(study, cautions=power_loss_cautions(study, design.identity.units))


def make_bands(machine: Linkage, at: Events, path: Path, row: SeatRow) -> tuple[Band, ...]:
    """The bands of one machine with all that is told of each."""
    rows, gap = row.outcome.stretches, row.outcome.middle
    edges = np.array([rows[0].start, *(s.end for s in rows)])
    energy = spring_energy(machine.spring, state(machine, edges, at.catch).draw)
    forward, back = drive_torques(machine, at, rows)
    found = []
    for i, s in enumerate(rows):
        last = i == len(rows) - 1
        creeps_to: float | None
        creep_energy: float | None
        if s.fate == UNWINDS:
            creeps_to, creep_energy = s.start, float(energy[i])
            ends = UNWOUND if all(r.fate == STAYS for r in rows[:i]) else LOADED
        elif s.fate == STAYS:
            creeps_to, creep_energy, ends = None, None, STILL
        else:
            creeps_to, creep_energy = (None, None) if last else (s.end, float(energy[i + 1]))
            ends = FIRES if last else LOADED
        worst = s.end if s.fate == UNWINDS else s.start
        coast = None if s.fate == STAYS else path.coast(worst, forwards=s.fate == RUNS_ON)
        hill = None
        if s.fate == UNWINDS and gap and s.start >= gap[-1].end:
            arriving = path.kinetic(worst, gap[-1].end)
            hill = Hill(arriving, arriving - path.kinetic(worst, gap[0].start))
        found.append(
            Band(
                s.start, s.end, s.fate, float(energy[i]), float(energy[i + 1]), creeps_to, ends, creep_energy,
                float(forward[i]), float(back[i]), coast, hill,
            )
        )  # fmt: skip
    return tuple(found)


def drive_torques(machine: Linkage, at: Events, rows: tuple[Stretch, ...]) -> tuple[Floats, Floats]:
    """Most that the drive needs anywhere in each band (n) to move the disc forwards and back (N·mm), friction in it.

    M + M_f forwards and M_f − M back, no less than 0; T = F/η in both, which is the most that the sheave can ask for.
    """
    m, catch = machine.expanded(), at.catch[..., None]
    cuts = np.linspace(0.0, 1.0, 41)
    start = np.array([s.start for s in rows])
    # the catch itself belongs to the free stage
    start = np.where(start == float(at.catch), np.nextafter(start, np.inf), start)
    end = np.array([s.end for s in rows])
    x = start[:, None] + (end - start)[:, None] * cuts
    ways = np.array([1.0, -1.0])[:, None, None]

    def needed(points: Floats) -> Floats:
        s = expanded_state(m, points.reshape(-1), catch)
        torque, rub = (v.reshape(points.shape) for v in (s.torque, s.friction_torque))
        return np.asarray(ways * torque + rub)

    f = needed(np.stack([x, x]))
    i = np.argmax(f, axis=-1)[..., None]
    both = np.broadcast_to(x, f.shape)
    low, high = (np.take_along_axis(both, np.clip(i + k, 0, 40), -1)[..., 0] for k in (-1, 1))
    # one more round closes in on a jump at the catch as well as on a hump
    _, height = refined_peak(needed, low, high)
    return np.maximum(height[0], 0.0), np.maximum(height[1], 0.0)

"""The study of power loss as it leaves: rows for check.json, a section of the page, a line of the summary."""

from __future__ import annotations

import math
from typing import Any

from exporters import svg
from exporters.check_json import Row, degrees, tidy
from exporters.shown import Shown, angle, figures
from exporters.studies.leaving import Leaving
from loads.examine import Examination
from loads.power_loss.bands import RUNS_ON, UNWINDS
from loads.power_loss.coast import FIRES, IN_REVERSE, TURNS_BACK, Coast
from loads.power_loss.seat import AS_DESIGNED, SeatRow
from loads.power_loss.study import LOADED, UNWOUND, Band, PowerLoss

Pair = tuple[float, float]
NONE = "–"


def power_loss_row(e: Examination, study: PowerLoss) -> Row:
    """Everything, angles in degrees from the start dead centre, energies in J, torques in N·m."""
    own = study.designed
    return {
        "bands": [_band_row(band) for band in study.bands],
        "least_seat_angle_deg": degrees(study.least),
        "self_firing_deg": _pair(own.outcome.self_firing),
        "seat_angle_deg": degrees(study.seat),
        "recommended_seat_angle_deg": degrees(study.recommended),
        "reason": study.reason,
        "unwinds_to_deg": degrees(own.outcome.unwinds_to),
        "fires_from_deg": degrees(own.outcome.fires_from),
        "release_with_friction_deg": degrees(own.outcome.release),
        "hold_deg": degrees(study.hold),
        "hold_fate": study.fate_at_hold,
        "least_hold_margin_deg": degrees(study.least_hold_margin),
        "back_contact_deg": degrees(study.back_contact),
        "inertia_kgm2": tidy(study.seated_inertia * 1e-6, 9),
        "drive_inertia_kgm2": None if study.inertia.drive is None else tidy(study.inertia.drive * 1e-6, 9),
        "trade": [_seat_row(row) for row in study.rows],
        "shims": [
            {"thickness_mm": tidy(s.thickness), "seat_angle_deg": degrees(s.seat), "mark": s.mark} for s in study.shims
        ],
    }  # fmt: skip


def _pair(ends: Pair | None) -> list[float | None] | None:
    return None if ends is None else [degrees(v) for v in ends]


def _joule(value: float | None) -> float | None:
    return None if value is None else tidy(value / 1000.0)


def _band_row(band: Band) -> Row:
    hill, coast = band.hill, band.coast
    return {
        "from_deg": degrees(band.start), "to_deg": degrees(band.end), "fate": band.fate,
        "energy_from_J": _joule(band.energy_start), "energy_to_J": _joule(band.energy_end),
        "creeps_to_deg": degrees(band.creeps_to), "creep_ends": band.creep_ends,
        "creep_energy_J": _joule(band.creep_energy), "torque_forward_Nm": _joule(band.torque_forward),
        "torque_back_Nm": _joule(band.torque_back), "coast": None if coast is None else _coast_row(coast),
        "hill": None if hill is None else {"arriving_J": _joule(hill.arriving), "takes_J": _joule(hill.takes)},
    }  # fmt: skip


def _coast_row(coast: Coast) -> Row:
    driven = coast.speed_with_drive
    return {
        "from_deg": degrees(coast.start), "to_deg": degrees(coast.end), "how": coast.how,
        "kinetic_at_0_J": _joule(coast.kinetic_at_start), "speed_rpm": tidy(_rpm(coast.speed)),
        "speed_at_deg": degrees(coast.speed_at), "speed_with_drive_rpm": None if driven is None else tidy(_rpm(driven)),
    }  # fmt: skip


def _rpm(speed: float) -> float:
    return speed * 30.0 / math.pi


def _seat_row(row: SeatRow) -> Row:
    return {
        "seat_angle_deg": degrees(row.seat), "marks": list(row.marks), "middle_deg": _pair(row.middle),
        "middle_energy_J": _joule(row.middle_energy), "middle_clearance_mm": tidy(row.clearance),
        "unwinds_to_deg": degrees(row.outcome.unwinds_to), "null_deg": degrees(row.null),
        "self_firing_deg": _pair(row.outcome.self_firing), "fires_from_deg": degrees(row.outcome.fires_from),
        "release_with_friction_deg": degrees(row.outcome.release), "given_before_release": tidy(row.given),
        "hold_deg": degrees(row.hold), "energy_at_hold_J": _joule(row.energy_at_hold),
    }  # fmt: skip


# ---------------------------------------------------------------------------------------------- for people


def seat_text(value: float | None) -> str:
    """A seat angle in degrees, to hundredths."""
    return "none" if value is None else f"{_two(value)}°"


def _two(value: float) -> str:
    return angle(value, 2)


def span_text(ends: Pair | None) -> str:
    return NONE if ends is None else f"{angle(ends[0])}–{angle(ends[1])}°"


def power_loss_line(e: Examination, study: PowerLoss) -> str:
    """Where it unwinds, where it does not, and the seat angles."""
    own = study.designed.outcome
    text = f"Without drive it unwinds from anywhere up to {angle(own.unwinds_to)}°"
    if own.middle:
        text += ", but " + " and ".join(f"{s.fate} at {span_text((s.start, s.end))}" for s in own.middle)
    if own.fires_from is not None:
        text += f"; it fires itself from {angle(own.fires_from)}°"
    text += f". Seat angle {seat_text(study.seat)}, least {seat_text(study.least)}"
    return f"{text}, recommended {seat_text(study.recommended)}."


def power_loss_values(e: Examination, study: PowerLoss) -> dict[str, Any]:
    """What the page's section says."""
    from exporters.studies.power_loss_pictures import fate_ring, trade_picture

    shown, own = Shown(e.design.identity.units), study.designed
    return {
        "noun": e.design.far_end.noun,
        "units": {kind: shown.unit(kind) for kind in ("length", "energy", "torque", "inertia")},
        "ring": svg.markup(fate_ring(e, study)),
        "trade": svg.markup(trade_picture(study)),
        "bands": [_shown_band(band, shown) for band in study.bands],
        "least": seat_text(study.least), "recommended": seat_text(study.recommended), "reason": study.reason,
        "seat": seat_text(study.seat), "has_least": study.least is not None,
        "null": angle(own.null), "release": angle(e.figures.events.release.item()),
        "held_on": "–" if math.isnan(own.outcome.release) else angle(own.outcome.release),
        "self_firing": span_text(own.outcome.self_firing) if own.outcome.self_firing else "none",
        "fires_from": None if own.outcome.fires_from is None else angle(own.outcome.fires_from),
        "hold": angle(study.hold), "hold_unwinds": study.fate_at_hold == UNWINDS,
        "least_hold_margin": angle(study.hold_margin_wanted),
        "inertia": shown.quantity(study.seated_inertia, "inertia", 3),
        "drive_inertia": None if study.inertia.drive is None else shown.quantity(study.inertia.drive, "inertia", 3),
        "back_contact": None if study.back_contact is None else angle(study.back_contact),
        "stop": e.sizes.stop.style,
        "rows": [_shown_seat(row, shown) for row in study.rows],
        "shims": [
            {"thickness": shown.number(s.thickness, "length"), "seat": _two(s.seat), "mark": s.mark} for s in study.shims
        ],
    }  # fmt: skip


def _shown_band(band: Band, shown: Shown) -> dict[str, Any]:
    def energy(value: float) -> str:
        return shown.number(value, "energy")

    return {
        "start": angle(band.start), "end": angle(band.end), "fate": band.fate,
        "energy_start": energy(band.energy_start), "energy_end": energy(band.energy_end),
        "creep": _creep_text(band, shown), "coast": _coast_text(band, shown),
        "forward": "by itself" if band.fate == RUNS_ON else shown.number(band.torque_forward, "torque"),
        "back": "by itself" if band.fate == UNWINDS else shown.number(band.torque_back, "torque"),
    }  # fmt: skip


def _creep_text(band: Band, shown: Shown) -> str:
    if band.creeps_to is None:
        return band.creep_ends
    where = f"{'back' if band.fate == UNWINDS else 'on'} to {angle(band.creeps_to)}°"
    if band.creep_ends == UNWOUND:
        return f"{where}, unwound"
    assert band.creep_ends == LOADED
    return f"{where}, at rest with {shown.quantity(band.creep_energy or 0.0, 'energy')}"


def _coast_text(band: Band, shown: Shown) -> str:
    coast = band.coast
    if coast is None:
        return NONE
    text = f"from {angle(coast.start)}° "
    if coast.how == TURNS_BACK and coast.end is not None:
        text += f"to {angle(coast.end)}°"
        text += ", past 0° into the reversed machine" if coast.end < 0.0 else ""
    elif coast.how == FIRES:
        text += "to the release: it fires"
    elif coast.how == IN_REVERSE:
        text += "through the reversed machine, which fires in reverse"
    else:
        text += "further than can be told"
    text += f"; at most {figures(_rpm(coast.speed), 3)} rpm at {angle(coast.speed_at)}°"
    if coast.speed_with_drive is not None:
        text += f", {figures(_rpm(coast.speed_with_drive), 3)} rpm with the drive turning along"
    if band.hill is not None:
        arriving, takes = (shown.quantity(v, "energy") for v in (band.hill.arriving, band.hill.takes))
        text += f". It comes to the middle with {arriving}, which takes {takes}"
    return text


def _shown_seat(row: SeatRow, shown: Shown) -> dict[str, Any]:
    o = row.outcome
    return {
        "seat": _two(row.seat), "marks": ", ".join(row.marks),
        "designed": AS_DESIGNED in row.marks, "middle": span_text(row.middle),
        "energy": shown.number(row.middle_energy, "energy") if row.middle else NONE,
        "unwinds_to": angle(o.unwinds_to), "self_firing": span_text(o.self_firing),
        "fires_from": angle(o.fires_from), "given": f"{max(row.given, 0.0):.1%}" if o.self_firing else NONE,
        "hold": angle(row.hold), "at_hold": shown.number(row.energy_at_hold, "energy"),
    }  # fmt: skip


LEAVING = Leaving("When the drive is gone", power_loss_row, power_loss_values, power_loss_line)

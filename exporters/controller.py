"""For whoever writes the controller: angles as encoder counts, what is allowed in each band, what to do on a lost signal.

Written as ``controller.json`` and shown as a table on the page of procedures.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from exporters.check_json import Row, degrees, design_row, dump
from loads.drive import DriveStudy
from loads.examine import Examination
from loads.power_loss.study import Band, PowerLoss

FORMAT = 1
FULL_TURN = 2.0 * math.pi

FORWARD, BACK, STAND = "forwards under power", "backwards under power", "standing"


@dataclass(frozen=True)
class Position:
    """A named crank angle (rad) and what happens there."""

    name: str
    angle: float
    meaning: str


@dataclass(frozen=True)
class Zone:
    """A band of crank angles: what the machine does in it without drive, what is allowed, and the safe action."""

    start: float
    end: float
    fate: str
    allowed: tuple[str, ...]
    on_loss: str
    why: str


def power_loss(e: Examination) -> PowerLoss | None:
    found = e.studies.get("power_loss")
    return found if isinstance(found, PowerLoss) else None


def drive_study(e: Examination) -> DriveStudy | None:
    found = e.studies.get("drive")
    return found if isinstance(found, DriveStudy) else None


def positions(e: Examination) -> list[Position]:
    """Every angle that a controller has to know, in order."""
    at, f, known, noun = e.figures.events, e.figures, power_loss(e), e.design.far_end.noun
    rows = [
        Position(
            "zero", 0.0, f"start dead centre: crank pin and {noun} in line with the disc axis, spring least drawn"
        ),
        Position("catch", float(at.catch), "the stop takes the link"),
        Position("middle", float(f.middle_least_at), "least torque between the two peaks"),
        Position("hold", float(at.hold), "where the machine waits"),
        Position("null", float(at.null), "the torque changes sign: from here the spring turns the disc forwards"),
        Position("release", float(at.release), "the link lifts off its stop: the spring is let go"),
    ]
    if known is not None and known.back_contact is not None:
        rows.append(Position("back of the stop", known.back_contact, f"met when run backwards, the {noun} taut"))
    if known is not None and known.designed.outcome.fires_from is not None:
        rows.append(
            Position("fires by itself", known.designed.outcome.fires_from, "the spring beats friction from here on")
        )
    return sorted(rows, key=lambda row: row.angle)


def holder(e: Examination) -> str:
    """What holds the disc at a standstill: the brake, where the design gives one or no drive at all; else the drive."""
    drive = e.design.drive
    return "brake closed" if drive is None or drive.holding_torque is not None else "drive holding"


def stop_words(e: Examination) -> str:
    """The first of all safe actions."""
    return "stop the drive and close the brake" if holder(e) == "brake closed" else "stop the drive, which has to hold"


def counts_per_turn(e: Examination) -> float | None:
    """Counts of the encoder a turn of the disc; None where the design gives no encoder."""
    drive = e.design.drive
    if drive is None or drive.encoder_counts is None:
        return None
    return drive.encoder_counts * (drive.reduction if drive.encoder_on == "motor" else 1.0)


def counts(e: Examination, angle: float | None) -> int | None:
    per_turn = counts_per_turn(e)
    return None if per_turn is None or angle is None else round(angle / FULL_TURN * per_turn)


def zones(e: Examination) -> list[Zone]:
    """What is allowed where, from the back of the stop to where the link is let go."""
    known, at = power_loss(e), e.figures.events
    found = []
    if known is not None and known.back_contact is not None:
        found.append(
            Zone(known.back_contact, 0.0, "mirrored machine beyond", (FORWARD,), stop_words(e), _below_zero(e))
        )
    hold, first_end = float(at.hold), float(at.first_end)
    for band in known.bands if known is not None else ():
        for start, end in _cut(band.start, band.end, (hold, first_end)):
            found.append(_zone(e, band, start, end, hold, first_end))
    return found


def _below_zero(e: Examination) -> str:
    if e.design.mechanism.reverse == "rated":
        return "running backwards winds a mirrored machine that fires in reverse; the parts are rated for it, people are not"
    return (
        "running backwards winds a mirrored machine that fires in reverse: never go below zero by more than the play; if it "
        "is there, come back forwards slowly"
    )


def _cut(start: float, end: float, marks: tuple[float, ...]) -> list[tuple[float, float]]:
    edges = [start, *(m for m in marks if start + 1e-9 < m < end - 1e-9), end]
    return list(pairwise(edges))


def _zone(e: Examination, band: Band, start: float, end: float, hold: float, first_end: float) -> Zone:
    drive, stop = drive_study(e), stop_words(e)
    back = (BACK,) if drive is None or drive.driven is None or drive.driven.unloads else ()
    stand = f"{STAND}, {holder(e)}"
    if start >= first_end - 1e-9:
        allowed: tuple[str, ...] = (FORWARD,)
        loss = "treat as fired: keep everybody out until everything is at rest and the spring let down"
        why = "past the null or the release: it fires, or will at a touch"
    elif start >= hold - 1e-9:
        allowed = (FORWARD, *back)
        loss = f"{stop}; do not try to reach the hold without a signal"
        why = "between hold and firing: go forwards only to fire"
    elif band.fate == "unwinds":
        allowed = (FORWARD, *back, stand)
        loss = f"{stop}; if nothing holds it, it runs back by itself: keep clear"
        why = "without drive and brake it unwinds"
    elif band.fate == "stays":
        allowed = (FORWARD, *back, stand)
        loss = f"{stop}; the spring stays drawn: unload by the procedure, never by touch"
        why = "friction alone holds it: a knock can set it going either way"
    else:
        allowed = (FORWARD,)
        loss = f"{stop}; if nothing holds it, it runs on forwards by itself"
        why = "without drive it goes on winding or fires: never stop here"
    return Zone(start, end, band.fate, allowed, loss, why)


def controller_document(e: Examination) -> dict[str, Any]:
    """``controller.json``. Counts are null where the design gives no encoder."""
    per_turn, drive = counts_per_turn(e), e.design.drive
    needed = drive_study(e)
    rows: list[Row] = [
        {"name": p.name, "angle_deg": degrees(p.angle), "counts": counts(e, p.angle), "meaning": p.meaning}
        for p in positions(e)
    ]
    bands: list[Row] = [
        {
            "from_deg": degrees(z.start), "to_deg": degrees(z.end), "from_counts": counts(e, z.start),
            "to_counts": counts(e, z.end), "without_drive": z.fate, "allowed": list(z.allowed), "on_lost_signal": z.on_loss,
            "why": z.why,
        }
        for z in zones(e)
    ]  # fmt: skip
    return {
        "format": FORMAT,
        "design": design_row(e),
        "encoder": {
            "counts_per_turn_of_disc": per_turn, "on": None if drive is None else drive.encoder_on,
            "counts_needed": None if needed is None else math.ceil(needed.counts),
            "direction": "counts grow in the direction of rotation, zero at the start dead centre",
        },
        "positions": rows,
        "bands": bands,
        "cautions": list(e.cautions),
    }  # fmt: skip


def controller_json(e: Examination) -> str:
    return dump(controller_document(e))

"""What is to be said of a machine that loses its drive, in sentences."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import TYPE_CHECKING

from loads.power_loss.bands import UNWINDS
from loads.power_loss.coast import IN_REVERSE
from parts.quantities import KINDS, Units, factor

if TYPE_CHECKING:
    from loads.power_loss.study import PowerLoss


def power_loss_cautions(study: PowerLoss, units: Units) -> tuple[str, ...]:
    return tuple(_sentences(study, units))


def _sentences(study: PowerLoss, units: Units) -> Iterator[str]:
    row = study.designed
    gap = row.outcome.middle
    least = (
        "no seat angle unwinds there" if study.least is None else f"the least that unwinds there is {seat(study.least)}"
    )
    if gap:
        where = ", ".join(f"{s.fate} from {deg(s.start)} to {deg(s.end)}" for s in gap)
        yield (
            f"Without its drive the machine {where} with up to {energy(row.middle_energy, units)} stored: it does not "
            f"unwind from everywhere. The seat angle is {seat(study.seat)}; {least}."
        )
    elif row.clearance <= 1e-9:
        yield (
            "Near the middle of the turn the drive torque falls to what friction takes: without drive the machine can stop "
            f"there with the spring drawn. The seat angle is {seat(study.seat)}; {least}."
        )
    if study.fate_at_hold != UNWINDS:
        yield (
            f"Without its drive the machine {study.fate_at_hold} at its hold, {deg(study.hold)}: it unwinds from up to "
            f"{deg(row.outcome.unwinds_to)} only; a hold margin of {deg(study.hold_margin_wanted)} would do."
        )
    if row.outcome.self_firing is not None:
        null, end = row.outcome.self_firing
        from_ = row.outcome.fires_from
        text = (
            f"From {deg(null)} (null) to {deg(end)}, where its pins' friction lets the link go, the spring drives the "
        )
        if from_ is not None:
            text += (
                f"disc forwards, from {deg(from_)} on against friction too: past the null the machine fires by itself."
            )
        else:
            text += (
                "disc forwards, though not against the joints' friction: past the null a knock may fire the machine."
            )
        yield text
    back = [b.coast for b in study.bands if b.fate == UNWINDS and b.coast is not None]
    worst = max(back, key=lambda coast: coast.start, default=None)
    if worst is not None and (worst.end is None or worst.end < 0.0):
        if worst.end is not None:
            how = f"to {deg(worst.end)}, into the reversed machine"
        elif worst.how == IN_REVERSE:
            how = "through the reversed machine, and fire it in reverse"
        else:
            how = "further than can be told here"
        yield (
            f"Let go at {deg(worst.start)} it could coast back past 0° {how}, at up to {rpm(worst.speed)}, with no losses "
            "but its joints' friction."
        )


def deg(value: float) -> str:
    return f"{math.degrees(value):.1f}°".replace("-", "\N{MINUS SIGN}")


def seat(value: float) -> str:
    return f"{math.degrees(value):.2f}°".replace("-", "\N{MINUS SIGN}")


def rpm(speed: float) -> str:
    """A speed (rad/s) in three figures."""
    return f"{float(f'{speed * 30.0 / math.pi:.3g}'):g} rpm"


def energy(value: float, units: Units) -> str:
    unit = KINDS["energy"].metric if units == "metric" else KINDS["energy"].us
    return f"{value / factor('energy', unit):.4g} {unit}"

"""The cautions that go with every output: stored energy first, then what this design's own numbers call for."""

from __future__ import annotations

import math

from loads.chain_study import LIFTING_SPEED, ChainStudy
from loads.cycle import Cycle
from loads.records import Check
from parts.design import Design
from parts.quantities import KINDS, factor
from parts.sizes import Sizes

LEAST_MARGIN = math.radians(1.0)  # common practice, no source
MUCH_AT_HOLD = 0.15  # of the largest torque


def cautions(design: Design, figures: Cycle, sizes: Sizes, checks: tuple[Check, ...]) -> tuple[str, ...]:
    """One sentence a caution, the general ones first."""
    unit = KINDS["energy"].metric if design.identity.units == "metric" else KINDS["energy"].us
    energy = f"{float(figures.stored_energy) / factor('energy', unit):.4g} {unit}"
    rows = [
        f"Stored energy: at the hold the spring holds {energy}. It can maim or kill without warning.",
        "Keep clear of the line of fire and of the chain's plane whenever the spring may be drawn.",
        "Unwind the spring and lock the drive out before reaching in (ISO 14118: unexpected start-up).",
        "Work behind a guard and with a second person; reduce risk in the order that ISO 12100 gives.",
        "Local rules and a licensed engineer come before this bill: it is a calculation, not an approval.",
    ]
    if design.mechanism.hold_margin < LEAST_MARGIN:
        rows.append(
            f"The hold lies only {math.degrees(design.mechanism.hold_margin):.2g}° before it fires: play, a worn chain or "
            "an encoder's step may be more than that."
        )
    peak = max(float(figures.first_peak), float(figures.second_peak))
    if float(figures.hold_torque) > MUCH_AT_HOLD * peak:
        share = float(figures.hold_torque) / peak
        rows.append(
            f"At the hold the spring still turns the disc back with {share:.0%} of the largest torque: the drive or its "
            "brake must hold that; a smaller hold margin leaves less."
        )
    far = design.far_end
    if not far.confirmed:
        rows.append(
            f"The ratings of {far.noun} {far.designation} are from memory: confirm them with the maker's certificate."
        )
    parts = (sizes.disc, sizes.link, sizes.stop, sizes.crank_pin, sizes.chain_pin, sizes.chain_end)
    memory = sorted({p.material.name for p in parts if not p.material.confirmed})
    if memory:
        rows.append(
            f"The strengths of {', '.join(memory)} are from memory: confirm them with certificates before building."
        )
    if any("from memory" in row.source for row in checks):
        rows.append("Some checks stand on other values from memory; their sources say which.")
    return tuple(rows)


def chain_cautions(noun: str, study: ChainStudy | None) -> tuple[str, ...]:
    """The chain's speed while it winds against the practice of lifting; the figure where no disc speed is given."""
    if study is None or noun != "chain":
        return ()
    practice = f"{_per_minute(LIFTING_SPEED)} m/min to which lifting chains are kept (common practice)"
    after = "After the release the spring, not the drive, sets the chain's speed."
    limit = study.limit_disc_speed * 30.0 / math.pi
    if math.isinf(limit):
        return ()
    if study.disc_speed is None:
        return (
            f"Chain speed: no disc speed is given. While winding the chain reaches the {practice} at {limit:.3g} rpm. "
            + after,
        )
    fastest = study.most_reach * study.disc_speed
    if fastest <= LIFTING_SPEED:
        return ()
    return (
        f"Chain speed: while winding up to {_per_minute(fastest)} m/min at {math.degrees(study.most_reach_at):.0f}°, "
        f"above the {practice}, which would be {limit:.3g} rpm. " + after,
    )


def _per_minute(speed: float) -> str:
    return f"{speed * 0.06:.3g}"

"""The chain's study as it leaves: facts and adjustment table for check.json, for the page and for the summary."""

from __future__ import annotations

import math
from typing import Any

from exporters.check_json import Row, degrees, tidy
from exporters.shown import Shown, angle, figures
from loads.chain_study import BY_DESIGN, BY_WEAR, DISCARD, LIFTING_SPEED, Adjustment, ChainStudy
from loads.examine import Examination


def _rpm(speed: float) -> float:
    return speed * 30.0 / math.pi


def _per_minute(speed: float) -> float:
    return speed * 0.06


def length_text(study: ChainStudy) -> str:
    """How long the chain is, in words, as far as it is known."""
    if study.taut_length is None:
        return (
            f"the length depends on chain.run_to_spring, which is not given; up to where it leaves the sheave it takes "
            f"{study.up_to_sheave / study.pitch:.2f} pitches"
        )
    return f"{study.taut_length / study.pitch:.2f} pitches taut, so {study.whole_pitches} of them"


def ends_text(e: Examination) -> str | None:
    """What the chain's far end has to be: its links alternate, and the chain end stands in for an inner link."""
    pitches = e.chain.whole_pitches
    if pitches is None:
        return None
    if pitches % 2:
        return f"{pitches} is odd: both ends are outer links, so the spring's end takes a block like the chain end"
    other = (
        "an offset link makes both ends alike" if e.design.chain.kind == "roller" else "leaf chain has no offset link"
    )
    return f"{pitches} is even: the spring's end is an inner link and takes a fork round it; {other}"


def chain_row(e: Examination) -> Row:
    """Lengths at the start dead centre between the chain's first and last pin; speeds while winding."""
    s, speed = e.chain, e.chain.disc_speed
    return {
        "designation": e.design.chain.designation,
        "pitch_mm": tidy(s.pitch),
        "straight_mm": tidy(s.straight),
        "on_sheave_mm": tidy(s.on_sheave),
        "run_to_spring_mm": None if s.run_to_spring is None else tidy(s.run_to_spring),
        "taut_length_mm": None if s.taut_length is None else tidy(s.taut_length),
        "pitches_up_to_sheave": tidy(s.up_to_sheave / s.pitch),
        "whole_pitches": s.whole_pitches,
        "slack_of_whole_pitches_mm": None if s.slack_of_whole is None else tidy(s.slack_of_whole),
        "length": length_text(s),
        "ends": ends_text(e),
        "elongation_limit": DISCARD,
        "elongation_mm": tidy(s.wear),
        "angle_per_link_deg": degrees(s.angle_per_link),
        "sheave_radius_in_pitches": tidy(s.sheave_in_pitches),
        "speed_limit_m_min": tidy(_per_minute(LIFTING_SPEED)),
        "disc_speed_at_limit_rpm": tidy(_rpm(s.limit_disc_speed)),
        "largest_speed_m_min": None if speed is None else tidy(_per_minute(s.most_reach * speed)),
        "speed_at_release_m_min": None if speed is None else tidy(_per_minute(s.release_reach * speed)),
    }


def adjustment_rows(e: Examination) -> list[Row]:
    """The machine at other slacks; see :class:`loads.chain_study.Adjustment`."""
    return [_adjustment(row) for row in e.chain.rows]


def _adjustment(row: Adjustment) -> Row:
    return {
        "slack_mm": tidy(row.slack), "by": row.by, "pitches": row.pitches,
        "draw_at_hold_mm": tidy(row.draw_at_hold), "stored_energy_J": tidy(row.stored_energy / 1000.0),
        "first_peak_Nm": tidy(row.first_peak / 1000.0), "second_peak_Nm": tidy(row.second_peak / 1000.0),
        "middle_least_Nm": tidy(row.middle_least / 1000.0), "hold_torque_Nm": tidy(row.hold_torque / 1000.0),
        "hold_margin_deg": degrees(row.hold_margin), "largest_tension_N": tidy(row.largest_tension),
    }  # fmt: skip


def chain_values(e: Examination) -> dict[str, Any]:
    """Facts as (name, value) and the adjustment table as texts, for the page."""
    s, shown = e.chain, Shown(e.design.identity.units)

    def length(value: float) -> str:
        return shown.quantity(value, "length")

    def speed(value: float) -> str:
        return f"{figures(_per_minute(value))} m/min"

    facts = [
        ("length, first pin to last, taut at the start", length_text(s)),
        ("straight, then on the sheave", f"{length(s.straight)}, {length(s.on_sheave)}"),
    ]
    if s.slack_of_whole is not None:
        facts.append(("slack that whole pitches leave", length(s.slack_of_whole)))
    if (ends := ends_text(e)) is not None:
        facts.append(("its two ends", ends))
    what = "of the whole chain" if s.taut_length is not None else "of the part up to the sheave"
    facts += [
        ("discard at 3 % elongation (common practice)", f"{length(s.wear)} {what}"),
        (
            "bending over the sheave",
            ("a link spans more than the sheave" if s.angle_per_link is None else f"{angle(s.angle_per_link)}° a link")
            + f", pitch radius {figures(s.sheave_in_pitches)} pitches",
        ),
        (
            "disc speed at which winding reaches 30 m/min (lifting practice)",
            f"{figures(_rpm(s.limit_disc_speed))} rpm, first at {angle(s.most_reach_at)}°",
        ),
    ]
    if s.disc_speed is not None:
        fast, late = s.most_reach * s.disc_speed, s.release_reach * s.disc_speed
        facts.append(("speed while winding, and just before the release", f"{speed(fast)}, {speed(late)}"))
    chain = e.design.chain
    return {
        "designation": chain.designation,
        "kind": chain.kind,
        "facts": facts,
        "rows": [_shown_row(row, shown) for row in s.rows],
        "pitches": s.taut_length is not None,
    }


def _shown_row(row: Adjustment, shown: Shown) -> dict[str, Any]:
    return {
        "designed": row.by == BY_DESIGN,
        "slack": shown.number(row.slack, "length"),
        "by": row.by,
        "pitches": "–" if row.pitches is None else str(row.pitches),
        "draw": shown.number(row.draw_at_hold, "length"),
        "energy": shown.number(row.stored_energy, "energy"),
        "first": shown.number(row.first_peak, "torque"),
        "second": shown.number(row.second_peak, "torque"),
        "hold": shown.number(row.hold_torque, "torque"),
        "margin": angle(row.hold_margin),
        "tension": shown.number(row.largest_tension, "force"),
    }


def adjustment_line(e: Examination) -> str:
    """What wear does to this machine and where the whole table is, in one or two sentences."""
    s, shown = e.chain, Shown(e.design.identity.units)
    where = f"{len(s.rows)} settings of its slack are in --json and in the bill."
    now, worn = s.row(BY_DESIGN), s.row(BY_WEAR)
    if now is None or worn is None:
        return f"Chain: {where}"
    return (
        f"Chain: worn by 3 % it is {shown.quantity(s.wear, 'length', 3)} longer, the draw at the hold "
        f"{shown.quantity(worn.draw_at_hold, 'length')} and the energy {shown.quantity(worn.stored_energy, 'energy')}. "
        + where
    )

"""The chain's study as it leaves: facts and adjustment table for check.json, for the page and for the summary."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from exporters.check_json import Row, degrees, tidy
from exporters.shown import Shown, angle, figures
from loads.chain_study import BY_DESIGN, BY_WEAR, DISCARD, LIFTING_SPEED, Adjustment, ChainStudy
from loads.examine import Examination
from loads.lines import TiedLine
from parts.far_ends.base import FarEnd
from parts.far_ends.chain import Chain
from parts.far_ends.tie import Slide, Tie


def _rpm(speed: float) -> float:
    return speed * 30.0 / math.pi


def _per_minute(speed: float) -> float:
    return speed * 0.06


def length_text(noun: str, study: ChainStudy) -> str:
    """How long it is, in words, as far as it is known; a chain's in pitches, else in mm."""
    if study.taut_length is None:
        so_far = "" if study.pitch is None else f"; up to where it leaves the sheave it takes {_pitches(study)} pitches"
        return f"the length depends on {noun}.run_to_spring, which is not given{so_far}"
    if study.pitch is None:
        return f"{study.taut_length:.1f} mm taut, from pin to pin"
    return f"{study.taut_length / study.pitch:.2f} pitches taut, so {study.whole_pitches} of them"


def _pitches(study: ChainStudy) -> str:
    return "" if study.pitch is None else f"{study.up_to_sheave / study.pitch:.2f}"


def ends_text(far: FarEnd, study: ChainStudy) -> str | None:
    """What a chain's far end has to be: its links alternate, and the chain end stands in for an inner link."""
    pitches = study.whole_pitches
    if pitches is None or not isinstance(far, Chain):
        return None
    if pitches % 2:
        return f"{pitches} is odd: both ends are outer links, so the spring's end takes a block like the chain end"
    other = "an offset link makes both ends alike" if far.kind == "roller" else "leaf chain has no offset link"
    return f"{pitches} is even: the spring's end is an inner link and takes a fork round it; {other}"


def far_end_row(e: Examination) -> Row:
    """What leads from the chain pin to the spring, whatever its kind."""
    far, s = e.design.far_end, e.chain
    row: Row = {
        "kind": far.table,
        "designation": far.designation,
        "min_tensile_strength_N": tidy(far.min_tensile_strength) if far.min_tensile_strength else None,
        "mass_per_metre_kg": None if far.mass_per_metre is None else tidy(far.mass_per_metre),
        "slack_mm": tidy(far.slack),
        "source": far.source,
        "confirmed": far.confirmed,
    }
    if isinstance(far, Tie):
        line = e.past.winding.line
        assert isinstance(line, TiedLine)
        kind = "slide" if isinstance(far.output, Slide) else "rocker"
        row |= {
            "length_mm": tidy(far.length),
            "output": kind,
            "least_transmission_cosine": tidy(float(line.closing.min())),
        }
    if s is not None:
        row |= _study_row(far, s)
    return row


def _study_row(far: FarEnd, s: ChainStudy) -> Row:
    """Lengths at the start dead centre between first and last pin; speeds while winding."""
    speed = s.disc_speed
    return {
        "straight_mm": tidy(s.straight),
        "on_sheave_mm": tidy(s.on_sheave),
        "run_to_spring_mm": None if s.run_to_spring is None else tidy(s.run_to_spring),
        "taut_length_mm": None if s.taut_length is None else tidy(s.taut_length),
        "length": length_text(far.noun, s),
        "speed_limit_m_min": tidy(_per_minute(LIFTING_SPEED)),
        "disc_speed_at_limit_rpm": tidy(_rpm(s.limit_disc_speed)),
        "largest_speed_m_min": None if speed is None else tidy(_per_minute(s.most_reach * speed)),
        "speed_at_release_m_min": None if speed is None else tidy(_per_minute(s.release_reach * speed)),
    }


def chain_row(e: Examination) -> Row | None:
    """A chain by its pitches; None where the far end is no chain."""
    s, far = e.chain, e.design.far_end
    if s is None or s.pitch is None:
        return None
    return {
        "designation": far.designation,
        "pitch_mm": tidy(s.pitch),
        **_study_row(far, s),
        "pitches_up_to_sheave": tidy(s.up_to_sheave / s.pitch),
        "whole_pitches": s.whole_pitches,
        "slack_of_whole_pitches_mm": None if s.slack_of_whole is None else tidy(s.slack_of_whole),
        "ends": ends_text(far, s),
        "elongation_limit": DISCARD,
        "elongation_mm": tidy(s.wear),
        "angle_per_link_deg": degrees(s.angle_per_link),
        "sheave_radius_in_pitches": None if s.sheave_in_pitches is None else tidy(s.sheave_in_pitches),
    }


def adjustment_rows(e: Examination) -> list[Row]:
    """The machine at other slacks; see :class:`loads.chain_study.Adjustment`. Empty for a tie."""
    return [] if e.chain is None else [_adjustment(row) for row in e.chain.rows]


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
    s, far, shown = e.chain, e.design.far_end, Shown(e.design.identity.units)
    kind = far.kind if isinstance(far, Chain) else far.table
    if s is None:
        facts = [("length between its eyes", shown.quantity(e.sizes.chain_end.length, "length")), _tied(e)]
        return {"noun": far.noun, "designation": far.designation, "kind": kind, "facts": facts, "rows": []}

    def length(value: float) -> str:
        return shown.quantity(value, "length")

    def speed(value: float) -> str:
        return f"{figures(_per_minute(value))} m/min"

    facts = [
        ("length, first pin to last, taut at the start", length_text(far.noun, s)),
        ("straight, then on the sheave", f"{length(s.straight)}, {length(s.on_sheave)}"),
    ]
    if s.slack_of_whole is not None:
        facts.append(("slack that whole pitches leave", length(s.slack_of_whole)))
    if (ends := ends_text(far, s)) is not None:
        facts.append(("its two ends", ends))
    if s.sheave_in_pitches is not None:
        what = "of the whole chain" if s.taut_length is not None else "of the part up to the sheave"
        facts += [
            ("discard at 3 % elongation (common practice)", f"{length(s.wear)} {what}"),
            (
                "bending over the sheave",
                (
                    "a link spans more than the sheave"
                    if s.angle_per_link is None
                    else f"{angle(s.angle_per_link)}° a link"
                )
                + f", pitch radius {figures(s.sheave_in_pitches)} pitches",
            ),
        ]
    facts.append(
        (
            "disc speed at which winding reaches 30 m/min (lifting practice)",
            f"{figures(_rpm(s.limit_disc_speed))} rpm, first at {angle(s.most_reach_at)}°",
        )
    )
    if s.disc_speed is not None:
        fast, late = s.most_reach * s.disc_speed, s.release_reach * s.disc_speed
        facts.append(("speed while winding, and just before the release", f"{speed(fast)}, {speed(late)}"))
    return {
        "noun": far.noun,
        "designation": far.designation,
        "kind": kind,
        "facts": facts,
        "rows": [_shown_row(row, shown) for row in s.rows],
        "pitches": s.whole_pitches is not None,
    }


def _tied(e: Examination) -> tuple[str, str]:
    line = e.past.winding.line
    assert isinstance(line, TiedLine)
    i = int(np.argmin(line.closing))
    turned = math.acos(min(1.0, max(-1.0, float(line.closing[i]))))
    return (
        "greatest angle between it and the way of its pin",
        f"{angle(turned)}° at {angle(float(e.past.winding.crank_angle[i]))}°",
    )


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


def adjustment_line(e: Examination) -> str | None:
    """What wear does to this machine and where the whole table is, in one or two sentences; None for a tie."""
    s, shown = e.chain, Shown(e.design.identity.units)
    if s is None:
        return None
    where = f"{len(s.rows)} settings of its slack are in --json and in the bill."
    now, worn, name = s.row(BY_DESIGN), s.row(BY_WEAR), e.design.far_end.noun.capitalize()
    if now is None or worn is None:
        return f"{name}: {where}"
    return (
        f"{name}: worn by 3 % it is {shown.quantity(s.wear, 'length', 3)} longer, the draw at the hold "
        f"{shown.quantity(worn.draw_at_hold, 'length')} and the energy {shown.quantity(worn.stored_energy, 'energy')}. "
        + where
    )

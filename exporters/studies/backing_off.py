"""The study of backing off as it leaves: a row of check.json, a section of the page, a line of the summary."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from exporters import svg
from exporters.check_json import Row, degrees, tidy
from exporters.curves import HIGH, LEFT, TOP, WIDE, axis, panel, tick_text
from exporters.shown import Shown, angle
from exporters.studies.leaving import Leaving
from loads.backing_off import BackingOff, reversed_curve
from loads.examine import Examination

NONE = "–"


def backing_off_row(e: Examination, study: BackingOff) -> Row:
    """Crank angles in degrees, negative where the machine has been turned back; link angles are λ. Lengths in mm.

    ``poses``: what stop and chain leave of the link angle while the chain is slack, crank angles −180 to 180.
    """
    reach = study.poses.reach
    theta, pull = reversed_curve(study)
    return {
        "back_contact_deg": degrees(study.back_contact),
        "reversed_pull_mm": _length(study.pull),
        "carrying_slack_mm": _length(study.carrying_slack),
        "reverse": "rated" if study.rated else "forbidden",
        "back_link_angle_deg": degrees(study.contact.link_angle),
        "taken_up_deg": degrees(study.taken_up),
        "back_reach_mm": tidy(study.contact.reach),
        "second_arm_mm": tidy(study.second_arm),
        "forward_pull_mm": tidy(study.forward_pull),
        "reversed_draw_mm": _length(study.draw),
        "overdraws": study.overdraws,
        "reversed_null_deg": degrees(study.null),
        "reversed_release_deg": degrees(study.release),
        "fires_from_deg": degrees(study.fires),
        "reversed_tension_N": tidy(float(study.reversed_figures.largest_tension)) if study.runs else None,
        "reversed_stop_N": tidy(float(study.reversed_figures.largest_stop)) if study.runs else None,
        "slack_mm": tidy(study.slack),
        "carries": study.carries,
        "slack_from_deg": None if reach is None else degrees(reach[0]),
        "slack_to_deg": None if reach is None else degrees(reach[1]),
        "poses": _poses(study),
        "curve": [{"crank_angle_deg": degrees(t), "pull_mm": tidy(p)} for t, p in zip(theta, pull, strict=True)],
    }  # fmt: skip


def _length(value: float | None) -> float | None:
    return None if value is None else tidy(value)


def _poses(study: BackingOff) -> list[Row]:
    """One row a crank angle and interval."""
    return [
        {
            "crank_angle_deg": degrees(float(theta)), "link_from_deg": degrees(float(low)),
            "link_to_deg": degrees(float(high)),
        }
        for theta, lows, highs in zip(study.poses.crank_angle, study.poses.low, study.poses.high, strict=True)
        for low, high in zip(lows, highs, strict=True)
        if np.isfinite(low)
    ]  # fmt: skip


def backing_off_line(e: Examination, study: BackingOff) -> str | None:
    """Where the stop's back is met and what lies beyond."""
    if study.back_contact is None:
        return None
    shown = Shown(e.design.identity.units)
    text = f"Backing off: the stop's back is met at {angle(study.back_contact)}°"
    if study.fires is not None and study.pull is not None:
        text += f", beyond it fires in reverse from {angle(study.fires)}°, pull {shown.quantity(study.pull, 'length')}"
    text += ", rated for it" if study.rated else ", forbidden"
    if study.carrying_slack is not None:
        text += f". The back carries the link from {shown.quantity(study.carrying_slack, 'length')} of slack"
    return f"{text}."


def backing_off_values(e: Examination, study: BackingOff) -> dict[str, Any]:
    """What the page's section says."""
    shown, reach = Shown(e.design.identity.units), study.poses.reach

    def length(value: float | None) -> str:
        return NONE if value is None else shown.quantity(value, "length")

    def deg(value: float | None) -> str:
        return NONE if value is None else f"{angle(value)}°"

    rows = [
        ("Link angle at the back of the stop", deg(study.contact.link_angle)),
        ("Stop and link width take up", deg(study.taken_up)),
        ("Contact from the crank pin, along the link", length(study.contact.reach)),
        ("Second arm, disc axis to chain pin", length(study.second_arm)),
        ("Null in reverse", deg(study.null)),
        ("Release in reverse", deg(study.release)),
        ("Largest pull in reverse", length(study.pull)),
        ("Largest pull forwards", length(study.forward_pull)),
        ("Draw of the spring in reverse", length(study.draw)),
        ("Slack from which the back carries the link", length(study.carrying_slack)),
    ]
    return {
        "met": study.back_contact is not None,
        "at": deg(study.back_contact),
        "picture": None if study.back_contact is None else svg.markup(_picture(e, study.back_contact)),
        "curve": svg.markup(_curve(study, shown)) if study.runs else None,
        "fires": deg(study.fires) if study.runs else None,
        "rows": rows,
        "rated": study.rated,
        "overdraws": study.overdraws,
        "on_edge": study.contact.on_edge,
        "tie": study.carrying_slack is None,
        "noun": e.design.far_end.noun,
        "slack": length(study.slack) if study.slack > 0.0 else None,
        "slack_from": None if reach is None else deg(reach[0]),
        "slack_to": None if reach is None else deg(reach[1]),
        "poses": [(deg(float(t)), _ranges(study, i)) for i, t in _shown_rows(study)],
        "carries": study.carries,
    }


def _picture(e: Examination, theta: float) -> str:
    from exporters.mechanism_picture import mechanism_picture  # here, for check draws nothing

    return mechanism_picture(e, "back-contact", "back of the stop, run backwards", theta)


def _shown_rows(study: BackingOff, most: int = 13) -> list[tuple[int, float]]:
    """Some of the map's crank angles, evenly."""
    n = study.poses.crank_angle.size
    index = sorted({round(i) for i in np.linspace(0, n - 1, min(most, n))}) if n else []
    return [(i, float(study.poses.crank_angle[i])) for i in index]


def _ranges(study: BackingOff, row: int) -> str:
    pairs = zip(study.poses.low[row], study.poses.high[row], strict=True)
    return ", ".join(f"{angle(float(a))}–{angle(float(b))}°" for a, b in pairs if np.isfinite(a)) or NONE


def _curve(study: BackingOff, shown: Shown) -> str:
    """Pull over crank angle, back from the start dead centre to the release in reverse."""
    theta, pull = reversed_curve(study)
    end = float(theta[-1])
    values = [shown.value(float(p), "length") for p in pull]
    bottom = TOP + HIGH

    def x_of(at: float) -> float:
        return LEFT + WIDE * at / end

    events = [("back contact", study.back_contact), ("null", study.null), ("release", study.release)]
    body = []
    for row, (name, at) in enumerate(sorted(((n, v) for n, v in events if v is not None), key=lambda item: item[1])):
        x, y = x_of(at), 9.0 + 14.0 * min(row, 2)
        body.append(svg.line((x, y - 6.0), (x, bottom), "event"))
        body.append(svg.label(svg.Label(x - 4.0, y, (f"{name} {angle(at)}°",), "end"), "small"))
    body += panel(theta, values, x_of, TOP, f"pull, {shown.unit('length')}", ())
    ticks = [(x_of(math.radians(mark)), f"{tick_text(mark)}°") for mark in range(0, int(math.degrees(end)) - 1, -60)]
    body += axis(ticks, LEFT + WIDE / 2, bottom, "crank angle, turned backwards")
    text = f"Run backwards from the start dead centre the pull rises to {shown.quantity(study.pull or 0.0, 'length')}."
    box = [(0.0, 0.0), (LEFT + WIDE + 6.0, bottom + 36.0)]
    return svg.picture("reversed-pull", "Pull of the machine run backwards", text, body, box)


LEAVING = Leaving("Backing off", backing_off_row, backing_off_values, backing_off_line)

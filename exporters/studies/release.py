"""The study of the release as it leaves: a row of check.json, a section of the page, a line of the summary."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from exporters import svg
from exporters.check_json import Row, degrees, tidy
from exporters.curves import BETWEEN, HIGH, LEFT, TOP, WIDE, axis, nice_ticks, panel
from exporters.shown import Shown, factor_text, figures
from exporters.studies.leaving import Leaving
from loads.examine import Examination
from loads.records import RELEASE, SNATCH, Check
from loads.release.simulate import Course
from loads.release.study import ReleaseStudy

MOST_POINTS = 400  # of a curve


def release_row(e: Examination, s: ReleaseStudy) -> Row:
    """``studies.release``: what is not known is null; without a simulation only whether it is covered, and why not."""
    course, k = s.course, s.scene
    row: Row = {
        "covered": s.covered, "time_ms": None, "payload_speed_m_s": None, "payload_energy_J": None,
        "swing_tension_N": None, "snatch_N": None, "snatch_torque_Nm": None, "energy_error": None,
        "why_not": s.why or None, "stopped_elsewhere": s.stopped_elsewhere,
    }  # fmt: skip
    if course is None or k is None:
        return row
    payload = course.payload_speed is not None
    return row | {
        "time_ms": tidy(1000.0 * _time(course)),
        "payload_speed_m_s": tidy((course.payload_speed or 0.0) / 1000.0) if payload else None,
        "payload_energy_J": tidy(course.given_to_payload / 1000.0) if payload else None,
        "swing_tension_N": tidy(s.swing_tension),
        "snatch_N": tidy(s.snatch),
        "snatch_torque_Nm": tidy(s.snatch_torque / 1000.0),
        "energy_error": float(f"{course.energy_error:.2g}"),
        "dry_snatch_N": None if s.dry_snatch is None else tidy(s.dry_snatch),
        "efficiency": None if s.efficiency is None else tidy(s.efficiency, significant=4),
        "disc_speed_rpm": tidy((s.speed or 0.0) * 30.0 / math.pi),
        "disc_speed_from_spring": s.speed_from_spring,
        "stored_J": tidy(course.stored_at_start / 1000.0),
        "static_stretch_mm": tidy(s.stretched),
        "line_stiffness_N_mm": tidy(k.stiffness),
        "link_straight_ms": None if course.straight is None else tidy(1000.0 * course.straight),
        "first_slack_ms": None if course.slack_first is None else tidy(1000.0 * course.slack_first),
        "link_blow_on_stop_N": tidy(s.blow),
        "bumper_used_mm": tidy(s.bumper_used),
        "residual_energy_share": tidy(course.left_over, significant=4),
        "greatest_link_speed_rad_s": tidy(float(np.abs(course.psi_rate - k.speed).max())),
        "disc_turned_deg": degrees(float(course.theta[-1] - course.theta[0])),
    }


def _time(course: Course) -> float:
    """From the lift-off to when the payload leaves, or without one to when the link has straightened."""
    if course.payload_time is not None:
        return course.payload_time
    return float(course.time[-1]) if course.straight is None else course.straight


def release_line(e: Examination, s: ReleaseStudy) -> str:
    """What the release does, in one or two sentences."""
    shown, course = Shown(e.design.identity.units), s.course
    if course is None:
        return f"Release: NOT COVERED, {s.why}."
    thrown = ""
    if course.payload_speed is not None:
        thrown = (
            f" after {1000.0 * _time(course):.0f} ms the payload leaves with "
            f"{shown.quantity(course.payload_speed, 'pace', 3)} and "
            f"{shown.quantity(course.given_to_payload, 'energy', 3)};"
        )
    noun = e.design.far_end.noun
    return (
        f"Release:{thrown} the {noun} is snatched with {shown.quantity(s.snatch, 'force', 3)}, "
        f"{s.snatch / max(float(e.figures.largest_tension), 1e-9):.2g} times its largest tension of winding."
    )


def governs(e: Examination) -> list[dict[str, str]]:
    """For each part the check that a load brings nearest to its target, and whether winding or release does."""
    worst: dict[str, Check] = {}
    for row in e.checks:
        loaded = row.crank_angle is not None and row.safety_factor is not None and row.case != ""
        if loaded and (row.part not in worst or row.margin < worst[row.part].margin):
            worst[row.part] = row
    return [
        {
            "part": part, "case": row.case, "check": f"{row.site}: {row.check}", "factor": factor_text(row),
            "target": f"{row.target:g}", "phase": "release" if row.case in (RELEASE, SNATCH) else "winding",
        }
        for part, row in sorted(worst.items(), key=lambda item: item[1].margin)
    ]  # fmt: skip


def release_values(e: Examination, s: ReleaseStudy) -> dict[str, Any]:
    """What the page's section says."""
    shown, course, k = Shown(e.design.identity.units), s.course, s.scene
    said: dict[str, Any] = {
        "covered": s.covered, "why": s.why, "stopped_elsewhere": s.stopped_elsewhere, "facts": [], "picture": "",
        "governs": governs(e) if course is not None else [],
    }  # fmt: skip
    if course is None or k is None:
        return said

    def ms(value: float | None) -> str:
        return "–" if value is None else f"{1000.0 * value:.1f} ms"

    facts = [
        (
            "disc speed at the release",
            f"{figures(k.speed * 30.0 / math.pi)} rpm"
            + (", from the spring, between null and release" if s.speed_from_spring else ""),
        ),
        ("energy that the spring holds", shown.quantity(course.stored_at_start, "energy")),
        ("static stretch at the start", shown.quantity(s.stretched, "length", 3)),
        ("link straight, first slack", f"{ms(course.straight)}, {ms(course.slack_first)} after the lift-off"),
    ]
    if course.payload_speed is not None:
        facts += [
            ("payload leaves", f"after {ms(course.payload_time)} with {shown.quantity(course.payload_speed, 'pace')}"),
            (
                "energy given to the payload",
                f"{shown.quantity(course.given_to_payload, 'energy')}, "
                f"{100.0 * (s.efficiency or 0.0):.0f} % of what the spring held",
            ),
        ]
    facts += [
        ("largest tension in the swing", shown.quantity(s.swing_tension, "force")),
        ("snatch", shown.quantity(s.snatch, "force")),
        *(
            [("snatch of a shot without payload, in no load", shown.quantity(s.dry_snatch, "force"))]
            if s.dry_snatch
            else []
        ),
        ("torque on the disc in the snatch", shown.quantity(s.snatch_torque, "torque")),
        ("link's blow on the stop", shown.quantity(s.blow, "force")),
    ]
    if k.bumper > 0.0:
        facts.append(
            (
                "bumper compressed",
                f"{shown.quantity(s.bumper_used, 'length', 3)} of {shown.quantity(k.bumper_travel, 'length', 3)}",
            )
        )
    facts += [
        ("left in motion at the end", f"{100.0 * course.left_over:.0f} % after {ms(float(course.time[-1]))}"),
        ("energy account out by", f"{100.0 * course.energy_error:.1g} %"),
    ]  # fmt: skip
    return said | {"facts": facts, "picture": svg.markup(course_picture(e, course))}


def course_picture(e: Examination, course: Course) -> str:
    """Pull of the line and draw over time, with the moments that matter marked."""
    shown, noun = Shown(e.design.identity.units), e.design.far_end.noun
    step = max(1, len(course.time) // MOST_POINTS)
    peak = int(np.argmax(course.forces["tension"]))
    rows = np.unique([*range(0, len(course.time), step), peak, len(course.time) - 1])
    time = 1000.0 * course.time[rows]
    end = float(time[-1])

    def x_of(value: float) -> float:
        return LEFT + WIDE * value / end

    bottom = TOP + 2 * HIGH + BETWEEN
    tension = [shown.value(float(v), "force") for v in course.forces["tension"][rows]]
    draw = [shown.value(float(v), "length") for v in course.draw[rows]]
    body = []
    marks = [(course.slack_first, "slack"), (course.payload_time, "payload leaves"), (course.straight, "link straight")]
    for row, (at, name) in enumerate(sorted((1000.0 * t, name) for t, name in marks if t is not None)[::-1]):
        x, y = x_of(at), 9.0 + 14.0 * row
        left = x > LEFT + WIDE / 2
        body.append(svg.line((x, y - 6.0), (x, bottom), "event"))
        label = svg.Label(x + (-4.0 if left else 4.0), y, (f"{name} {at:.1f} ms",), "end" if left else "start")
        body.append(svg.label(label, "small"))
    top = ((float(1000.0 * course.time[peak]), shown.value(float(course.forces["tension"][peak]), "force")),)
    body += panel(time, tension, x_of, TOP, f"{noun} tension, {shown.unit('force')}", top)
    body += panel(time, draw, x_of, TOP + HIGH + BETWEEN, f"draw, {shown.unit('length')}", ())
    ticks = [(x_of(mark), f"{mark:g}") for mark in nice_ticks(0.0, end, 6) if mark <= end * 1.001]
    body += axis(ticks, LEFT + WIDE / 2, bottom, "ms after the link lifts off")
    text = (
        f"The {noun} pulls with {shown.quantity(float(course.forces['tension'][0]), 'force')} at the lift-off and at most "
        f"with {shown.quantity(float(course.forces['tension'][peak]), 'force')}, {1000.0 * course.time[peak]:.1f} ms later. "
        f"The draw falls from {shown.quantity(float(course.draw[0]), 'length')} to "
        f"{shown.quantity(float(course.draw.min()), 'length')}."
    )
    box = [(0.0, 0.0), (LEFT + WIDE + 6.0, bottom + 36.0)]
    return svg.picture("release", f"{noun.capitalize()} tension and draw over time", text, body, box)


LEAVING = Leaving("Release", release_row, release_values, release_line)

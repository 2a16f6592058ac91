"""Mechanisms that cannot exist: what only the cycle can tell about a design that reads well."""

from __future__ import annotations

import math

from loads.cycle import Cycle
from parts.design import Design
from parts.problems import Problem

MOST_WRAP = math.radians(270.0)


def mechanism_problems(design: Design, figures: Cycle) -> tuple[Problem, ...]:
    """Everything that makes a design's mechanism impossible, each with its key and what would be accepted."""
    at = figures.events
    m = design.mechanism
    beta = f"{math.degrees(m.seat_angle):g} deg"
    for name, event in (("catch", at.catch), ("release", at.release), ("null", at.null)):
        if math.isnan(float(event)):
            text = f"the mechanism has no {name}: the chain never {_MISSING[name]}"
            return (
                Problem(
                    "mechanism.seat_angle", None, beta, "a seat angle nearer to 0 deg, or a sheave farther away", text
                ),
            )
    problems = []
    if float(figures.most_wrap) > MOST_WRAP or float(figures.least_wrap) < 0.0:
        wrap = f"a wrap of {math.degrees(figures.least_wrap):.1f} to {math.degrees(figures.most_wrap):.1f} deg over the turn"
        key = "sheave.exit_angle" if design.sheave.exit_angle is not None else "sheave.wrap"
        text = "the chain would cross itself, or leave the sheave: above 270 deg or below 0"
        problems.append(Problem(key, None, wrap, "a wrap within 0 and 270 deg at every crank angle", text))
    slack, most_pull = design.chain.slack, float(figures.most_pull)
    if slack >= most_pull:
        text = "the slack is never taken up"
        problems.append(
            Problem("chain.slack", None, f"{slack:g} mm", f"less than the whole pull, {most_pull:.2f} mm", text)
        )
    table = design.spring.table
    if table is not None and most_pull - slack > float(table[0, -1]) + 1e-9:
        problems.append(
            Problem(
                "spring.table", None, f"a last draw of {float(table[0, -1]):g} mm",
                f"points up to the largest draw, {most_pull - slack:.2f} mm", "the table ends before the spring does",
            )
        )  # fmt: skip
    if float(at.hold) <= float(at.catch):
        most = math.degrees(float(at.first_end) - float(at.catch))
        text = "the hold lies before the catch"
        found = f"{math.degrees(m.hold_margin):g} deg"
        problems.append(Problem("mechanism.hold_margin", None, found, f"less than {most:.2f} deg", text))
    return tuple(problems)


_MISSING = {
    "catch": "turns far enough for the stop to meet the link",
    "release": "lifts the link off its stop, or never presses it on",
    "null": "passes over the disc axis",
}

"""Two procedures with the design's own numbers: the first wind in small steps, and letting the spring down again."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from exporters.bill import environment
from exporters.controller import controller_document, counts, holder, positions, zones
from exporters.shown import Shown, angle, shortfall
from loads.examine import Examination
from loads.linkage import state

STEPS = (0.0, 5.0, 15.0, 30.0, 60.0, 90.0, 120.0, 150.0)  # degrees of the first wind before the catch
BEFORE = 5.0  # degrees before and after what is watched closely


def first_wind(e: Examination) -> list[dict[str, str]]:
    """Where to stop, what drive torque and draw to find there, and what to look at."""
    at, shown = e.figures.events, Shown(e.design.identity.units)
    catch, hold = math.degrees(float(at.catch)), math.degrees(float(at.hold))
    noun = e.design.far_end.noun
    loose = "just taut, or slack as designed" if e.design.far_end.over_sheave else "in its pins"
    looks = {0.0: f"the {noun} {loose}; nothing drawn; link in line with the {noun}"}
    stops = [*(s for s in STEPS if s < catch - BEFORE), catch - BEFORE, catch, catch + BEFORE]
    second = math.degrees(float(e.figures.second_peak_at))
    stops += [(catch + second) / 2.0, second, (second + hold) / 2.0, hold - 2.0 * BEFORE, hold - BEFORE, hold]
    looks |= {
        catch - BEFORE: "the stop still clear of the link's flank",
        catch: "the stop touches the flank over its whole length: stop and look before going on",
        catch + BEFORE: "link and disc go round as one; nothing rubs in the chain's plane",
        second: "second torque peak: listen, and watch the frame",
        hold: holder(e) + ("; put the lock pin in: its hole is here" if e.sizes.lock_pin is not None else ""),
    }
    rows = []
    for degrees in sorted({s for s in stops if 0.0 <= s <= hold + 1e-9}):
        s = state(e.machine, np.array([math.radians(degrees)]), at.catch)
        torque = float(s.torque[0] + s.friction_torque[0])
        look = next((text for x, text in looks.items() if abs(x - degrees) < 1e-3), "nothing touches that should not")
        rows.append(
            {
                "angle": angle(math.radians(degrees)), "counts": _count(e, math.radians(degrees)),
                "torque": shown.quantity(torque, "torque"), "draw": shown.quantity(float(s.draw[0]), "length"),
                "tension": shown.quantity(float(s.tension[0]), "force"), "look": look,
            }
        )  # fmt: skip
    return rows


def _count(e: Examination, value: float) -> str:
    found = counts(e, value)
    return "–" if found is None else f"{found}"


def unloading(e: Examination) -> list[dict[str, str]]:
    """For each band how the spring is let down from there."""
    rows = []
    for z in zones(e):
        how = "drive backwards slowly to zero, ready to stop, eyes on the angle; then lock the drive out"
        if z.fate == "runs on" and z.end <= float(e.figures.events.hold) + 1e-9:
            how = "never stand here: go on forwards to the next band that stays or unwinds, then backwards to zero"
        elif z.start >= float(e.figures.events.first_end) - 1e-9:
            how = "everybody out; let it fire under guard as it was designed to, payload on, then take stock"
        elif z.end <= 0.0:
            how = "drive forwards slowly to zero"
        rows.append(
            {"from": angle(z.start), "to": angle(z.end), "fate": z.fate, "how": how, "loss": z.on_loss, "why": z.why,
             "allowed": "; ".join(z.allowed)}
        )  # fmt: skip
    return rows


def _short(e: Examination, most: int = 8) -> list[str]:
    """What falls short, the worst first."""
    rows = [shortfall(row) for row in e.falls_short]
    return rows if len(rows) <= most else [*rows[:most], f"and {len(rows) - most} more, see the bill of loads"]


def procedures_html(e: Examination) -> str:
    """The page; the same text each time for the same design."""
    who, shown = e.design.identity, Shown(e.design.identity.units)
    document = controller_document(e)
    values: dict[str, Any] = {
        "title": who.title, "number": who.number, "revision": who.revision, "digest": e.design.digest[:12],
        "short": _short(e), "cautions": e.cautions, "wind": first_wind(e), "unload": unloading(e),
        "positions": [
            {"name": p.name, "angle": angle(p.angle), "counts": _count(e, p.angle), "meaning": p.meaning}
            for p in positions(e)
        ],
        "encoder": document["encoder"], "energy": shown.quantity(float(e.figures.stored_energy), "energy"),
        "lock": e.sizes.lock_pin is not None, "noun": e.design.far_end.noun, "holder": holder(e),
    }  # fmt: skip
    return environment().get_template("procedures.html").render(values)

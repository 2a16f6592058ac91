"""The trigger study as it leaves: a row of check.json, a section of the page with a histogram, a line of the summary."""

from __future__ import annotations

import math
from typing import Any

from exporters import svg
from exporters.check_json import NO_ROUNDING, Row, degrees, tidy
from exporters.curves import nice_ticks, tick_text
from exporters.shown import Shown, angle, figures
from exporters.studies.leaving import Leaving
from loads.examine import Examination
from loads.jolt import Jolt
from loads.tolerances import IN_SIGMAS
from loads.trigger import LEAST_CHANCE, METHOD, Effect, Spread, TriggerStudy, chance_text

WIDE, HIGH, LEFT, TOP = 420.0, 130.0, 46.0, 44.0
STANDARD_GRAVITY = 9806.65  # mm/s²


def trigger_row(e: Examination, study: TriggerStudy) -> Row:
    """Angles in degrees, lengths in mm, energies in J. Each of ``causes`` has half its width, its slope and its share."""
    worn_draw, worn_energy = study.worn_draw, study.worn_energy
    return {
        "hold_margin_mean_deg": degrees(study.margin.mean),
        "hold_margin_std_deg": degrees(study.margin.deviation),
        "firing_chance": _chance(study.firing_chance),
        "margin_for_chance_deg": degrees(study.margin_for_chance),
        "chance": _chance(study.chance),
        "firing_chance_is_at_most": study.at_least_resolved,
        "hold_margin_drawn_deg": degrees(study.hold_margin),
        "hold_margin_first_order_std_deg": degrees(study.first_order),
        "samples": study.samples,
        "fired": study.counted,
        "seed": study.seed,
        "method": METHOD,
        **_spread("null", "deg", study.null, 180.0 / math.pi),
        **_spread("release", "deg", study.release, 180.0 / math.pi),
        **_spread("pull", "mm", study.pull),
        **_spread("draw", "mm", study.draw),
        **_spread("stored_energy", "J", study.energy, 1e-3),
        "worn": None
        if worn_draw is None or worn_energy is None
        else {
            "longer_mm": tidy(study.worn_length),
            **_spread("draw", "mm", worn_draw),
            **_spread("stored_energy", "J", worn_energy, 1e-3),
        },
        "causes": [_cause(row) for row in study.effects],
        "jolt": jolt_row(study.jolt),
    }


def _chance(value: float) -> float | None:
    return tidy(value, NO_ROUNDING)


def _spread(name: str, unit: str, value: Spread, scale: float = 1.0) -> Row:
    return {f"{name}_mean_{unit}": tidy(value.mean * scale), f"{name}_std_{unit}": tidy(value.deviation * scale)}


def _cause(row: Effect) -> Row:
    cause = row.cause
    length = cause.quantity == "length"
    scale = 1.0 if length else 180.0 / math.pi
    unit = "mm" if length else "deg"
    return {
        "key": cause.key, "what": cause.title, "from": tidy(cause.low * scale), "to": tidy(cause.high * scale),
        "unit": unit, "spread": cause.law, "std": tidy(cause.deviation * scale),
        f"margin_deg_per_{unit}": tidy(row.slope * (180.0 / math.pi if length else 1.0)),
        "share_of_variance": tidy(row.share), "given": cause.given, "why": cause.why,
    }  # fmt: skip


def jolt_row(jolt: Jolt) -> Row:
    """Torques in N·m, inertia in kg·m², accelerations in rad/s² and m/s²; null where nothing is known, or it never moves."""

    def finite(value: float | None, scale: float = 1.0) -> float | None:
        return None if value is None else tidy(value * scale)

    return {
        "inertia_kgm2": tidy(jolt.inertia * 1e-6, NO_ROUNDING), "drive_inertia_known": jolt.drive_known,
        "spring_holds_back_Nm": tidy(jolt.back / 1000.0), "drive_holds_Nm": finite(jolt.holding, 1e-3),
        "gear_locks": jolt.holding == math.inf, "acceleration_dead_rad_s2": tidy(jolt.dead_acceleration),
        "acceleration_held_rad_s2": finite(jolt.held_acceleration), "shake_dead_m_s2": finite(jolt.dead_shake, 1e-3),
        "blow_dead_rad_s": tidy(jolt.dead_speed), "energy_to_the_null_J": tidy(jolt.barrier / 1000.0),
    }  # fmt: skip


def trigger_line(e: Examination, study: TriggerStudy) -> str:
    """Mean, spread and chance, and what matters most, in two sentences."""
    text = (
        f"Tolerances: the disc is held {angle(study.margin.mean, 2)}° ± {angle(study.margin.deviation, 2)}° (one standard "
        f"deviation) short of firing; the chance that it fires at the hold is {chance_text(study.firing_chance)}, and "
        f"{study.chance:g} needs a hold margin of {angle(study.margin_for_chance, 2)}°."
    )
    if study.effects:
        first = study.effects[0]
        text += f" What matters most: {first.cause.title}, {100.0 * first.share:.0f} % of the variance."
    return text


def trigger_values(e: Examination, study: TriggerStudy) -> dict[str, Any]:
    """What the page's section says."""
    shown = Shown(e.design.identity.units)
    length, energy = shown.unit("length"), shown.unit("energy")

    def row(name: str, value: Spread, kind: str) -> dict[str, str]:
        if kind == "angle":
            return {"name": f"{name} °", "mean": angle(value.mean, 2), "deviation": angle(value.deviation, 3)}
        mean, deviation = shown.number(value.mean, kind, 5), shown.number(value.deviation, kind, 3)
        return {"name": f"{name} {length if kind == 'length' else energy}", "mean": mean, "deviation": deviation}

    rows = [
        row("Hold margin", study.margin, "angle"), row("Null", study.null, "angle"),
        row("Release", study.release, "angle"), row("Pull at the hold", study.pull, "length"),
        row("Draw at the hold", study.draw, "length"), row("Energy stored", study.energy, "energy"),
    ]  # fmt: skip
    if study.worn_draw is not None and study.worn_energy is not None:
        rows += [
            row("Draw, worn chain", study.worn_draw, "length"), row("Energy, worn chain", study.worn_energy, "energy"),
        ]  # fmt: skip
    return {
        "samples": f"{study.samples:,}".replace(",", "\N{NO-BREAK SPACE}"),
        "sigmas": f"{IN_SIGMAS:g}",
        "chance": chance_text(study.firing_chance),
        "fires": study.firing_chance > study.chance,
        "wanted": f"{study.chance:g}",
        "margin": angle(study.hold_margin, 2),
        "needed": angle(study.margin_for_chance, 2),
        "first_order": angle(study.first_order, 3),
        "deviation": angle(study.margin.deviation, 3),
        "method": METHOD,
        "least": f"{LEAST_CHANCE:g}",
        "worn": None if study.worn_draw is None else shown.quantity(study.worn_length, "length"),
        "picture": svg.markup(margin_picture(study)),
        "rows": rows,
        "causes": [_shown_cause(one, shown) for one in study.effects],
        "jolt": _shown_jolt(study.jolt, shown),
        "inertia_known": study.jolt.drive_known,
    }


def _shown_cause(row: Effect, shown: Shown) -> dict[str, str]:
    cause = row.cause
    unit = shown.unit("length") if cause.quantity == "length" else "°"

    def value(x: float) -> str:
        return shown.number(x, "length", 3) if cause.quantity == "length" else angle(x, 2)

    spread = f"± {value(cause.high)}" if cause.low == -cause.high else f"{value(cause.low)} to {value(cause.high)}"
    slope = math.degrees(row.slope) / shown.value(1.0, "length") if cause.quantity == "length" else row.slope
    return {
        "title": cause.title, "spread": f"{spread} {unit}", "law": cause.law, "slope": f"{figures(slope, 3)} °/{unit}",
        "share": f"{100.0 * row.share:.1f} %", "why": "given" if cause.given else cause.why,
    }  # fmt: skip


def _shown_jolt(jolt: Jolt, shown: Shown) -> list[tuple[str, str]]:
    rows = [
        ("Inertia about the disc axis", shown.quantity(jolt.inertia, "inertia")),
        ("The spring holds the disc back by", shown.quantity(jolt.back, "torque")),
        ("Drive dead: lasting angular acceleration that carries it over", f"{figures(jolt.dead_acceleration)} rad/s²"),
        ("Drive dead: change of speed by one blow that does", f"{figures(jolt.dead_speed)} rad/s"),
    ]
    if jolt.dead_shake is not None:
        shake = figures(jolt.dead_shake / STANDARD_GRAVITY)
        rows.append(("Drive dead: lasting acceleration of the frame in the disc's plane", f"{shake} g"))
    if jolt.held_acceleration is None:
        held = "not known: no motor or brake is given"
    elif math.isinf(jolt.held_acceleration):
        held = "none: the gear locks itself"
    else:
        held = f"{figures(jolt.held_acceleration)} rad/s²"
    rows.append(("Drive holding: lasting angular acceleration that carries it over", held))
    return rows


def margin_picture(study: TriggerStudy) -> str:
    """Histogram of the hold margin from where it fires on: outlined bars, so that it reads without colour."""
    edges = [math.degrees(float(x)) for x in study.edges]
    low, high = min(0.0, edges[0]), max(edges[-1], 0.1)
    ticks = nice_ticks(low, high, 7)
    low, high = ticks[0], ticks[-1]
    most = max(float(x) for x in study.shares) or 1.0
    bottom = TOP + HIGH

    def across(value: float) -> float:
        return LEFT + WIDE * (value - low) / (high - low)

    body = [svg.label(svg.Label(LEFT, TOP - 32.0, ("share of machines, by hold margin",)), "small")]
    for tick in ticks:
        x = across(tick)
        body.append(svg.line((x, TOP), (x, bottom + 4.0), "grid"))
        body.append(svg.label(svg.Label(x, bottom + 13.0, (f"{tick_text(tick)}°",), "middle"), "small"))
    for left, right, share in zip(edges[:-1], edges[1:], study.shares, strict=True):
        top = bottom - HIGH * float(share) / most
        corners = [(across(left), bottom), (across(left), top), (across(right), top), (across(right), bottom)]
        body.append(svg.polyline(corners, "body", closed=True))
    body.append(svg.line((LEFT, bottom), (LEFT + WIDE, bottom), "zero"))
    marks = [(0.0, "fires"), (math.degrees(study.margin.mean), f"mean {angle(study.margin.mean, 2)}°")]
    for value, name in marks:
        body.append(svg.line((across(value), TOP - 18.0), (across(value), bottom), "event"))
        body.append(svg.label(svg.Label(across(value) + 4.0, TOP - 11.0, (name,)), "small"))
    body.append(svg.label(svg.Label(LEFT + WIDE / 2, bottom + 29.0, ("hold margin",), "middle"), "small"))
    text = (
        f"Hold margins of {study.samples} machines: from {angle(float(study.edges[0]), 2)}° to "
        f"{angle(float(study.edges[-1]), 2)}°, mean {angle(study.margin.mean, 2)}°, standard deviation "
        f"{angle(study.margin.deviation, 2)}°. A machine at 0° or below fires as it is held."
    )
    box = [(0.0, 0.0), (LEFT + WIDE + 60.0, bottom + 36.0)]
    return svg.picture("hold-margins", "Hold margins over the tolerances", text, body, box)


LEAVING = Leaving("Tolerances and the trigger", trigger_row, trigger_values, trigger_line)

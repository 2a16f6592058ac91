"""The study of fatigue as it leaves: rows for check.json, a section of the page, a line of the summary."""

from __future__ import annotations

from typing import Any

from exporters.check_json import Row, tidy
from exporters.shown import Shown, figures
from exporters.studies.leaving import Leaving
from loads.examine import Examination
from loads.fatigue.study import FatigueRow, FatigueStudy

NO_RATING, FOR_EVER = "no rating", "for ever"


def fatigue_rows(e: Examination, study: FatigueStudy) -> list[Row]:
    """One row a feature."""
    return [fatigue_row(row, study) for row in study.rows]


def fatigue_row(row: FatigueRow, study: FatigueStudy) -> Row:
    """One feature. ``life_shots`` is null where it lives for ever (``endless``) and where nothing is rated.

    Stresses in MPa, notch factors in them; for the chain, which has no stresses here, they are null.
    """
    stressed = row.part != "chain" and row.factor is not None
    return {
        "part": row.part, "site": row.site, "life_shots": _number(row.life), "factor": _number(row.factor),
        "shots": tidy(study.shots), "reliability": tidy(study.reliability), "endless": row.endless,
        "endless_factor": _number(row.endless_factor), "life_over_shots": _number(row.life_factor),
        "amplitude_MPa": tidy(row.amplitude) if stressed else None, "mean_MPa": tidy(row.mean) if stressed else None,
        "cycles_a_shot": tidy(row.cycles_a_shot) if stressed else None,
        "endurance_limit_MPa": tidy(row.endurance_limit) if stressed else None,
        "ultimate_MPa": tidy(row.ultimate) if stressed else None,
        "suggested_inspection_shots": study.inspect_after, "note": row.note,
    }  # fmt: skip


def _number(value: float | None) -> float | None:
    return None if value is None else tidy(value)


def shots_text(value: float) -> str:
    """A number of shots in two figures; "under 1" below one."""
    if value < 1.0:
        return "under 1"
    if value > 1e9:
        return f"over {whole(1e9)}"
    return whole(round(value, 2 - len(str(int(value)))))


def whole(value: float) -> str:
    """A whole number, thousands set off by spaces that no line breaks at."""
    return f"{value:,.0f}".replace(",", "\N{NO-BREAK SPACE}")


def life_text(row: FatigueRow) -> str:
    if row.factor is None:
        return NO_RATING if row.part == "chain" else "–"
    return FOR_EVER if row.life is None else shots_text(row.life)


def fatigue_line(e: Examination, study: FatigueStudy) -> str:
    """The weakest feature and the suggestion of when to look, in one or two sentences."""
    weakest = study.weakest
    if weakest is None:
        return "Fatigue: no stress."
    life = life_text(weakest)
    text = (
        f"Fatigue, {whole(study.shots)} shots: least factor {figures(weakest.factor or 0.0, 3)} at {weakest.part}, "
        f"{weakest.site}, life {life}{'' if life == FOR_EVER else ' shots'}"
        + ("." if study.with_release else ", without the release's snatch.")
    )
    if any(row.factor is None and row.part == "chain" for row in study.rows):
        text += " The chain has no fatigue rating."
    return text + suggestion(study)


def suggestion(study: FatigueStudy) -> str:
    """When to look for cracks, marked as no more than a suggestion; nothing where all parts live for ever."""
    if study.inspect_after is None:
        return ""
    return f" A suggestion: look for cracks after {shots_text(study.inspect_after)} shots, and then as often."


def fatigue_values(e: Examination, study: FatigueStudy) -> dict[str, Any]:
    """What the page's section says."""
    shown = Shown(e.design.identity.units)
    return {
        "shots": whole(study.shots),
        "reliability": f"{100.0 * study.reliability:.6g} %",
        "surfaces": ", ".join(f"{what} {how}" for what, how in study.surfaces.items()),
        "suggestion": suggestion(study).strip(),
        "stress": shown.unit("stress"),
        "with_release": study.with_release,
        "rows": [_shown_row(row, shown) for row in sorted(study.rows, key=_by_factor)],
    }


def _by_factor(row: FatigueRow) -> float:
    return float("inf") if row.factor is None else row.factor


def _shown_row(row: FatigueRow, shown: Shown) -> dict[str, str]:
    def ratio(value: float | None) -> str:
        return "–" if value is None else figures(value, 3)

    stressed = row.part != "chain" and row.factor is not None

    def stress(value: float) -> str:
        return shown.number(value, "stress") if stressed else "–"

    return {
        "part": row.part, "site": row.site, "life": life_text(row), "factor": ratio(row.factor),
        "endless": ratio(row.endless_factor), "amplitude": stress(row.amplitude), "mean": stress(row.mean),
        "cycles": figures(row.cycles_a_shot, 3) if stressed else "–", "limit": stress(row.endurance_limit),
        "ultimate": stress(row.ultimate), "note": row.note,
    }  # fmt: skip


LEAVING = Leaving("Fatigue", fatigue_rows, fatigue_values, fatigue_line)

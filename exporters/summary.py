"""What ``check`` prints for people: the verdict, what governs, key figures, cautions. At most 80 columns, colour or not."""

from __future__ import annotations

import re
from textwrap import wrap
from typing import TYPE_CHECKING

from exporters.chain_rows import adjustment_line
from exporters.shown import Shown, angle, factor_text
from exporters.studies.registry import study_lines
from loads.examine import Examination
from loads.records import Check
from parts.design import Floats

if TYPE_CHECKING:
    from rich.console import Console

WIDTH = 80
GOVERNING = 6
ROOM = 48  # columns that a check's name takes
# second thoughts and standards: in full in bill and JSON
_IN_BRIEF = re.compile(r"; (?:[^.]|\.(?=\d))*(?=\.)| \(ISO [^)]*\)")


def print_summary(e: Examination, console: Console) -> None:
    """Print the summary; nothing of the design is taken for markup."""
    from rich.text import Text

    width = min(WIDTH, console.width)

    def say(text: Text | str = "", style: str = "") -> None:
        console.print(text if isinstance(text, Text) else Text(text, style), width=width, highlight=False)

    who = e.design.identity
    word, style = ("HOLDS", "bold green") if e.holds else ("FALLS SHORT", "bold red")
    say(Text.assemble((word, style), f"  {verdict_count(e)}"))
    say(f"{who.title}, {who.number} revision {who.revision}")
    say()
    say(f"{'What governs':<{ROOM + 2}}  factor  target", "bold")
    rows = governing(e)
    for row in rows:
        for line in check_lines(row):
            say(line, "" if row.holds else "red")
    more = len(e.falls_short) - sum(not row.holds for row in rows)
    if more > 0:
        say(f"  and {more} more that {'falls' if more == 1 else 'fall'} short")
    say()
    say("The cycle, winding", "bold")
    for name, value in key_lines(e):
        say(f"  {name:<25}{value}")
    say()
    count = len(e.assumed)
    say(f"{count} value{' was' if count == 1 else 's were'} assumed; check --json lists them with their reasons.")
    for text in (adjustment_line(e), *study_lines(e)):
        for line in wrap(text or "", width):
            say(line)
    say()
    say("Cautions", "bold yellow")
    for caution in e.cautions:
        for line in wrap(in_brief(caution), width, initial_indent="- ", subsequent_indent="  "):
            say(line)


def verdict_count(e: Examination) -> str:
    if e.holds:
        return f"all {len(e.checks)} checks reach their targets"
    short = len(e.falls_short)
    return f"{short} of {len(e.checks)} checks {'misses its target' if short == 1 else 'miss their targets'}"


def governing(e: Examination, most: int = GOVERNING) -> list[Check]:
    """What falls short, worst first; then, while there is room, what a load brings nearest to its target."""
    short = list(e.falls_short)
    loaded = [c for c in e.checks if c.holds and c.crank_angle is not None and c.safety_factor is not None]
    return worst_of_each(short + loaded)[:most]


def worst_of_each(rows: list[Check]) -> list[Check]:
    """Of rows that differ in their case alone the worst: they come with the least margin first."""
    once: dict[tuple[str, str, str], Check] = {}
    for row in rows:
        once.setdefault((row.part, row.site, row.check), row)
    return list(once.values())


def check_lines(row: Check) -> list[str]:
    """A check on one line in columns, its name going on below where it is long."""
    first, *rest = wrap(f"{row.part}, {row.site}: {row.check}", ROOM, subsequent_indent="  ")
    state = "" if row.holds else "  FALLS SHORT"
    return [f"  {first:<{ROOM}}  {factor_text(row):>6}  {row.target:>6g}{state}", *(f"  {line}" for line in rest)]


def key_lines(e: Examination) -> list[tuple[str, str]]:
    """Names and values of the few figures that say what the machine does."""
    f, at, s = e.figures, e.figures.events, Shown(e.design.identity.units)

    def peak(value: Floats, where: Floats) -> str:
        return f"{s.quantity(float(value), 'torque')} at {angle(float(where))}°"

    def load(value: Floats, kind: str) -> str:
        return s.quantity(float(value), kind)

    return [
        ("catch, hold", f"{angle(float(at.catch))}°, {angle(float(at.hold))}°"),
        ("null, release", f"{angle(float(at.null))}°, {angle(float(at.release))}°"),
        ("torque peaks", f"{peak(f.first_peak, f.first_peak_at)}, {peak(f.second_peak, f.second_peak_at)}"),
        ("least between them", peak(f.middle_least, f.middle_least_at)),
        ("torque at the hold", load(f.hold_torque, "torque")),
        ("draw at the hold", load(f.draw_at_hold, "length")),
        ("energy stored", load(f.stored_energy, "energy")),
        (f"largest {e.design.far_end.noun} tension", load(f.largest_tension, "force")),
        ("largest stop force", load(f.largest_stop, "force")),
        ("largest crank pin force", load(f.largest_crank_pin, "force")),
    ]


def in_brief(caution: str) -> str:
    """A caution without its second thoughts; never without its warning."""
    return _IN_BRIEF.sub("", caution)

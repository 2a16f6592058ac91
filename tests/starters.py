"""The starter designs as test material: written out, or with some lines changed."""

from __future__ import annotations

import re
from collections.abc import Mapping
from pathlib import Path

from exporters.starters import starters
from loads.chain_study import ChainStudy
from loads.checks.context import Context
from loads.examine import Examination, examine
from loads.fatigue.study import FatigueStudy
from loads.members import members
from parts.design import Assumed

NAMES = tuple(s.name for s in starters())


def study_of(e: Examination) -> ChainStudy:
    """The study of what runs over the sheave, of a design that has one."""
    assert e.chain is not None
    return e.chain


def fatigue_of(e: Examination) -> FatigueStudy:
    """The study of fatigue, of a design that asks for it."""
    found = e.studies["fatigue"]
    assert isinstance(found, FatigueStudy)
    return found


def context_of(e: Examination) -> Context:
    """What the checks and studies of an examined design were given."""
    return Context(
        design=e.design, sizes=e.sizes, stack=e.stack, parts=e.parts, past=e.past,
        members=members(e.past, e.stack, e.design.targets), sites={(s.part, s.site): s for s in e.sites},
        findings=e.findings,
    )  # fmt: skip


STUDIES = ("enclosure", "tolerances", "drive")  # tables that bring a study of their own


def whole_text_of(name: str) -> str:
    """A starter as it is written out."""
    return next(s.text for s in starters() if s.name == name)


def text_of(name: str) -> str:
    """A starter without the tables of studies, its mass stopped by something else: winding alone."""
    text = whole_text_of(name)
    for table in (*STUDIES, "moving"):
        text = re.sub(rf"(?ms)^\[{table}\]\n.*?(?=^\[|\Z)", "", text)
    return text.rstrip() + "\n\n[moving]\nstopped_elsewhere = true\n"


def put(text: str, table: str, key: str, value: str | None) -> str:
    """A design's text with ``key = value`` put into a table, or taken out where the value is None."""
    text = re.sub(
        rf"(?ms)(^\[{re.escape(table)}\]\n(?:(?!^\[)[^\n]*\n)*?){key} *=(?: \[ *(?:#[^\n]*)?\n.*?^\]|[^\n]*)\n",
        r"\1",
        text,
        count=1,
    )
    if value is None:
        return text
    if f"[{table}]\n" in text:
        return text.replace(f"[{table}]\n", f"[{table}]\n{key} = {value}\n", 1)
    return f"{text}\n[{table}]\n{key} = {value}\n"


def changed(name: str, **values: str | None) -> str:
    """A starter's text with ``table__key="value"`` put in, or taken out where the value is None."""
    return put_all(text_of(name), values)


def put_all(text: str, values: Mapping[str, str | None]) -> str:
    """A design's text with every ``table__key`` put in or taken out."""
    for where, value in values.items():
        table, key = where.split("__")
        text = put(text, table, key, value)
    return text


def settled(folder: Path, name: str) -> str:
    """A starter's text with every size and choice that it leaves out written in, so that nothing is proportioned anew."""
    text = text_of(name)
    for row in examined(folder, text).assumed:
        table, key = row.key.rsplit(".", 1)
        text = put(text, table, key, _written(row))
    return text


def _written(row: Assumed) -> str:
    if row.quantity in ("text", "angle"):
        return f'"{row.value}"' if row.quantity == "text" else f'"{row.value} rad"'
    return str(int(row.value) if row.quantity == "count" else row.value)


def examined(folder: Path, text: str) -> Examination:
    path = folder / "design.toml"
    path.write_text(text, encoding="utf-8")
    return examine(path)

"""The starter designs as test material: written out, or with some lines changed."""

from __future__ import annotations

import re
from pathlib import Path

from exporters.starters import starters
from loads.examine import Examination, examine

NAMES = tuple(s.name for s in starters())


def text_of(name: str) -> str:
    return next(s.text for s in starters() if s.name == name)


def changed(name: str, **values: str | None) -> str:
    """A starter's text with ``table__key="value"`` put in, or taken out where the value is None."""
    text = text_of(name)
    for where, value in values.items():
        table, key = where.split("__")
        text = re.sub(
            rf"(?ms)(^\[{table}\]\n(?:(?!^\[)[^\n]*\n)*?){key} *=(?: \[ *(?:#[^\n]*)?\n.*?^\]|[^\n]*)\n",
            r"\1",
            text,
            count=1,
        )
        if value is None:
            continue
        if f"[{table}]\n" in text:
            text = text.replace(f"[{table}]\n", f"[{table}]\n{key} = {value}\n", 1)
        else:
            text += f"\n[{table}]\n{key} = {value}\n"
    return text


def examined(folder: Path, text: str) -> Examination:
    path = folder / "design.toml"
    path.write_text(text, encoding="utf-8")
    return examine(path)

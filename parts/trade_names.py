"""What is listed under another name than the one that a design gives: hints for a refusal, nothing that is reckoned with."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterable
from functools import lru_cache
from importlib.resources import files
from typing import Any

_APART = re.compile(r"[\s._\-/#,]+")
_BEFORE = re.compile(
    r"^(?:AISI|SAE|ASTM|ASME|UNS|WNR|EN|BS|DIN|JIS|SS|AL|TYPE|GRADE|GR|STAINLESS|STEEL|ALUMINIUM|ALUMINUM|ALLOY)+"
    r"(?=[A-Z]?\d)"
)
_AFTER = re.compile(r"(?:STAINLESS|STEEL|ALUMINIUM|ALUMINUM|ALLOY|PLATE|BAR)+$")
_CHAIN = re.compile(r"(?:ANSI|ASA|ASME|B291M?|ISO(?:606)?|DIN818[78]|BS228|NO|ROLLER|LEAF|CHAIN)*")
_STRANDS = re.compile(r"(\d+[A-Z]?)-([1-9])")


def listed_material(name: str, listed: Iterable[str]) -> str | None:
    """The listed material that goes by another name, and what else is to be known: ``"42CrMo4+QT (the nearest; …)"``."""
    by_form = {_form(known): known for known in listed}
    rows = [row for row in _table()["material"] if _form(row["listed"]) in by_form]
    other_names = {_form(other): row for row in rows for other in row["names"]}
    form = _form(name)
    for text in (form, _AFTER.sub("", _BEFORE.sub("", form, count=1))):
        if text in by_form:
            return f"{by_form[text]} (the nearest)"
        if text in other_names:
            row = other_names[text]
            return f"{row['listed']} (the nearest{'; ' if 'note' in row else ''}{row.get('note', '')})"
    return None


def listed_chain(designation: str, listed: Iterable[str]) -> str | None:
    """The listed chain that goes by another name, such as 12A-1 for ANSI 60."""
    by_form = {_form(known): known for known in listed}
    text = _CHAIN.sub("", re.sub(r"[\s._/#,]+", "", designation).upper(), count=1)
    stem, strands = (match[1], match[2]) if (match := _STRANDS.fullmatch(text)) else (text, "1")
    return by_form.get(_form(f"{_table()['chain']['listed'].get(stem, stem)}-{strands}")) or by_form.get(_form(text))


def _form(name: str) -> str:
    """A name without what people write in more ways than one."""
    return _APART.sub("", name).upper()


@lru_cache(maxsize=1)
def _table() -> dict[str, Any]:
    return tomllib.loads((files("parts") / "data" / "trade_names.toml").read_text(encoding="utf-8"))

"""What is wrong with a design file: one record a problem, all of them carried by one exception."""

from __future__ import annotations

import difflib
import json
import re
import textwrap
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from pathlib import Path

_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")
_LONGEST_SHOWN = 60
_BEFORE_A_UNIT = re.compile(r"(?<=[0-9]) (?=[A-Za-z])")
_GLUE = "\0"  # no message has one: what is not printable is shown escaped


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing to put right.

    ``key`` is the key's path (``mechanism.link_length``, ``sheave.center[0]``), empty where the whole file is meant;
    ``line`` counts from 1, None where nothing in the file can be pointed at; ``text`` says in words why the value
    cannot be used, where found and accepted do not already say it; ``file`` is set where the line is not one of the
    design file's (a spring table).
    """

    key: str
    line: int | None
    found: str
    accepted: str
    text: str = ""
    file: str = ""

    @property
    def trouble(self) -> str:
        """What is wrong and what would be right, in one line, without place and key."""
        parts = [self.text] if self.text else []
        parts += [f"found {self.found}"] if self.found else []
        parts += [f"accepted: {self.accepted}"] if self.accepted else []
        return "; ".join(parts)

    @property
    def sentence(self) -> str:
        """Key and trouble in one line, without the place."""
        return f"{self.key}: {self.trouble}" if self.key else self.trouble


class DesignRefused(Exception):
    """The design cannot be used: the file's name and every problem in it, in the order of the lines."""

    def __init__(self, file: str | Path, problems: Iterable[Problem]) -> None:
        self.file = str(file)
        self.problems = in_order(problems)
        super().__init__(self.file, self.problems)

    def __str__(self) -> str:
        return "\n".join(f"{self._place(problem)} {problem.trouble}" for problem in self.problems)

    def wrapped(self, width: int) -> str:
        """A block a problem: its first line begins with file, line and key unbroken, the others are set in."""
        return "\n".join(_block(self._place(problem), problem.trouble, width) for problem in self.problems)

    def _place(self, problem: Problem) -> str:
        """``FILE:LINE: KEY:``, as editors and grep take it."""
        line = "" if problem.line is None else f":{problem.line}"
        key = f" {problem.key}:" if problem.key else ""
        return f"{problem.file or self.file}{line}:{key}"


class Refused(ValueError):
    """One value that cannot be used, before it is known where in the file it stands."""

    def __init__(self, found: str, accepted: str, text: str = "") -> None:
        self.found, self.accepted, self.text = found, accepted, text
        super().__init__(f"found {found}; accepted: {accepted}")


def _block(place: str, trouble: str, width: int) -> str:
    glued = _BEFORE_A_UNIT.sub(_GLUE, trouble)  # no line ends between a number and its unit
    lines = textwrap.wrap(
        glued,
        width,
        initial_indent=f"{place} ",
        subsequent_indent="    ",
        break_long_words=False,
        break_on_hyphens=False,
    )
    return "\n".join(lines or [place]).replace(_GLUE, " ")


def in_order(problems: Iterable[Problem]) -> tuple[Problem, ...]:
    """Sorted by line, what has no line last; problems of another file after those of the design."""
    return tuple(sorted(problems, key=lambda p: (p.file, p.line is None, p.line or 0)))


def key_of(path: Sequence[str | int]) -> str:
    """The text of a key's path: names joined by points, places in a list in brackets, odd names in quotes."""
    text = ""
    for step in path:
        if isinstance(step, int):
            text += f"[{step}]"
        else:
            name = step if _BARE_KEY.fullmatch(step) else json.dumps(step, ensure_ascii=False)
            text += f".{name}" if text else name
    return text


def written(value: object) -> str:
    """A value as it stands in the file, for a message: quoted if it is text, cut short if it is long."""
    if isinstance(value, bool):
        text = "true" if value else "false"
    elif isinstance(value, int):
        text = str(value) if abs(value) < 10**_LONGEST_SHOWN else "a number of very many digits"
    elif isinstance(value, str):
        text = json.dumps(value, ensure_ascii=not value.isprintable())
    elif isinstance(value, (list, tuple)):
        text = "[" + ", ".join(written(item) for item in value[:5]) + (", …]" if len(value) > 5 else "]")
    elif isinstance(value, dict):
        text = f"a table of {', '.join(map(str, list(value)[:5]))}" if value else "an empty table"
    else:
        text = str(value)
    return text if len(text) <= _LONGEST_SHOWN else text[: _LONGEST_SHOWN - 1] + "…"


def nearest(word: str, known: Iterable[str]) -> str | None:
    """The one of the known words that a word was most likely meant to be."""
    lowered = {name.lower(): name for name in known}
    close = difflib.get_close_matches(word.lower(), lowered, n=1, cutoff=0.6)
    return lowered[close[0]] if close else None

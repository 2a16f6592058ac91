"""The design file as text: its values by the standard reader, and the line of every key by a grammar.

The grammar is only loaded when there is a problem to point at, because most runs have none.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any

from parts.problems import DesignRefused, Problem, key_of

if TYPE_CHECKING:
    from tree_sitter import Node

LARGEST_FILE = 2_000_000  # bytes; a design is a few thousand, so anything like this is another file
_DEEPEST = 50  # steps of a key; what lies deeper has the line of what is around it
_LAST_STEP = re.compile(r'(\[\d+\]|(^|\.)("(?:[^"\\]|\\.)*"|[A-Za-z0-9_-]+))$')
_PLACE = re.compile(r" \(at (?:line (\d+), column (\d+)|end of document)\)$")

Path_ = tuple[str | int, ...]


@dataclass(frozen=True)
class Source:
    """A file that the standard reader has accepted."""

    path: Path
    text: str
    values: dict[str, Any]

    def line(self, key: str) -> int | None:
        """The line (from 1) of a key path, or else of the nearest table or list around it; None if there is neither."""
        while key and key not in self._lines:
            key = _LAST_STEP.sub("", key)
        return self._lines.get(key)

    @cached_property
    def _lines(self) -> dict[str, int]:
        lines: dict[str, int] = {}
        for path, line in _key_lines(self.text):
            lines.setdefault(key_of(path), line)
        return lines


def read_text(path: Path, shown: str, key: str = "") -> str:
    """The UTF-8 text of a file (a byte order mark is let pass), or one problem that says why it cannot be read."""
    try:
        if path.is_dir():
            raise _Unreadable("a folder", "a file")
        if path.exists() and not path.is_file():
            raise _Unreadable("something that is not a file", "a file")
        with path.open("rb") as stream:
            data = stream.read(LARGEST_FILE + 1)
    except FileNotFoundError:
        raise _refused(shown, key, "no such file", "the path of a file that is there") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise _refused(shown, key, f"a file that cannot be read ({reason})", "a readable file") from None
    except _Unreadable as error:
        raise _refused(shown, key, error.found, error.accepted) from None
    if len(data) > LARGEST_FILE:
        raise _refused(shown, key, "a file of more than 2 MB", "a text file of a few thousand characters")
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise _refused(shown, key, "bytes that are not UTF-8", "text saved as UTF-8", line=line) from None


def read_source(path: Path) -> Source:
    """Read a TOML file. Raises :class:`DesignRefused` where it is missing, not text, or not TOML."""
    text = read_text(path, str(path))
    try:
        values = tomllib.loads(text)
    except RecursionError:
        raise _refused(str(path), "", "lists or tables nested too deeply", "a design file") from None
    except ValueError as error:  # of which tomllib.TOMLDecodeError is one
        raise DesignRefused(path, [_syntax_problem(str(error), text)]) from None
    return Source(path, text, values)


_TUPLE = re.compile(r"\((?:'[^']*',? ?)+\)")  # how the standard reader prints the path of a key


class _Unreadable(Exception):
    def __init__(self, found: str, accepted: str) -> None:
        self.found, self.accepted = found, accepted


def _refused(shown: str, key: str, found: str, accepted: str, line: int | None = None) -> DesignRefused:
    return DesignRefused(shown, [Problem(key, line, found, accepted, "cannot be read")])


def _syntax_problem(message: str, text: str) -> Problem:
    match = _PLACE.search(message)
    line: int | None = None
    if match is not None:
        message = message[: match.start()]
        line = int(match[1]) if match[1] else max(1, len(text.splitlines()))
        if match[2]:
            message += f", column {match[2]}"
    message = _TUPLE.sub(lambda found: "[" + ".".join(re.findall(r"'([^']*)'", found[0])) + "]", message)
    return Problem("", line, message[:1].lower() + message[1:], "TOML 1.0", "this line is not TOML")


# ---------------------------------------------------------------------------------------------- lines of keys


def _key_lines(text: str) -> Iterator[tuple[Path_, int]]:
    import tree_sitter  # with its grammar a fiftieth of a second, and only needed for a message
    import tree_sitter_toml

    parser = tree_sitter.Parser(tree_sitter.Language(tree_sitter_toml.language()))
    root = parser.parse(text.encode()).root_node
    counts: dict[Path_, int] = {}  # of the elements of each list of tables
    for node in root.children:
        if node.type == "pair":
            yield from _pair((), node)
        elif node.type in ("table", "table_array_element"):
            head: Path_ = ()
            steps = _key_steps(node)[:_DEEPEST]
            for place, step in enumerate(steps):
                head = (*head, step)
                yield head, _line(node)
                if node.type == "table_array_element" and place == len(steps) - 1:
                    counts[head] = counts.get(head, -1) + 1
                if head in counts:
                    head = (*head, counts[head])
                    yield head, _line(node)
            for child in node.children:
                if child.type == "pair":
                    yield from _pair(head, child)


def _pair(head: Path_, pair: Node) -> Iterator[tuple[Path_, int]]:
    for step in _key_steps(pair)[:_DEEPEST]:
        head = (*head, step)
        yield head, _line(pair)
    values = [child for child in pair.children if child.is_named and child.type != "comment"]
    yield from _value(head, values[-1])


def _value(head: Path_, node: Node) -> Iterator[tuple[Path_, int]]:
    if node.type == "array":
        items = [child for child in node.children if child.is_named and child.type != "comment"]
        for place, item in enumerate(items):
            yield (*head, place), _line(item)
            yield from _value((*head, place), item)
    elif node.type == "inline_table":
        for child in node.children:
            if child.type == "pair":
                yield from _pair(head, child)


def _key_steps(node: Node) -> list[str]:
    """The names of the key that a pair or a table's head begins with."""
    for child in node.children:
        if child.type in ("bare_key", "quoted_key", "dotted_key") and child.text is not None:
            text = child.text.decode()
            if child.type == "bare_key":
                return [text]
            nested: Any = tomllib.loads(f"{text} = 0")  # the standard reader knows the rules of quoting
            steps = []
            while isinstance(nested, dict):
                ((step, nested),) = nested.items()
                steps.append(step)
            return steps
    return []


def _line(node: Node) -> int:
    return node.start_point[0] + 1

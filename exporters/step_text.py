"""The text of a STEP file (ISO 10303-21): entities in an order and numbering that depend on their content only.

The modeller's writer stamps the time, counts names up within a process and orders some entities by their address in
memory. Here the data section is taken apart and put together again, so that one model is one sequence of bytes.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, field
from hashlib import blake2b
from itertools import groupby

_TOKEN = re.compile(r"'(?:[^']|'')*'|;|#\d+|[^';#\s]+")
# Lists that are sets: their order carries no meaning.
_SETS = ("MECHANICAL_DESIGN_GEOMETRIC_PRESENTATION_REPRESENTATION(", "PRESENTATION_LAYER_ASSIGNMENT(")
_QUOTE = "\\X2\\0027\\X0\\"
_OCCURRENCE = "NEXT_ASSEMBLY_USAGE_OCCURRENCE("
_SCHEMA = "AUTOMOTIVE_DESIGN { 1 0 10303 214 1 1 1 1 }"  # AP214


@dataclass(slots=True)
class Entity:
    """One statement of the data section: its text cut at its references, and the references."""

    texts: list[str] = field(default_factory=list)  # one more than refs
    refs: list[str] = field(default_factory=list)

    @property
    def kind(self) -> str:
        return self.texts[0]


def entities(text: str) -> dict[str, Entity]:
    """The data section of a STEP file by reference ("#12")."""
    start = text.index("DATA;") + len("DATA;")
    found: dict[str, Entity] = {}
    pieces: list[str] = []
    for match in _TOKEN.finditer(text, start):
        token = match[0]
        if token == ";":
            if pieces == ["ENDSEC"]:
                break
            found[pieces[0]] = _entity(pieces)
            pieces = []
        else:
            pieces.append(token if token[0] != "'" else _one_line(token))
    return found


def _one_line(quoted: str) -> str:
    """A quoted value without the writer's line breaks, and with its inner quotes in hexadecimal.

    The standard doubles them, but a widespread reader trips over a doubled quote before a bracket.
    """
    return "'" + quoted[1:-1].replace("\n", "").replace("\r", "").replace("''", _QUOTE) + "'"


def _entity(pieces: list[str]) -> Entity:
    entity = Entity([""])
    for i, token in enumerate(pieces[1:]):
        if token[0] == "#":
            entity.refs.append(token)
            entity.texts.append("")
        else:
            entity.texts[-1] += token[1:] if i == 0 else token  # the equals sign
    return entity


def strings(entity: Entity) -> list[str]:
    """The text values of an entity, decoded."""
    return [_decoded(t[1:-1]) for t in re.findall(r"'(?:[^']|'')*'", "".join(entity.texts))]


def _decoded(text: str) -> str:
    text = re.sub(r"\\X2\\((?:[0-9A-F]{4})*)\\X0\\", lambda m: bytes.fromhex(m[1]).decode("utf-16-be"), text)
    return text.replace("''", "'").replace("\\\\", "\\")


def encoded(text: str) -> str:
    """A text value as ISO 10303-21 writes it: backslashes doubled, quotes and letters outside ASCII in hexadecimal."""
    return _ascii(text.replace("\\", "\\\\").replace("'", _QUOTE))


def _ascii(text: str) -> str:
    return re.sub(r"[^\x20-\x7e]+", lambda m: f"\\X2\\{m[0].encode('utf-16-be').hex().upper()}\\X0\\", text)


def canonical(text: str, file_name: str, remarks: Sequence[str] = ()) -> str:
    """The same model with a fixed header and its entities ordered and numbered by content."""
    data = entities(text)
    counted: dict[str, int] = {}
    for ref, entity in data.items():
        if entity.kind.startswith(_OCCURRENCE):  # its first value counts up within the process
            counted[ref] = int(strings(entity)[0])
            entity.texts[0] = re.sub(r"\('(?:[^']|'')*'", "(''", entity.texts[0], count=1)
    order = _ordered(data, counted)
    number = {ref: f"#{i + 1}" for i, ref in enumerate(order)}
    lines: list[str] = []
    occurrences = 0
    for ref in order:
        entity = data[ref]
        parts = [entity.texts[0]]
        if entity.kind.startswith(_OCCURRENCE):
            occurrences += 1
            parts[0] = parts[0].replace("(''", f"('{occurrences}'", 1)
        for target, tail in zip(entity.refs, entity.texts[1:], strict=True):
            parts += (number[target], tail)
        lines.append(f"{number[ref]}={_ascii(''.join(parts))};")
    about = ",".join(f"'{encoded(r)}'" for r in remarks) or "''"
    header = (
        "ISO-10303-21;",
        "HEADER;",
        f"FILE_DESCRIPTION(({about}),'2;1');",
        f"FILE_NAME('{encoded(file_name)}','1970-01-01T00:00:00',(''),(''),'drawcrank','drawcrank','');",
        f"FILE_SCHEMA(('{_SCHEMA}'));",
        "ENDSEC;",
        "DATA;",
    )
    return "\n".join((*header, *lines, "ENDSEC;", "END-ISO-10303-21;", ""))


def _digests(data: dict[str, Entity]) -> dict[str, bytes]:
    """A fingerprint of each entity with everything that it refers to."""
    made: dict[str, bytes] = {}
    for root in data:
        stack = [root]
        while stack:
            ref = stack[-1]
            entity = data[ref]
            waiting = [r for r in entity.refs if r not in made]
            if ref in made or not waiting:
                stack.pop()
                if ref not in made:
                    below = [made[r] for r in entity.refs]
                    below = sorted(below) if entity.kind.startswith(_SETS) else below
                    content = "#".join(entity.texts).encode()
                    made[ref] = blake2b(content + b"".join(below), digest_size=16).digest()
            else:
                stack.extend(waiting)
    return made


def _ordered(data: dict[str, Entity], counted: dict[str, int]) -> list[str]:
    """All references, each entity before those it refers to, by fingerprint where the text leaves a choice.

    Occurrences in an assembly keep the order in which they were added, which ``counted`` tells.
    Entities of one fingerprint are told apart by what they refer to that has its place already.
    """
    digest = _digests(data)
    place: dict[str, int] = {}

    def choice(ref: str) -> tuple[bytes, list[int]]:
        return digest[ref], [place.get(below, len(data)) for below in _reach(data, ref, 2)]

    def take(root: str) -> None:
        stack = [root]
        while stack:
            ref = stack.pop()
            if ref in place:
                continue
            place[ref] = len(place)
            entity = data[ref]
            if entity.kind.startswith(_SETS):
                _sort_set(entity, choice)
            stack.extend(reversed(entity.refs))

    used = {r for entity in data.values() for r in entity.refs}
    roots = [r for r in data if r not in used]
    rank = ("APPLICATION_PROTOCOL", "SHAPE_DEFINITION", "CONTEXT_DEPENDENT")
    for first in (*rank, ""):
        group = [r for r in roots if r not in place and data[r].kind.startswith(first)]

        def key(root: str) -> tuple[int, bytes]:
            return max((counted.get(r, 0) for r in _reach(data, root, 2)), default=0), digest[root]

        for _, twins in groupby(sorted(group, key=key), key=key):
            for twin in sorted(twins, key=choice):
                take(twin)
    return list(place)


def _reach(data: dict[str, Entity], ref: str, depth: int) -> Iterator[str]:
    for below in data[ref].refs:
        yield below
        if depth > 1:
            yield from _reach(data, below, depth - 1)


def _sort_set(entity: Entity, key: Callable[[str], tuple[bytes, list[int]]]) -> None:
    """Put the members of the first list of a set entity in order; the reference after the list keeps its place."""
    opening = next(i for i, text in enumerate(entity.texts) if text.endswith("("))
    closing = next(i for i in range(opening + 1, len(entity.texts)) if ")" in entity.texts[i])
    entity.refs[opening:closing] = sorted(entity.refs[opening:closing], key=key)

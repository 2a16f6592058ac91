"""A spring's measured curve: its points from a CSV file, and whether the points can be a spring at all."""

from __future__ import annotations

import csv
import itertools
import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path

from parts.problems import DesignRefused, Problem, Refused, key_of, written
from parts.quantities import KINDS, factor, read_number
from parts.toml_source import read_text

KEY = "spring.table"
MOST_POINTS = 20_000
_MOST_PROBLEMS = 20  # of one file; a wrong column would otherwise be reported row by row
_HEADING = re.compile(r"(draw|force)(?:\s*\[\s*(\S+?)\s*\]|\s*\(\s*(\S+?)\s*\)|_(\S+))", re.IGNORECASE)
_OF_A_POINT = re.compile(rf"{re.escape(KEY)}\[(\d+)\]")
_KIND = {"draw": "length", "force": "force"}
_EXAMPLE = '"draw [mm],force [N]"'

Points = list[tuple[float, float]]


@dataclass(frozen=True, slots=True)
class SpringFile:
    """The points (mm, N) of a CSV file, each with its line there; or what is wrong with the file."""

    name: str
    points: Points
    lines: list[int]
    problems: list[Problem]

    def placed(self, problem: Problem) -> Problem:
        """A problem of one of the points, said of the file's line instead of the design's."""
        match = _OF_A_POINT.match(problem.key)
        if match is None or int(match[1]) >= len(self.lines):
            return problem
        return replace(problem, key=KEY, file=self.name, line=self.lines[int(match[1])])


def read_spring_csv(folder: Path, name: str) -> SpringFile:
    """Read a CSV file that stands beside the design.

    The first line names the two columns with their units, in either order: ``draw [mm],force [N]``,
    ``draw_mm,force_N`` or ``draw (in),force (lbf)``. Blank lines and lines that begin with # are passed over.
    """
    try:
        text = read_text(folder / name, name, key=KEY)
    except DesignRefused as refusal:
        problem = refusal.problems[0]
        found = f"{written(name)}: {problem.found}"
        accepted = "a CSV file, its path relative to the design file"
        return SpringFile(name, [], [], [Problem(KEY, None, found, accepted)])
    columns: list[tuple[str, float]] | None = None
    points: Points = []
    lines: list[int] = []
    problems: list[Problem] = []
    reader = csv.reader(text.splitlines(keepends=True))
    try:
        for row in reader:
            cells = [cell.strip() for cell in row]
            if not any(cells) or cells[0].startswith("#"):
                continue
            try:
                if columns is None:
                    columns = _columns(cells)
                else:
                    points.append(_point(cells, columns))
                    lines.append(reader.line_num)
            except Refused as refused:
                problems.append(_in_file(name, reader.line_num, refused))
                if columns is None or len(problems) >= _MOST_PROBLEMS:
                    break
            if len(points) > MOST_POINTS:
                problems.append(_in_file(name, reader.line_num, Refused("more points", f"at most {MOST_POINTS}")))
                break
    except csv.Error as error:
        problems.append(_in_file(name, reader.line_num, Refused(str(error), "lines of two numbers")))
    if columns is None and not problems:
        problems.append(_in_file(name, 1, Refused("no heading", f"a heading such as {_EXAMPLE}")))
    return SpringFile(name, points, lines, problems)


def _in_file(name: str, line: int, refused: Refused) -> Problem:
    return Problem(KEY, line, refused.found, refused.accepted, refused.text, file=name)


def _columns(cells: Sequence[str]) -> list[tuple[str, float]]:
    """For each column "draw" or "force", and the size of its unit in mm or N."""
    found = written(",".join(cells))
    accepted = f"a heading that names draw and force with their units, such as {_EXAMPLE}"
    if len(cells) == 1 and ";" in cells[0]:
        raise Refused(found, f"commas between the columns: {_EXAMPLE}")
    columns = []
    for cell in cells:
        if (match := _HEADING.fullmatch(cell)) is None:
            raise Refused(found, accepted)
        name, unit = match[1].lower(), match[2] or match[3] or match[4]
        kind = KINDS[_KIND[name]]
        if unit not in kind.units:
            raise Refused(written(cell), f"{kind.noun} in one of {', '.join(kind.units)}")
        columns.append((name, factor(_KIND[name], unit)))
    if sorted(name for name, _ in columns) != ["draw", "force"]:
        raise Refused(found, accepted)
    return columns


def _point(cells: Sequence[str], columns: Sequence[tuple[str, float]]) -> tuple[float, float]:
    if len(cells) != len(columns):
        raise Refused(written(",".join(cells)), "two numbers with one comma between them and a decimal point in each")
    values = {}
    for cell, (name, unit) in zip(cells, columns, strict=True):
        number = read_number(cell)
        if number is None:
            raise Refused(written(cell), "a plain number with a decimal point; the unit stands in the heading")
        if number < 0:
            raise Refused(written(cell), f"a {name} of 0 or more")
        values[name] = number * unit
    return values["draw"], values["force"]


def spring_table_problems(points: Sequence[tuple[float, float]]) -> list[Problem]:
    """Why points (mm, N) cannot be a spring's curve: too few, not from zero, not rising in draw, or without force."""
    found: list[Problem] = []

    def refuse(path: tuple[int, ...], what: str, accepted: str, text: str) -> None:
        found.append(Problem(key_of(("spring", "table", *path)), None, what, accepted, text))

    if len(points) < 2:
        refuse((), f"{len(points)} point{'s'[: len(points) != 1]}", "two or more", "a spring table needs two points")
        return found
    if points[0][0] != 0:
        refuse((0,), f"{points[0][0]:.6g} mm", "0 mm", "the spring table must start at zero draw")
    for place, ((before, _), (draw, _)) in enumerate(itertools.pairwise(points), start=1):
        if draw <= before:
            refuse(
                (place,),
                f"{draw:.6g} mm after {before:.6g} mm",
                "a larger draw at every point",
                "the spring table must rise in draw",
            )
            break
    for place, (draw, force) in enumerate(points):
        if draw < 0 or force < 0:
            refuse((place,), f"{draw:.6g} mm, {force:.6g} N", "0 or more", "a draw or a force is negative")
            break
    if all(force == 0 for _, force in points):
        refuse((), "no force at any draw", "a force above 0 somewhere", "this spring never pulls")
    return found

"""Single values of the design file: what each kind of key accepts, and how a value that it does not is refused."""

from __future__ import annotations

import re
from typing import Annotated

from pydantic import BaseModel, ConfigDict, Field, PlainValidator

from parts.fits import classes_of, fit_classes
from parts.problems import Refused, nearest, written
from parts.quantities import KINDS, factor, read_quantity

NEWEST_FORMAT = 1


class Table(BaseModel):
    """One table of a design file: no key that is not known, no value that has to be guessed at."""

    model_config = ConfigDict(extra="forbid", strict=True, frozen=True)


_NAME = re.compile(r"[A-Za-z0-9_][A-Za-z0-9_.-]{0,39}")
_RESERVED = re.compile(r"(?i:con|prn|aux|nul|com[0-9]|lpt[0-9])(\..*)?")


def quantity(
    kind: str,
    above: float | None = None,
    least: float | None = None,
    most: float | None = None,
    below: float | None = None,
) -> PlainValidator:
    """A quantity within bounds; the bounds are in the kind's bare unit (mm, N, degrees, rpm, …)."""
    wanted = KINDS[kind]

    def read(value: object) -> float:
        inside = read_quantity(value, kind)
        scale = factor(kind, wanted.bare)
        within = (
            (above is None or inside > above * scale)
            and (least is None or inside >= least * scale)
            and (most is None or inside <= most * scale)
            and (below is None or inside < below * scale)
        )
        if not within:
            raise Refused(written(value), f"{wanted.noun} {_bounds(above, least, most, below, wanted.bare)}")
        return inside + 0.0  # no minus zero

    return PlainValidator(read)


def number(
    above: float | None = None, least: float | None = None, most: float | None = None, below: float | None = None
) -> PlainValidator:
    """A bare number within bounds."""

    def read(value: object) -> float:
        accepted = f"a bare number {_bounds(above, least, most, below, '')}"
        if isinstance(value, bool) or not isinstance(value, (int, float)):
            raise Refused(written(value), accepted)
        within = (
            (above is None or value > above)
            and (least is None or value >= least)
            and (most is None or value <= most)
            and (below is None or value < below)
        )
        if not within or value != value:
            raise Refused(written(value), accepted)
        return float(value) + 0.0

    return PlainValidator(read)


def _bounds(above: float | None, least: float | None, most: float | None, below: float | None, unit: str) -> str:
    def text(value: float) -> str:
        return f"{value:.10g}" + (f" {unit}" if unit else "")

    if least is not None and most is not None:
        return f"from {text(least)} to {text(most)}"
    words = [f"more than {text(above)}"] if above is not None else []
    words += [f"{text(least)} or more"] if least is not None else []
    words += [f"{text(most)} at most"] if most is not None else []
    words += [f"less than {text(below)}"] if below is not None else []
    return " and ".join(words)


def _file_name(value: object) -> str:
    safe = isinstance(value, str) and _NAME.fullmatch(value) and not _RESERVED.fullmatch(value)
    if not isinstance(value, str) or not safe or value.endswith("."):
        raise Refused(
            written(value),
            "1 to 40 letters, digits, - _ or . for use in file names, beginning with a letter or a digit, "
            "not ending with a point, and not a name that Windows keeps for itself",
        )
    return value


def _line_of_text(value: object) -> str:
    if not isinstance(value, str) or not value.strip() or not value.isprintable() or len(value) > 120:
        raise Refused(written(value), "one line of 1 to 120 printable characters")
    return value


SURFACES = ("ground", "machined", "hot-rolled", "as-cut")
SURFACE_OF = ("plates", "holes", "pins")


def surfaces(value: object) -> dict[str, str]:
    """One surface for all, or a table of surfaces by what has them."""
    given: dict[str, object] = value if isinstance(value, dict) else dict.fromkeys(SURFACE_OF, value)
    named = " or ".join(f'"{name}"' for name in SURFACES)
    for what, name in given.items():
        if what not in SURFACE_OF:
            raise Refused(written(what), f"{', '.join(SURFACE_OF)} as the keys of surface", "unknown key")
        if name not in SURFACES:
            near = nearest(name, SURFACES) if isinstance(name, str) else None
            raise Refused(written(name), named + (f' (the nearest is "{near}")' if near else ""))
    return {what: str(name) for what, name in given.items()}


def file_format(value: object) -> int:
    if isinstance(value, int) and not isinstance(value, bool):
        if value == NEWEST_FORMAT:
            return value
        if value > NEWEST_FORMAT:
            raise Refused(
                written(value), str(NEWEST_FORMAT), f"format {written(value)} is newer than this version reads"
            )
    raise Refused(written(value), str(NEWEST_FORMAT))


def _fit(value: object) -> str:
    if not isinstance(value, str):
        raise Refused(written(value), 'hole and shaft class such as "H7/r6"')
    try:
        return "/".join(classes_of(value))
    except ValueError as nearest_fit:
        holes = ", ".join(sorted(name for name in fit_classes() if name[0].isupper()))
        shafts = ", ".join(sorted(name for name in fit_classes() if name[0].islower()))
        accepted = f'"{nearest_fit}" (the nearest); a hole class of {holes} and a shaft class of {shafts}, as "H7/r6"'
        raise Refused(written(value), accepted, "not a listed fit") from None


# Bounds that only keep arithmetic finite and nonsense out; no machine comes near them.
Length = Annotated[float, quantity("length", least=0.001, most=1e6)]
LengthOrNone = Annotated[float, quantity("length", least=0, most=1e6)]
Place = Annotated[float, quantity("length", least=-1e8, most=1e8)]
Force = Annotated[float, quantity("force", least=0, most=1e9)]
Rate = Annotated[float, quantity("rate", least=0, most=1e9)]
Mass = Annotated[float, quantity("mass", least=0, most=1e6)]
Stress = Annotated[float, quantity("stress", least=0.1, most=1e5)]
Coefficient = Annotated[float, number(least=0, most=1)]
SafetyTarget = Annotated[float, number(least=1, most=1000)]
FileName = Annotated[str, PlainValidator(_file_name)]
Fit = Annotated[str, PlainValidator(_fit)]
Text = Annotated[str, PlainValidator(_line_of_text)]
Corner = Annotated[tuple[Place, Place], Field(strict=False)]  # a list in the file
Polygon = Annotated[list[Corner], Field(max_length=1000)]
SpringPoint = Annotated[tuple[Annotated[float, quantity("length", least=0, most=1e6)], Force], Field(strict=False)]

"""The tables of a design file: which keys each has, and what a value may be by itself.

Every key may be left out here. What must be there, and what must fit together, is in ``parts.plausible``; so one wrong
value does not hide what is wrong with the others. Values come out in mm, N, MPa, rad, kg, s.
"""

from __future__ import annotations

import difflib
import re
from collections.abc import Iterable, Mapping
from typing import TYPE_CHECKING, Annotated, Literal, TypeVar, get_args

from pydantic import BaseModel, ConfigDict, Field, PlainValidator, ValidationError

from parts.fits import classes_of, fit_classes
from parts.problems import Problem, Refused, key_of, written
from parts.quantities import KINDS, factor, read_quantity

if TYPE_CHECKING:
    from pydantic_core import ErrorDetails

NEWEST_FORMAT = 1
NOT_YET = ("drive", "process", "tolerances")

_NAME = re.compile(r"[A-Za-z0-9_][A-Za-z0-9_.-]{0,39}")
_RESERVED = re.compile(r"(?i:con|prn|aux|nul|com[0-9]|lpt[0-9])(\..*)?")


# ------------------------------------------------------------------------------------------------ single values


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


def _surface(value: object) -> dict[str, str]:
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


def _format(value: object) -> int:
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


# ------------------------------------------------------------------------------------------------------ tables


class Table(BaseModel):
    model_config = ConfigDict(extra="forbid", strict=True, frozen=True)


T = TypeVar("T", bound=Table)


class DesignTable(Table):
    format: Annotated[int | None, PlainValidator(_format)] = None
    title: Text | None = None
    number: FileName | None = None
    revision: FileName | None = None
    units: Literal["metric", "us"] | None = None


class MechanismTable(Table):
    stack: Literal["twin", "single"] | None = None
    rotation: Literal["ccw", "cw"] | None = None
    crank_radius: Length | None = None
    link_length: Length | None = None
    seat_angle: Annotated[float | None, quantity("angle", least=-30, most=30)] = None
    stop_reach: Length | None = None
    hold_margin: Annotated[float | None, quantity("angle", above=0, below=60)] = None


class SheaveTable(Table):
    pin_diameter: Length | None = None
    pin_material: Text | None = None
    cheek: Length | None = None
    center: Corner | None = None
    pitch_radius: Annotated[float | None, quantity("length", least=0, most=1e8)] = None
    wrap: Literal["left", "right"] | None = None
    exit_angle: Annotated[float | None, quantity("angle", least=-360, most=360)] = None
    efficiency: Annotated[float | None, number(above=0.5, most=1)] = None


class SpringTable(Table):
    preload: Force | None = None
    rate: Rate | None = None
    table: list[SpringPoint] | None = None  # a file's name is replaced by its points before it comes here
    most_draw: Length | None = None


class ChainTable(Table):
    designation: Text | None = None
    kind: Literal["leaf", "roller"] | None = None
    strands: Annotated[int | None, Field(ge=1, le=3)] = None
    slack: LengthOrNone | None = None
    run_to_spring: LengthOrNone | None = None
    min_tensile_strength: Annotated[float | None, quantity("force", least=1, most=1e9)] = None
    pitch: Length | None = None
    width_over_pins: Length | None = None
    plate_height: Length | None = None
    plate_thickness: Length | None = None
    pin_diameter: Length | None = None
    inner_width: Length | None = None
    inner_link_width: Length | None = None
    lacing: Annotated[list[Annotated[int, Field(ge=1, le=12)]] | None, Field(min_length=2, max_length=2)] = None
    mass_per_metre: Annotated[float | None, quantity("mass_per_length", least=0, most=1e4)] = None


class DiscTable(Table):
    outer_diameter: Length | None = None
    thickness: Length | None = None
    bore: Length | None = None
    bolt_circle: Length | None = None
    bolt_count: Annotated[int | None, Field(ge=3, le=24)] = None
    bolt_hole: Length | None = None
    bolt_phase: Annotated[float | None, quantity("angle", least=-360, most=360)] = None
    material: Text | None = None


class LinkTable(Table):
    width: Length | None = None
    thickness: Length | None = None
    material: Text | None = None


class StopTable(Table):
    style: Literal["post", "block"] | None = None
    diameter: Length | None = None
    length: Length | None = None
    width: Length | None = None
    height: Length | None = None
    material: Text | None = None


class PinTable(Table):
    diameter: Length | None = None
    material: Text | None = None


class ChainEndTable(Table):
    width: Length | None = None
    pin_diameter: Length | None = None
    material: Text | None = None


class ClearancesTable(Table):
    plate_gap: LengthOrNone | None = None


class FitsTable(Table):
    crank_pin_disc: Fit | None = None
    crank_pin_link: Fit | None = None
    chain_pin_link: Fit | None = None
    chain_end: Fit | None = None
    stop_disc: Fit | None = None
    dowel: Fit | None = None


class ShaftTable(Table):
    diameter: Length | None = None
    overhang: Length | None = None
    bearing_spacing: Length | None = None
    drive: Literal["flange", "key"] | None = None
    key_length: Length | None = None
    phase_tolerance: Annotated[float | None, quantity("angle", least=0, most=30)] = None
    material: Text | None = None


class BearingTable(Table):
    kind: Literal["rolling", "plain"] | None = None
    static_rating: Annotated[float | None, quantity("force", above=0, most=1e9)] = None
    diameter: Length | None = None
    width: Length | None = None


class BearingsTable(Table):
    main: BearingTable | None = None
    sheave: BearingTable | None = None


class FrictionTable(Table):
    bearing: Coefficient | None = None
    crank_pin: Coefficient | None = None
    chain_pin: Coefficient | None = None
    bearing_radius: Length | None = None


class TargetsTable(Table):
    shock_factor: Annotated[float | None, number(least=1, most=100)] = None
    load_share: Annotated[float | None, number(least=0.5, most=1)] = None
    chain: SafetyTarget | None = None
    ultimate: SafetyTarget | None = None
    yield_: Annotated[SafetyTarget | None, Field(alias="yield")] = None


class EnclosureTable(Table):
    outline: Polygon | None = None
    above: LengthOrNone | None = None
    below: LengthOrNone | None = None
    behind: LengthOrNone | None = None
    ahead: LengthOrNone | None = None
    obstacles: list[Polygon] | None = None


class MovingTable(Table):
    mass: Mass | None = None
    payload_mass: Mass | None = None
    payload_leaves_at: LengthOrNone | None = None
    bumper_stiffness: Annotated[float | None, quantity("stiffness", above=0, most=1e9)] = None
    bumper_travel: Length | None = None
    gravity: Annotated[float | None, quantity("acceleration", least=-100, most=100)] = None
    disc_speed: Annotated[float | None, quantity("speed", least=0, most=100_000)] = None
    stopped_elsewhere: bool | None = None


class FatigueTable(Table):
    shots: Annotated[float | None, number(least=1, most=1e9)] = None
    reliability: Annotated[float | None, number(least=0.5, most=0.9999)] = None
    surface: Annotated[dict[str, str] | None, PlainValidator(_surface)] = None
    fillet_radius: Length | None = None
    chain_dynamic_strength: Annotated[float | None, quantity("force", least=1, most=1e9)] = None


class MaterialTable(Table):
    kind: Text | None = None
    yield_: Annotated[Stress | None, Field(alias="yield")] = None
    ultimate: Stress | None = None
    youngs_modulus: Annotated[float | None, quantity("stress", least=100, most=2e6)] = None
    poissons_ratio: Annotated[float | None, number(least=0, below=0.5)] = None
    density: Annotated[float | None, quantity("density", least=10, most=30_000)] = None
    source: Text | None = None


TABLES: Mapping[str, type[Table]] = {
    "design": DesignTable,
    "mechanism": MechanismTable,
    "sheave": SheaveTable,
    "spring": SpringTable,
    "chain": ChainTable,
    "disc": DiscTable,
    "link": LinkTable,
    "stop": StopTable,
    "crank_pin": PinTable,
    "chain_pin": PinTable,
    "chain_end": ChainEndTable,
    "clearances": ClearancesTable,
    "fits": FitsTable,
    "shaft": ShaftTable,
    "bearings": BearingsTable,
    "friction": FrictionTable,
    "targets": TargetsTable,
    "enclosure": EnclosureTable,
    "moving": MovingTable,
    "fatigue": FatigueTable,
}


# ---------------------------------------------------------------------------------------------------- problems


def keys_of(model: type[Table]) -> list[str]:
    """The keys of a table as they are written in the file."""
    return [field.alias or name for name, field in model.model_fields.items()]


def nearest(word: str, known: Iterable[str]) -> str | None:
    """The one of the known words that a word was most likely meant to be."""
    lowered = {name.lower(): name for name in known}
    close = difflib.get_close_matches(word.lower(), lowered, n=1, cutoff=0.6)
    return lowered[close[0]] if close else None


def validate(model: type[T], path: tuple[str, ...], raw: object) -> tuple[T, list[Problem]]:
    """One table of a design file, and what is wrong with it; a key whose value is refused comes out as None."""
    if not isinstance(raw, dict):
        return model(), [Problem(key_of(path), None, written(raw), f"a table, [{key_of(path)}]")]
    try:
        return model.model_validate(raw), []
    except ValidationError as error:
        details = error.errors(include_url=False)
    problems = [_problem(model, path, detail) for detail in details]
    refused = {detail["loc"][0] for detail in details}
    return model.model_validate({key: value for key, value in raw.items() if key not in refused}), problems


def unknown_key(path: tuple[str | int, ...], known: Iterable[str]) -> Problem:
    """A key that nothing reads, with the nearest that something does, here or in another table."""
    word, known = str(path[-1]), list(known)
    noun = "table" if len(path) == 1 else "key"
    if (meant := nearest(word, known)) is not None:
        advice = f"{meant} (the nearest known {noun}); here: {', '.join(known)}"
    else:
        elsewhere = [f"[{name}]" for name, model in TABLES.items() if word in keys_of(model)]
        advice = f"here: {', '.join(known)}" + (f"; {word} is a key of {', '.join(elsewhere)}" if elsewhere else "")
    return Problem(key_of(path), None, word, advice, f"unknown {noun}")


def _problem(model: type[Table], path: tuple[str, ...], detail: ErrorDetails) -> Problem:
    where = (*path, *detail["loc"])
    value, context = detail["input"], detail.get("ctx", {})
    if detail["type"] == "extra_forbidden":
        return unknown_key(where, keys_of(_inner(model, detail["loc"][:-1])))
    refused = context.get("error")
    if isinstance(refused, Refused):
        return Problem(key_of(where), None, refused.found, refused.accepted, refused.text)
    if detail["type"] == "missing":  # of a list that stands for a tuple
        return Problem(key_of(where[:-1]), None, written(value), "two values, [first, second]")
    accepted = _ACCEPTED.get(detail["type"], detail["msg"]).format(**context)
    if detail["type"] == "literal_error" and isinstance(value, str):
        choices = re.findall(r"'([^']*)'", str(context["expected"]))
        accepted = " or ".join(f'"{choice}"' for choice in choices)
        if (meant := nearest(value, choices)) is not None:
            accepted += f' (the nearest is "{meant}")'
    return Problem(key_of(where), None, written(value), accepted)


def _inner(model: type[Table], path: tuple[str | int, ...]) -> type[Table]:
    """The table within a table that a path leads to."""
    for key in path:
        named = get_args(model.model_fields[str(key)].annotation)
        model = next(one for one in named if isinstance(one, type) and issubclass(one, Table))
    return model


_ACCEPTED: Mapping[str, str] = {
    "literal_error": "{expected}",
    "int_type": "a whole number without quotes",
    "bool_type": "true or false, without quotes",
    "model_type": "a table",
    "list_type": "a list",
    "tuple_type": "a list of two values",
    "too_long": "a list of at most {max_length} values",
    "too_short": "a list of at least {min_length} values",
    "greater_than_equal": "{ge} or more",
    "less_than_equal": "{le} or less",
}

"""The tables of a design file: which keys each has, and what a value may be by itself.

Every key may be left out here. What must be there, and what must fit together, is in ``parts.plausible``; so one wrong
value does not hide what is wrong with the others. Values come out in mm, N, MPa, rad, kg, s.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from typing import TYPE_CHECKING, Annotated, Literal, TypeVar, get_args

from pydantic import Field, PlainValidator, ValidationError

from parts.far_ends.registry import KINDS
from parts.problems import Problem, Refused, key_of, nearest, written
from parts.schema_studies import DriveTable, TolerancesTable
from parts.schema_values import (
    Coefficient,
    Corner,
    FileName,
    Fit,
    Force,
    Length,
    LengthOrNone,
    Mass,
    Polygon,
    Rate,
    SafetyTarget,
    SpringPoint,
    Stress,
    Table,
    Text,
    file_format,
    number,
    quantity,
    surfaces,
)

if TYPE_CHECKING:
    from pydantic_core import ErrorDetails

NOT_YET = ("process",)


T = TypeVar("T", bound=Table)


class DesignTable(Table):
    format: Annotated[int | None, PlainValidator(file_format)] = None
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
    reverse: Literal["forbidden", "rated"] | None = None


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
    surface_yield: Stress | None = None
    case_depth: Length | None = None
    material: Text | None = None


class StopTable(Table):
    style: Literal["post", "block"] | None = None
    diameter: Length | None = None
    length: Length | None = None
    width: Length | None = None
    height: Length | None = None
    surface_yield: Stress | None = None
    case_depth: Length | None = None
    material: Text | None = None


class PinTable(Table):
    diameter: Length | None = None
    surface_yield: Stress | None = None
    case_depth: Length | None = None
    material: Text | None = None


class ChainEndTable(Table):
    width: Length | None = None
    height: Length | None = None
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


class LockPinTable(Table):
    diameter: Length | None = None
    radius: Length | None = None
    material: Text | None = None


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
    disc_speed: Annotated[float | None, quantity("speed", above=0, most=100_000)] = None
    stopped_elsewhere: bool | None = None
    line_stiffness: Annotated[float | None, quantity("stiffness", above=0, most=1e9)] = None
    line_damping: Annotated[float | None, number(least=0, below=1)] = None
    sheave_mass: Mass | None = None
    bumper_damping: Annotated[float | None, number(least=0, most=2)] = None


class FatigueTable(Table):
    shots: Annotated[float | None, number(least=1, most=1e9)] = None
    reliability: Annotated[float | None, number(least=0.5, most=0.9999)] = None
    surface: Annotated[dict[str, str] | None, PlainValidator(surfaces)] = None
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
    **{kind.name: kind.table for kind in KINDS.values()},
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
    "lock_pin": LockPinTable,
    "friction": FrictionTable,
    "targets": TargetsTable,
    "enclosure": EnclosureTable,
    "moving": MovingTable,
    "fatigue": FatigueTable,
    "tolerances": TolerancesTable,
    "drive": DriveTable,
}


# ---------------------------------------------------------------------------------------------------- problems


def keys_of(model: type[Table]) -> list[str]:
    """The keys of a table as they are written in the file."""
    return [field.alias or name for name, field in model.model_fields.items()]


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

"""The tables that studies bring: ``[tolerances]`` and ``[drive]``. As in ``parts.schema``, every key may be left out."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from parts.schema_values import LengthOrNone, Table, number, quantity

AngleOrNone = Annotated[float, quantity("angle", least=0, most=30)]
Torque = Annotated[float, quantity("torque", above=0, most=1e6)]
Speed = Annotated[float, quantity("speed", above=0, most=1e6)]


class TolerancesTable(Table):
    chance: Annotated[float | None, number(least=1e-9, most=0.5)] = None
    samples: Annotated[int | None, Field(ge=1024, le=1_048_576)] = None
    seed: Annotated[int | None, Field(ge=0, le=2_147_483_647)] = None
    distribution: Literal["normal", "uniform"] | None = None
    crank_radius: LengthOrNone | None = None
    link_length: LengthOrNone | None = None
    stop_position: LengthOrNone | None = None
    link_width: LengthOrNone | None = None
    sheave_x: LengthOrNone | None = None
    sheave_y: LengthOrNone | None = None
    tie_length: LengthOrNone | None = None
    output_x: LengthOrNone | None = None
    output_y: LengthOrNone | None = None
    arm: LengthOrNone | None = None
    draw_direction: AngleOrNone | None = None
    chain_length: LengthOrNone | None = None
    worn_elongation: Annotated[float | None, number(least=0, most=0.1)] = None
    encoder_offset: AngleOrNone | None = None
    backlash: AngleOrNone | None = None


class DriveTable(Table):
    stall_torque: Torque | None = None
    free_speed: Speed | None = None
    torque_constant: Annotated[float | None, quantity("torque_constant", above=0, most=1e5)] = None
    resistance: Annotated[float | None, quantity("resistance", above=0, most=1e6)] = None
    supply_voltage: Annotated[float | None, quantity("voltage", above=0, most=1e5)] = None
    reduction: Annotated[float | None, number(above=0, most=1e6)] = None
    efficiency: Annotated[float | None, number(above=0, most=1)] = None
    backdriving_efficiency: Annotated[float | None, number(least=0, most=1)] = None
    holding_torque: Annotated[float | None, quantity("torque", least=0, most=1e6)] = None
    inertia: Annotated[float | None, quantity("inertia", least=0, most=1e6)] = None
    rotor_inertia: Annotated[float | None, quantity("inertia", least=0, most=1e6)] = None
    encoder_counts: Annotated[int | None, Field(ge=1, le=1_000_000_000)] = None
    encoder_on: Literal["disc", "motor"] | None = None
    winding_time: Annotated[float | None, quantity("time", least=0.01, most=86_400)] = None

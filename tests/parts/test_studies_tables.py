"""The ``[tolerances]`` and ``[drive]`` tables: read, defaulted, refused with their keys; general tolerances as printed."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from parts.design import Drive, Tolerances
from parts.problems import Problem
from parts.quantities import read_quantity, show
from parts.records_studies import backdriven
from parts.tolerances import general, source
from tests.loads.far_end_designs import DESIGNS
from tests.parts.designs import FULL, LEAST, read


def drive(folder: Path, text: str) -> Drive:
    reading = read(folder, f"{LEAST}[drive]\n{text}")
    assert reading.problems == ()
    assert reading.design is not None
    assert reading.design.drive is not None
    return reading.design.drive


def tolerances(folder: Path, text: str = "") -> Tolerances:
    reading = read(folder, f"{LEAST}[tolerances]\n{text}")
    assert reading.problems == ()
    assert reading.design is not None
    assert reading.design.tolerances is not None
    return reading.design.tolerances


def test_a_design_without_them(tmp_path: Path) -> None:
    design = read(tmp_path, FULL).design
    assert design is not None
    assert design.drive is None
    assert design.tolerances is None
    assert not any(row.key.startswith(("drive", "tolerances")) for row in design.assumed)


def test_an_inertia_alone(tmp_path: Path) -> None:
    found = drive(tmp_path, 'inertia = "0.02 kg·m2"\n')
    assert found.inertia == pytest.approx(20_000.0)
    assert found.stall_torque is None
    reading = read(tmp_path, f'{LEAST}[drive]\ninertia = "0.02 kg·m2"\n').design
    assert reading is not None
    # gear and efficiency play no part without a motor
    assert not any(row.key.startswith("drive") for row in reading.assumed)


@pytest.mark.parametrize("text", ["0.02", '"0.02 kg·m²"', '"200 kg·cm2"', '"20000 kg·mm2"', '"200000 g·cm2"'])
def test_inertia_in_any_unit(tmp_path: Path, text: str) -> None:
    assert drive(tmp_path, f"inertia = {text}\n").inertia == pytest.approx(20_000.0)


def test_inertia_in_pounds_and_back() -> None:
    inside = read_quantity("10 lb·in2", "inertia")
    assert inside == pytest.approx(10 * 0.45359237 * 25.4**2)
    assert read_quantity(show(inside, "inertia", "us"), "inertia") == pytest.approx(inside)


def test_a_rotor_counts_by_the_square_of_the_reduction(tmp_path: Path) -> None:
    found = drive(tmp_path, 'rotor_inertia = "300 g·cm2"\nreduction = 60\n')
    assert found.inertia == pytest.approx(300e-3 * 100 * 60**2)


def test_both_ways_of_giving_the_motor_agree(tmp_path: Path) -> None:
    by_constant = drive(
        tmp_path,
        'torque_constant = "0.05 N·m/A"\nresistance = "0.3 ohm"\nsupply_voltage = "24 V"\nreduction = 60\nefficiency = 0.8',
    )
    # k V/R = 0.05 × 80 A, V/k = 480 rad/s
    assert by_constant.stall_torque == pytest.approx(4000.0)
    assert by_constant.free_speed == pytest.approx(480.0)
    by_stall = drive(
        tmp_path,
        'stall_torque = "4 N·m"\nfree_speed = "480 rad/s"\nsupply_voltage = 24\nreduction = 60\nefficiency = 0.8\n',
    )
    assert by_stall.torque_constant == pytest.approx(50.0)
    assert by_stall.stall_torque == pytest.approx(by_constant.stall_torque)


def test_what_a_drive_assumes_is_listed(tmp_path: Path) -> None:
    design = read(tmp_path, f'{LEAST}[drive]\nstall_torque = 4\nfree_speed = "3000 rpm"\nreduction = 60\n').design
    assert design is not None
    found = {row.key: row.value for row in design.assumed if row.key.startswith("drive.")}
    assert found == {"drive.efficiency": 0.8, "drive.backdriving_efficiency": 0.75}


def test_a_worm_locks_itself() -> None:
    assert backdriven(0.5) == 0.0
    assert backdriven(0.35) == 0.0
    assert backdriven(1.0) == 1.0
    # the same loss both ways: 10 in, 8 out; driven by 8 it loses 2 again and gives 6
    assert backdriven(0.8) == pytest.approx(6 / 8)


def test_an_empty_table_of_tolerances(tmp_path: Path) -> None:
    found = tolerances(tmp_path)
    assert (found.chance, found.samples, found.seed, found.distribution) == (1e-4, 100_000, 1, "normal")
    assert found.crank_radius is None
    assert found.backlash is None
    design = read(tmp_path, f"{LEAST}[tolerances]\n").design
    assert design is not None
    rows = {row.key: row for row in design.assumed if row.key.startswith("tolerances.")}
    assert set(rows) == {f"tolerances.{key}" for key in ("chance", "samples", "seed", "distribution")}
    assert all(row.why for row in rows.values())


def test_tolerances_as_given(tmp_path: Path) -> None:
    found = tolerances(tmp_path, 'crank_radius = "0.002 in"\nbacklash = "0.25 deg"\nchance = 1e-6\nsamples = 4096\n')
    assert found.crank_radius == pytest.approx(0.0508)
    assert found.backlash == pytest.approx(math.radians(0.25))
    assert (found.chance, found.samples) == (1e-6, 4096)


MOTOR = 'stall_torque = 4\nfree_speed = "3000 rpm"\n'


@pytest.mark.parametrize(
    ("text", "key", "advice"),
    [
        ('stall_torque = "-1 N·m"\nfree_speed = 1', "drive.stall_torque", "more than 0"),
        ("stall_torque = 4", "drive.free_speed", "since stall_torque is given"),
        ("free_speed = 4", "drive.stall_torque", "since free_speed is given"),
        (MOTOR + "torque_constant = 0.1", "drive.torque_constant", "not both"),
        (MOTOR + "resistance = 0.1", "drive.resistance", "not both"),
        ("torque_constant = 0.1\nsupply_voltage = 24", "drive.resistance", "since torque_constant is given"),
        ("torque_constant = 0.1\nresistance = 1", "drive.supply_voltage", "since torque_constant is given"),
        (MOTOR + "efficiency = 1.2", "drive.efficiency", "1 at most"),
        (MOTOR + "efficiency = 0", "drive.efficiency", "more than 0"),
        (MOTOR + "efficiency = 0.7\nbackdriving_efficiency = 0.8", "drive.backdriving_efficiency", "no more than"),
        (MOTOR + "backdriving_efficiency = -0.1", "drive.backdriving_efficiency", "from 0"),
        (MOTOR + "reduction = 0", "drive.reduction", "more than 0"),
        (MOTOR + 'holding_torque = "-2 N·m"', "drive.holding_torque", "from 0"),
        ("inertia = -1", "drive.inertia", "from 0"),
        ('inertia = "2 kg"', "drive.inertia", "a moment of inertia"),
        ("inertia = 1\nrotor_inertia = 1", "drive.rotor_inertia", "not both"),
        (MOTOR + 'encoder_on = "disc"', "drive.encoder_counts", "since encoder_on"),
        (MOTOR + 'encoder_counts = 100\nencoder_on = "disk"', "drive.encoder_on", '"disc"'),
        (MOTOR + "encoder_counts = 0", "drive.encoder_counts", "1 or more"),
        (MOTOR + 'supply_voltage = "24 W"', "drive.supply_voltage", "a voltage"),
        (MOTOR + "winding_time = 0", "drive.winding_time", "from 0.01"),
        (MOTOR + "stal_torque = 3", "drive.stal_torque", "stall_torque (the nearest"),
        (
            'torque_constant = 0.05\nresistance = 0.3\nsupply_voltage = 24\nfree_speed = "6000 rpm"',
            "drive.free_speed", "480 rad/s at most",
        ),
    ],
)  # fmt: skip
def test_drives_refused(tmp_path: Path, text: str, key: str, advice: str) -> None:
    problem = refused(tmp_path, LEAST, f"[drive]\n{text}\n", key)
    assert advice in f"{problem.text} {problem.accepted}"


@pytest.mark.parametrize(
    ("text", "key", "advice"),
    [
        ("chance = 0", "tolerances.chance", "from 1e-09"),
        ("chance = 0.9", "tolerances.chance", "0.5"),
        ("samples = 10", "tolerances.samples", "1024"),
        ("samples = 1e5", "tolerances.samples", "whole number"),
        ("seed = -1", "tolerances.seed", "0 or more"),
        ('distribution = "gauss"', "tolerances.distribution", '"normal" or "uniform"'),
        ("crank_radius = -0.1", "tolerances.crank_radius", "from 0"),
        ('crank_radius = "0.1 deg"', "tolerances.crank_radius", "a length"),
        ("link_length = 20", "tolerances.link_length", "too wide"),
        ("worn_elongation = 0.5", "tolerances.worn_elongation", "0.1"),
        ('encoder_offset = "-1 deg"', "tolerances.encoder_offset", "from 0"),
        ("tie_length = 1", "tolerances.tie_length", "there is no [tie]"),
        ("arm = 1", "tolerances.arm", "there is no [tie]"),
        ("backlsh = 1", "tolerances.backlsh", "backlash (the nearest"),
    ],
)
def test_tolerances_refused(tmp_path: Path, text: str, key: str, advice: str) -> None:
    problem = refused(tmp_path, LEAST, f"[tolerances]\n{text}\n", key)
    assert advice in f"{problem.text} {problem.accepted}"


@pytest.mark.parametrize(
    ("design", "text", "key", "advice"),
    [
        ("slide", "sheave_x = 1", "tolerances.sheave_x", "neither sheave nor chain"),
        ("slide", "arm = 1", "tolerances.arm", "the output is a slide"),
        ("rocker", "chain_length = 1", "tolerances.chain_length", "neither sheave nor chain"),
        ("rocker", "draw_direction = 1", "tolerances.draw_direction", "the output is a rocker"),
    ],
)
def test_tolerances_of_what_is_not_there(tmp_path: Path, design: str, text: str, key: str, advice: str) -> None:
    problem = refused(tmp_path, DESIGNS[design], f"[tolerances]\n{text}\n", key)
    assert advice in f"{problem.text} {problem.accepted}"


def refused(folder: Path, design: str, text: str, key: str) -> Problem:
    problems = [p for p in read(folder, f"{design}{text}").problems if not p.text.startswith("not listed")]
    (problem,) = [p for p in problems if p.key.startswith(("drive", "tolerances"))]
    assert problem.key == key
    return problem


@pytest.mark.parametrize("name", ["drive", "tolerances"])
def test_not_a_table(tmp_path: Path, name: str) -> None:
    (problem,) = read(tmp_path, f"{name} = 3\n{LEAST}").problems
    assert problem.key == name


def test_general_tolerances_as_the_standard_prints_them() -> None:
    """ISO 2768-1 table 1, class m: the standard's own columns, each at its ends."""
    printed = {
        (0.5, 3.0): 0.1, (3.001, 6.0): 0.1, (6.001, 30.0): 0.2, (30.001, 120.0): 0.3, (120.001, 400.0): 0.5,
        (400.001, 1000.0): 0.8, (1000.001, 2000.0): 1.2, (2000.001, 4000.0): 2.0,
    }  # fmt: skip
    for (low, high), value in printed.items():
        assert general(low) == value
        assert general(high) == value
    assert "ISO 2768-1" in source("general")

"""Mechanisms that cannot exist are refused, with the key, its line and what would be accepted."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from loads.refusals import mechanism_problems
from parts.problems import DesignRefused
from tests.starters import changed, examined

CANNOT_EXIST = {
    "wrap over 270": (
        changed("impact-rig", sheave__exit_angle='"60 deg"'),
        ("sheave.exit_angle",),
        "within 0 and 270 deg",
    ),
    "table too short": (
        changed("impact-rig", spring__table='[["0 mm", "0 N"], ["100 mm", "10 kN"]]'),
        ("spring.table",),
        "largest draw, 172",
    ),
    "slack never taken up": (
        changed("seed-thrower", chain__slack='"95 mm"'),
        ("chain.slack",),
        "less than the whole pull, 92",
    ),
    "two at once": (
        changed("impact-rig", sheave__exit_angle='"60 deg"', spring__table='[["0 mm", "0 N"], ["100 mm", "10 kN"]]'),
        ("sheave.exit_angle", "spring.table"),
        "",
    ),
}


@pytest.mark.parametrize("name", CANNOT_EXIST)
def test_refused_with_its_key(name: str, tmp_path: Path) -> None:
    text, keys, accepted = CANNOT_EXIST[name]
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text)
    said = str(refusal.value)
    for key in keys:
        assert key in said
    assert accepted in said
    for problem in refusal.value.problems:
        assert problem.line is not None
        assert problem.key.split(".")[1] in text.splitlines()[problem.line - 1]


BEYOND = {
    # changes, key, its range
    "link": ({"link__material": '"S500MC"', "link__thickness": '"20 mm"'}, "link.thickness", "up to 16 mm"),
    "disc of the proportioned grade": ({"disc__thickness": '"160 mm"'}, "disc.thickness", "up to 150 mm"),
    "pin": ({"crank_pin__material": '"16MnCr5"', "crank_pin__diameter": '"70 mm"'}, "crank_pin.diameter", "up to 63 mm"),
    "stop": ({"stop__width": '"260 mm"'}, "stop.width", "up to 250 mm"),
    "chain end": ({"chain_end__material": '"C15E"', "chain_end__width": '"32 mm"'}, "chain_end.width", "up to 30 mm"),
}  # fmt: skip


@pytest.mark.parametrize("name", BEYOND)
def test_a_size_outside_the_material_s_table_is_refused_with_its_range(name: str, tmp_path: Path) -> None:
    changes, key, accepted = BEYOND[name]
    text = changed("impact-rig", **changes)
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text)
    (problem,) = refusal.value.problems
    assert problem.key == key
    assert accepted in problem.accepted
    assert problem.line is not None
    assert key.split(".")[1] in text.splitlines()[problem.line - 1]


def test_a_given_size_is_refused_together_with_the_mechanism_s_problems(tmp_path: Path) -> None:
    text = changed("impact-rig", sheave__exit_angle='"60 deg"', link__material='"S700MC"', link__thickness='"20 mm"')
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text)
    assert {p.key for p in refusal.value.problems} == {"sheave.exit_angle", "link.thickness"}


def test_a_proportioned_size_stays_inside_the_material_s_table(tmp_path: Path) -> None:
    text = changed(
        "impact-rig", link__material='"S355MC"', disc__material='"S700MC"', crank_pin__material='"C15E"',
        chain_pin__material='"C15E"', stop__material='"C15E"',
    )  # fmt: skip
    e = examined(tmp_path, text)  # weak grades: the checks may fall short, but nothing leaves its table
    z = e.sizes
    assert z.link.thickness <= 20.0
    assert z.disc.thickness <= 16.0
    assert max(z.crank_pin.diameter, z.chain_pin.middle_diameter, z.stop.diameter, z.stop.width) <= 30.0
    assert not e.holds


def test_a_size_that_follows_from_the_chain_names_the_material(tmp_path: Path) -> None:
    text = changed("impact-rig", chain_end__material='"C15E"')
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text)
    (problem,) = refusal.value.problems
    assert problem.key == "chain_end.material"
    assert "up to 30 mm" in problem.accepted
    assert problem.line is not None


def test_a_material_of_one_s_own_has_no_range(tmp_path: Path) -> None:
    own = (
        '\n[materials.plate]\nyield = "690 MPa"\nultimate = "770 MPa"\nyoungs_modulus = "210 GPa"\n'
        'density = "7850 kg/m3"\nsource = "test"\n'
    )
    text = changed("impact-rig", link__material='"plate"', link__thickness='"40 mm"') + own
    assert examined(tmp_path, text).sizes.link.thickness == 40.0


def test_file_and_mechanism_problems_come_together(tmp_path: Path) -> None:
    text = changed("impact-rig", sheave__exit_angle='"60 deg"', disc__colour='"red"', link__thickness='"8 N"')
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, text)
    assert {p.key for p in refusal.value.problems} == {"sheave.exit_angle", "disc.colour", "link.thickness"}


def test_a_mechanism_without_its_events_is_named(tmp_path: Path) -> None:
    """No design within the file's ranges lacks an event (40,000 random ones had all); those made by other means may."""
    e = examined(tmp_path, changed("impact-rig"))
    at = e.figures.events
    for lost in ("catch", "null", "release"):
        events = replace(at, **{lost: np.asarray(np.nan)})
        (problem,) = mechanism_problems(e.design, replace(e.figures, events=events))
        assert problem.key == "mechanism.seat_angle"
        assert f"no {lost}" in problem.text
    early = replace(at, hold=at.catch - 0.01)
    (problem,) = mechanism_problems(e.design, replace(e.figures, events=early))
    assert problem.key == "mechanism.hold_margin"
    assert problem.accepted.startswith("less than 17")


@pytest.mark.parametrize("units", ["metric", "us"])
def test_sizes_are_refused_in_the_design_s_units(units: str, tmp_path: Path) -> None:
    """20 mm are 0.787402 in, 16 mm 0.629921 in; the millimetres stay where they were."""
    changes = {"link__material": '"S500MC"', "link__thickness": '"20 mm"', "design__units": f'"{units}"'}
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, changed("impact-rig", **changes))
    (problem,) = refusal.value.problems
    us = units == "us"
    assert problem.found == f"20 mm{' (0.787402 in)' if us else ''} of S500MC"
    assert f"up to 16 mm{' (0.629921 in)' if us else ''}, what" in problem.accepted


@pytest.mark.parametrize(
    "changes",
    [
        {"spring__table": '[["0 mm", "0 N"], ["100 mm", "10 kN"]]'},
        {"chain_end__material": '"C15E"'},
    ],
)
def test_every_length_of_a_us_refusal_has_its_inches(changes: dict[str, str], tmp_path: Path) -> None:
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, changed("impact-rig", design__units='"us"', **changes))
    (problem,) = refusal.value.problems
    for text in (problem.found, problem.accepted):
        assert text.count(" mm") == text.count(" in)") > 0

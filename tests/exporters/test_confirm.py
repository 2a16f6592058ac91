"""The mesh and the records against the solid modeller: they agree, and a part that differs is found."""

from __future__ import annotations

from dataclasses import replace

import pytest

from exporters.confirm import confirm
from parts.outline import Part, Plate
from parts.solids import solid
from tests.parts.samples import ALL, disc, link, spacer


@pytest.mark.parametrize("part", ALL, ids=lambda p: p.name)
def test_a_part_is_confirmed(part: Part) -> None:
    found = confirm(part, solid(part))
    assert found.holds, found.failing
    assert found.watertight
    assert found.record_volume_difference < 1e-9
    assert found.mesh_volume_difference < 3e-3


def test_a_solid_that_is_not_its_record_is_found() -> None:
    part = link()
    assert isinstance(part.body, Plate)
    thicker = replace(part, body=replace(part.body, thickness=12.01))
    found = confirm(part, solid(thicker))
    assert not found.holds
    assert any("volume from outline or profile" in text for text in found.failing)
    assert any("centre of mass from outline or profile" in text for text in found.failing)


def test_the_wrong_hand_is_found() -> None:
    found = confirm(disc("back", -1), solid(disc("front", 1)))
    assert any("centre of mass" in text for text in found.failing)


def test_an_open_shell_is_found() -> None:
    from cadquery import Shell

    shell = Shell.makeShell(solid(spacer()).Faces()[:-1])
    found = confirm(spacer(), shell)
    assert not found.watertight
    assert any("not watertight" in text for text in found.failing)
    assert any("0 solids" in text for text in found.failing)

"""Sizes that a design may give and that fit nothing: each is caught by its own check."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.starters import changed, examined, text_of

# starter, what is given, the check that must fall short
FITS_NOTHING = {
    "no bolt passes": ("seed-thrower", {"disc__bolt_hole": '"1 mm"'}, ("crank_disc", "a listed bolt passes")),
    "bolt loose in its hole": ("impact-rig", {"disc__bolt_hole": '"60 mm"'}, ("crank_disc", "bolt fills its hole")),
    "six small bolts": ("impact-rig", {"disc__bolt_hole": '"3.4 mm"'}, ("crank_disc", "hub bolt yield")),
    "no spigot": ("impact-rig", {"disc__bore": '"1 mm"'}, ("crank_disc", "spigot locates the hub")),
    "bearing in the disc": (
        "impact-rig",
        {"shaft__overhang": '"0.1 mm"'},
        ("main_shaft", "room for the first bearing"),
    ),
    "bearings in each other": (
        "impact-rig",
        {"shaft__bearing_spacing": '"1 mm"'},
        ("main_shaft", "room between the bearings"),
    ),
    "thin shaft": ("impact-rig", {"shaft__diameter": '"15 mm"'}, ("main_shaft", "bending with torsion")),
    "bush on no shaft": (
        "impact-rig",
        {"bearings__main": '{ kind = "plain", diameter = "500 mm", width = "40 mm" }'},
        ("main_bearing", "bush fits what turns in it"),
    ),
    "paper cheek": ("impact-rig", {"sheave__cheek": '"0.1 mm"'}, ("sheave_pin", "bearing in the cheek")),
    "disc through the sheave": (
        "impact-rig",
        {"disc__outer_diameter": '"900 mm"'},
        ("crank_disc", "clear of the sheave"),
    ),
    "wide thin link": (
        "impact-rig",
        {"link__thickness": '"3 mm"', "link__width": '"200 mm"'},
        ("swing_link", "width over thickness"),
    ),
    "endless key": (
        "impact-rig",
        {"shaft__drive": '"key"', "shaft__key_length": '"900 mm"'},
        ("main_shaft", "key no longer than twice the shaft"),
    ),
    "plates that rub": ("impact-rig", {"clearances__plate_gap": '"0 mm"'}, ("assembly", "running gap")),
}


@pytest.mark.parametrize("name", FITS_NOTHING)
def test_caught_by_its_own_check(name: str, tmp_path: Path) -> None:
    starter, changes, wanted = FITS_NOTHING[name]
    e = examined(tmp_path, changed(starter, **changes))
    assert wanted in {(c.part, c.check) for c in e.falls_short}
    assert all(c.capacity >= 0.0 and c.demand >= 0.0 for c in e.checks)


def test_a_hold_on_the_edge_and_a_hold_far_off_are_said(tmp_path: Path) -> None:
    edge = examined(tmp_path, changed("impact-rig", mechanism__hold_margin='"0.1 deg"'))
    assert any("before it fires" in text for text in edge.cautions)
    far = examined(tmp_path, changed("impact-rig", mechanism__hold_margin='"40 deg"'))
    assert any("brake must hold" in text for text in far.cautions)
    plain = examined(tmp_path, text_of("impact-rig"))
    assert not any("before it fires" in text or "brake must hold" in text for text in plain.cautions)

"""Other names of what is listed, as they come out in a refusal."""

from __future__ import annotations

import tomllib
from importlib.resources import files
from pathlib import Path

import pytest

from loads.catalogue import load_catalogue
from parts.read import read_design
from parts.trade_names import listed_chain, listed_material
from tests.starters import changed

LISTED = load_catalogue()
TABLE = tomllib.loads((files("parts") / "data" / "trade_names.toml").read_text(encoding="utf-8"))

MATERIALS = [
    ("4140", "42CrMo4+QT"),
    ("AISI 4140", "42CrMo4+QT"),
    ("SAE-4140 steel", "42CrMo4+QT"),
    ("1045", "C45+QT"),
    ("C45", "C45+QT"),
    ("4340", "34CrNiMo6+QT"),
    ("EN24", "34CrNiMo6+QT"),
    ("ASTM A36", "A36"),
    ("a572 gr. 50", "A572-50"),
    ("6061-T6", "EN-AW-6061-T6"),
    ("AL6061-T651", "EN-AW-6061-T6"),
    ("304", "X5CrNi18-10"),
    ("SS 304", "X5CrNi18-10"),
    ("1.4301", "X5CrNi18-10"),
    ("17-4 PH", "X5CrNiCuNb16-4+P930"),
    ("Ti-6Al4V", "Ti-6Al-4V"),
    ("s690ql", "S690QL"),
]

CHAINS = [
    ("ANSI 60", "12A-1"),
    ("#60", "12A-1"),
    ("60", "12A-1"),
    ("60-2", "12A-2"),
    ("ASA No. 80", "16A-1"),
    ("ANSI #40-3", "08A-3"),
    ("ISO 606 12A-2", "12A-2"),
    ("DIN 8187 08B-1", "08B-1"),
    ("bl-844", "BL844"),
]


@pytest.mark.parametrize(("name", "listed"), MATERIALS)
def test_a_material_by_another_name(name: str, listed: str) -> None:
    hint = listed_material(name, LISTED.materials)
    assert hint is not None
    assert hint.split(" (")[0] == listed


@pytest.mark.parametrize("name", ["", "unobtainium", "8620", "1.9999", "42", "steel", "-", "S" * 5000])
def test_what_nobody_lists_has_no_hint(name: str) -> None:
    assert listed_material(name, LISTED.materials) is None


@pytest.mark.parametrize(("name", "listed"), CHAINS)
def test_a_chain_by_another_name(name: str, listed: str) -> None:
    assert listed_chain(name, LISTED.chains) == listed


@pytest.mark.parametrize("name", ["", "60H", "35", "41", "240", "60-4", "2060", "#", "chain"])
def test_another_chain_is_not_taken_for_a_listed_one(name: str) -> None:
    """Heavy series, bush chains, double pitch: not the chain that the number alone would be."""
    assert listed_chain(name, LISTED.chains) is None


def test_every_equivalent_is_listed_and_no_name_stands_for_two() -> None:
    names = [name.upper() for row in TABLE["material"] for name in row["names"]]
    assert len(names) == len(set(names))
    assert {row["listed"] for row in TABLE["material"]} <= set(LISTED.materials)
    assert not set(names) & {name.upper() for name in LISTED.materials}
    assert {f"{name}-1" for name in TABLE["chain"]["listed"].values()} <= set(LISTED.chains)
    for row in (*TABLE["material"], TABLE["chain"]):
        assert row["source"]
        assert isinstance(row["confirmed"], bool)


def test_the_ansi_number_is_twice_the_iso_number() -> None:
    """Eighths of an inch beside sixteenths; and the listed pitch is that many."""
    for number, listed in TABLE["chain"]["listed"].items():
        assert int(number) / 10 * 2 == int(listed[:2])
        assert LISTED.chains[f"{listed}-1"]["pitch"] == pytest.approx(int(number) / 10 * 25.4 / 8)


@pytest.mark.parametrize(
    ("changes", "key", "hint"),
    [
        ({"link__material": '"4140"'}, "link.material", "42CrMo4+QT (the nearest; quenched and tempered); one of "),
        ({"chain__designation": '"ANSI 60"'}, "chain.designation", "12A-1 (the same by its listed name)"),
        ({"link__material": '"S355"'}, "link.material", "S355J2 (the nearest); one of "),
    ],
)
def test_the_refusal_begins_with_the_hint(changes: dict[str, str], key: str, hint: str, tmp_path: Path) -> None:
    path = tmp_path / "d.toml"
    path.write_text(changed("seed-thrower", **changes), encoding="utf-8")
    (problem,) = read_design(path, LISTED).problems
    assert problem.key == key
    assert problem.text == "not listed"
    assert problem.accepted.startswith(hint)

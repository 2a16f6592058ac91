"""The tables of chains and materials: every row whole, in order, and right where a standard's number is known."""

import tomllib
from importlib.resources import files
from itertools import pairwise
from typing import Any

import pytest

Row = dict[str, Any]


def table(name: str) -> dict[str, Any]:
    return tomllib.loads((files("loads") / "data" / name).read_text(encoding="utf-8"))


CHAINS: list[Row] = table("chains.toml")["chain"]
MATERIALS: dict[str, Row] = table("materials.toml")
BY_DESIGNATION: dict[str, Row] = {row["designation"]: row for row in CHAINS}
LEAF = [row for row in CHAINS if row["kind"] == "leaf"]
ROLLER = [row for row in CHAINS if row["kind"] == "roller"]

LENGTHS = {"pitch", "width_over_pins", "plate_height", "pin_diameter", "plate_thickness"}
EVERY_CHAIN = LENGTHS | {"designation", "kind", "min_tensile_strength", "source", "confirmed"}
ONLY = {
    "leaf": {"lacing"},
    "roller": {"inner_width", "inner_link_width", "roller_diameter", "strands"},
}
MAY_HAVE = {"mass_per_metre", "from_memory", "estimated", "also", "transverse_pitch"}

EVERY_MATERIAL = {
    "kind",
    "forms",
    "youngs_modulus",
    "poissons_ratio",
    "density",
    "yield",
    "ultimate",
    "source",
    "confirmed",
}
KINDS = {
    "structural steel",
    "quenched and tempered plate",
    "through-hardening bar",
    "case-hardening bar",
    "stainless",
    "aluminium",
    "titanium",
}


def name_of(row: Row) -> str:
    return str(row["designation"])


@pytest.mark.parametrize("row", CHAINS, ids=name_of)
def test_a_chain_has_its_keys_and_they_are_positive(row: Row) -> None:
    assert row["kind"] in ONLY
    required = EVERY_CHAIN | ONLY[row["kind"]]
    assert required <= set(row)
    assert set(row) <= required | MAY_HAVE
    numbers = {key: value for key, value in row.items() if isinstance(value, int | float)}
    assert all(value > 0 for key, value in numbers.items() if key != "confirmed")
    assert row["source"]


@pytest.mark.parametrize("row", CHAINS, ids=name_of)
def test_a_chain_says_what_is_from_memory(row: Row) -> None:
    unseen = set(row.get("from_memory", [])) | set(row.get("estimated", []))
    assert unseen <= set(row)
    assert row["confirmed"] is ("min_tensile_strength" not in unseen)


@pytest.mark.parametrize("row", CHAINS, ids=name_of)
def test_a_chain_is_put_together_from_its_parts(row: Row) -> None:
    assert row["pin_diameter"] < row["plate_height"] < row["pitch"]
    assert row["plate_thickness"] < row["pin_diameter"]
    if row["kind"] == "leaf":
        plates = sum(row["lacing"])
        assert plates * row["plate_thickness"] < row["width_over_pins"]
        assert row["width_over_pins"] < (plates + 2) * row["plate_thickness"] * 1.1
    else:
        across = row["inner_link_width"] + (row["strands"] - 1) * row.get("transverse_pitch", 0.0)
        assert row["inner_width"] < row["inner_link_width"]
        assert across + 2 * 0.6 * row["plate_thickness"] < row["width_over_pins"]
        # inner plates stand within the inner link, with the bush a little proud of them
        inner_plates = (row["inner_link_width"] - row["inner_width"]) / 2
        assert 0.8 * inner_plates < row["plate_thickness"] < 1.05 * inner_plates
        assert row["pin_diameter"] < row["roller_diameter"] < row["pitch"]
        assert ("transverse_pitch" in row) is (row["strands"] > 1)


def test_no_chain_is_listed_twice() -> None:
    assert len(BY_DESIGNATION) == len(CHAINS)
    others = [row["also"] for row in CHAINS if "also" in row]
    assert len(set(others)) == len(others)
    assert not set(others) & set(BY_DESIGNATION)


@pytest.mark.parametrize("row", LEAF, ids=name_of)
def test_a_leaf_chain_is_called_what_it_is(row: Row) -> None:
    series, sixteenths, first, second = (
        row["designation"][:2],
        int(row["designation"][2:4]),
        int(row["designation"][4]),
        int(row["designation"][5]),
    )
    assert series in {"LH", "LL"}
    assert row["pitch"] == pytest.approx(sixteenths * 25.4 / 16)
    assert row["lacing"] == [first, second]
    if series == "LH":
        assert row["also"] == f"BL{sixteenths // 2}{first}{second}"


@pytest.mark.parametrize("row", ROLLER, ids=name_of)
def test_a_roller_chain_is_called_what_it_is(row: Row) -> None:
    size, strands = row["designation"].split("-")
    assert row["strands"] == int(strands)
    # 05B is the metric size, 8 mm
    assert row["pitch"] == pytest.approx(8.0 if size == "05B" else int(size[:2]) * 25.4 / 16)
    one = BY_DESIGNATION[f"{size}-1"]
    for key in (LENGTHS | ONLY["roller"]) - {"width_over_pins", "strands"}:
        assert row[key] == one[key]
    added = (row["strands"] - 1) * row.get("transverse_pitch", 0.0)
    assert row["width_over_pins"] == pytest.approx(one["width_over_pins"] + added, abs=0.6)


@pytest.mark.parametrize("series", ["LH", "LL"])
def test_a_leaf_chain_grows_stronger_with_its_plates_and_its_pitch(series: str) -> None:
    listed = [row for row in LEAF if row["designation"].startswith(series)]
    for pitch in {row["pitch"] for row in listed}:
        same = sorted((row for row in listed if row["pitch"] == pitch), key=lambda row: sum(row["lacing"]))
        for less, more in pairwise(same):
            # a 2 x 3 lacing is no stronger than 2 x 2: the fewer plates carry
            stronger = min(more["lacing"]) > min(less["lacing"])
            assert (more["min_tensile_strength"] > less["min_tensile_strength"]) is stronger
            assert more["width_over_pins"] > less["width_over_pins"]
            assert more["mass_per_metre"] > less["mass_per_metre"]
    for lacing in {tuple(row["lacing"]) for row in listed}:
        same = sorted((row for row in listed if tuple(row["lacing"]) == lacing), key=lambda row: row["pitch"])
        assert len(same) == 8
        for less, more in pairwise(same):
            for key in ("min_tensile_strength", "plate_height", "pin_diameter", "mass_per_metre"):
                assert more[key] > less[key], (more["designation"], key)


@pytest.mark.parametrize("series", ["LH", "LL"])
def test_plates_of_one_size_carry_alike(series: str) -> None:
    # a slip in a strength or a lacing stands out
    listed = [row for row in LEAF if row["designation"].startswith(series)]
    for pitch in {row["pitch"] for row in listed}:
        one_plate = [row["min_tensile_strength"] / min(row["lacing"]) for row in listed if row["pitch"] == pitch]
        assert max(one_plate) < 1.12 * min(one_plate), pitch


@pytest.mark.parametrize("series", ["A", "B"])
def test_a_roller_chain_grows_stronger_with_its_strands_and_its_pitch(series: str) -> None:
    listed = [row for row in ROLLER if row["designation"][2] == series]
    sizes = sorted({row["designation"].split("-")[0] for row in listed})
    assert sizes == [f"{n:02d}{series}" for n in (5, 6, 8, 10, 12, 16, 20, 24, 28, 32) if n >= 8 or series == "B"]
    for size in sizes:
        one, two, three = (BY_DESIGNATION[f"{size}-{n}"] for n in (1, 2, 3))
        strength = "min_tensile_strength"
        assert 1.7 * one[strength] < two[strength] <= 2.01 * one[strength]
        assert 2.45 * one[strength] < three[strength] <= 3.01 * one[strength]
        assert one["mass_per_metre"] < two["mass_per_metre"] < three["mass_per_metre"]
    for strands in (1, 2, 3):
        strengths = [BY_DESIGNATION[f"{size}-{strands}"]["min_tensile_strength"] for size in sizes]
        assert strengths == sorted(strengths)


@pytest.mark.parametrize(
    ("designation", "newtons"),
    [
        # ISO 606
        ("08B-1", 17_800),
        ("12B-1", 28_900),
        ("16B-1", 60_000),
        # ISO 4347
        ("LH0822", 22_200),
        ("LH1234", 75_600),
        ("LH1644", 169_000),
    ],
)
def test_least_tensile_strengths_of_the_standards(designation: str, newtons: float) -> None:
    assert BY_DESIGNATION[designation]["min_tensile_strength"] == newtons


@pytest.mark.parametrize("row", [r for r in LEAF if r["designation"].startswith("LH")], ids=name_of)
def test_leaf_chain_strengths_are_whole_hundreds_of_pounds(row: Row) -> None:
    # ASME B29.8 states them in lbf, ISO 4347 the same in kN
    hundreds = row["min_tensile_strength"] / 4.448222 / 100
    assert hundreds == pytest.approx(round(hundreds), abs=0.25)


def test_the_materials_asked_for_are_listed() -> None:
    wanted = (
        "S355J2 S235JR S690QL S960QL S500MC 42CrMo4+QT 34CrNiMo6+QT C45+QT 16MnCr5 18CrNiMo7-6 "
        "X5CrNi18-10 X17CrNi16-2 EN-AW-6082-T6 EN-AW-7075-T6 Ti-6Al-4V"
    )
    assert set(wanted.split()) <= set(MATERIALS)


def test_there_are_trade_grades_of_every_kind() -> None:
    assert len(MATERIALS) >= 30
    for kind in KINDS:
        listed = [row for row in MATERIALS.values() if row["kind"] == kind]
        assert len(listed) >= 2, kind
    assert sum(row["confirmed"] for row in MATERIALS.values()) >= 12
    # thickness tells where the standard has it
    assert sum(len(row["yield"]) > 1 for row in MATERIALS.values()) >= 25


@pytest.mark.parametrize("name", MATERIALS)
def test_a_material_says_what_is_from_memory(name: str) -> None:
    row = MATERIALS[name]
    assert ("from memory" in row["source"]) is (row["confirmed"] is False)


@pytest.mark.parametrize("name", MATERIALS)
def test_a_material_has_its_keys_and_falls_off_with_size(name: str) -> None:
    row = MATERIALS[name]
    assert set(row) == EVERY_MATERIAL
    assert row["kind"] in KINDS
    assert row["forms"]
    assert set(row["forms"]) <= {"plate", "bar"}
    assert 60_000 < row["youngs_modulus"] < 220_000
    assert 0.25 < row["poissons_ratio"] < 0.36
    assert 2_600 < row["density"] < 8_100
    assert row["source"]
    assert isinstance(row["confirmed"], bool)
    for key in ("yield", "ultimate"):
        steps = row[key]
        assert steps
        for (size, strength), (next_size, next_strength) in pairwise(steps):
            assert size < next_size
            assert strength > next_strength
        assert all(size > 0 and strength > 0 for size, strength in steps)
    assert row["yield"][-1][0] == row["ultimate"][-1][0]


@pytest.mark.parametrize("name", MATERIALS)
def test_a_material_yields_before_it_breaks(name: str) -> None:
    row = MATERIALS[name]

    def at(key: str, size: float) -> float:
        return next(float(strength) for limit, strength in row[key] if size <= limit)

    for size in sorted({limit for key in ("yield", "ultimate") for limit, _ in row[key]}):
        assert at("yield", size) < at("ultimate", size)


@pytest.mark.parametrize(
    ("name", "key", "size", "strength"),
    [
        # EN 10025-2
        ("S355J2", "yield", 16, 355),
        ("S355J2", "yield", 40, 345),
        ("S355J2", "ultimate", 100, 470),
        ("S235JR", "yield", 16, 235),
        # EN 10083-2, ISO 683-2
        ("C45+QT", "yield", 40, 430),
        ("42CrMo4+QT", "yield", 40, 750),
        ("42CrMo4+QT", "ultimate", 100, 900),
        # EN 10083-3:2006/AC:2008, a maker's card
        ("30CrNiMo8+QT", "yield", 100, 900),
        ("30CrNiMo8+QT", "ultimate", 100, 1100),
        # EN 10025-2
        ("S275JR", "yield", 63, 255),
        # ASTM A36: 36 ksi and 58 ksi
        ("A36", "yield", 200, 250),
        ("A36", "ultimate", 200, 400),
    ],
)
def test_strengths_of_the_standards(name: str, key: str, size: float, strength: float) -> None:
    assert [size, strength] in MATERIALS[name][key]

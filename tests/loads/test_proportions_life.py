"""Sizes raised for a number of shots: as many as are needed, never a given one, never at another check's cost."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from tempfile import TemporaryDirectory

import pytest

from loads.catalogue import load_catalogue
from loads.cycle import cycle
from loads.examine import Examination
from loads.far_ends.registry import linkage_of
from loads.fatigue.study import CHECK
from loads.members import history
from loads.proportions import endurance, proportion
from loads.proportions.endurance import GOVERNS, SERIES, current, larger
from parts.hardware import cap_screws
from parts.read import read_design
from tests.loads.far_end_designs import DESIGNS
from tests.loads.test_fatigue_study import machine, studied
from tests.starters import NAMES, changed, examined, put_all


@lru_cache(maxsize=32)
def plain(name: str) -> Examination:
    with TemporaryDirectory() as folder:
        return examined(Path(folder), changed(name, fatigue__shots=None).split("\n[fatigue]\n")[0])


@lru_cache(maxsize=32)
def far_end(kind: str, shots: str) -> Examination:
    with TemporaryDirectory() as folder:
        return examined(Path(folder), DESIGNS[kind] + f"[fatigue]\nshots = {shots}\n")


def sized(text: str) -> dict[str, float]:
    """The sizes of a design for its winding alone, which takes less time than all that is examined."""
    catalogue = load_catalogue()
    with TemporaryDirectory() as folder:
        path = Path(folder) / "design.toml"
        path.write_text(text, encoding="utf-8")
        design = read_design(path, catalogue).design
    assert design is not None
    machine = linkage_of(design)
    return current(proportion(design, history(machine, cycle(machine)), catalogue)[0])


def why(e: Examination, key: str) -> str:
    return next((row.why for row in e.assumed if row.key == key), "")


def raised(e: Examination) -> set[str]:
    return {row.key for row in e.assumed if "raised so that" in row.why}


def statics(e: Examination) -> set[tuple[str, str, str]]:
    """The checks that fall short, but fatigue's."""
    return {(row.part, row.site, row.check) for row in e.falls_short if row.check != CHECK}


def tired(e: Examination) -> set[tuple[str, str]]:
    return {(row.part, row.site) for row in e.falls_short if row.check == CHECK}


@pytest.mark.parametrize("name", NAMES)
def test_a_starter_lives_through_20000_shots(name: str) -> None:
    e = machine(name)
    assert all(row.life is None or row.life >= 20000.0 for row in studied(e).rows if row.factor is not None)
    assert not tired(e)
    assert statics(e) <= statics(plain(name))


def test_what_the_raised_sizes_are_for() -> None:
    """The impact rig, sized for its loads alone, does not live that long at three places; each has its size raised."""
    sizes = {key: size for key, size in current(plain("impact-rig").sizes).items() if size > 0.0}
    held = {key.replace(".", "__"): f"{size}" for key, size in sizes.items()}
    for hidden in ("chain_pin__middle_diameter", "stop__dowel_diameter", "stop__bolt_hole", "chain_end__height"):
        held.pop(hidden)
    as_before = machine("impact-rig", stop__style='"block"', **held)
    assert tired(as_before) == {("crank_pin", "root"), ("main_shaft", "first_bearing"), ("swing_link", "chain_pin_eye")}
    assert not raised(as_before)
    e = machine("impact-rig")
    assert raised(e) == {"crank_pin.diameter", "link.width", "shaft.diameter"}
    for key in raised(e):
        assert why(e, key).endswith("; raised so that it lives through 20000 shots")
        assert current(e.sizes)[key] > sizes[key]


@pytest.mark.parametrize("name", NAMES)
def test_without_its_table_nothing_is_raised(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    def never(*_: object) -> None:
        raise AssertionError("looked at fatigue without being asked")

    few = machine(name, 1.0)  # one shot: the table is there, and nothing needs to be raised
    plain.cache_clear()
    monkeypatch.setattr(endurance, "fatigue_study", never)
    assert plain(name).sizes == few.sizes
    assert plain(name).stack == few.stack
    assert not raised(plain(name))


def test_the_tamper_is_strong_enough_as_it_is() -> None:
    assert machine("soil-tamper", 200000.0).sizes == plain("soil-tamper").sizes


@pytest.mark.parametrize(
    ("key", "value", "part"),
    [
        ("crank_pin.diameter", 16.0, "crank_pin"), ("link.width", 32.0, "swing_link"),
        ("shaft.diameter", 35.0, "main_shaft"),
    ],
)  # fmt: skip
def test_a_given_size_stays_and_falls_short(key: str, value: float, part: str) -> None:
    more = {"link__thickness": '"8 mm"', "chain_pin__diameter": '"14 mm"'} if part == "swing_link" else {}
    e = machine("impact-rig", **{key.replace(".", "__"): f'"{value} mm"'}, **more)
    assert current(e.sizes)[key] == value
    assert key not in raised(e)
    assert {at for at, _ in tired(e)} == {part}
    assert statics(e) <= statics(plain("impact-rig"))
    assert len(raised(e)) == 2


def test_another_size_takes_over_from_a_given_one() -> None:
    """An eye whose link may not become wider gets a thicker link, or a larger pin."""
    e = machine("impact-rig", link__width='"32 mm"')
    assert not tired(e)
    assert statics(e) <= statics(plain("impact-rig"))
    assert "link.thickness" in raised(e)


@pytest.mark.parametrize("name", [*NAMES, "slide", "rocker"])
def test_more_shots_never_give_a_smaller_size(name: str) -> None:
    before: dict[str, float] = {}
    grown = 0
    for shots in ("1000", "20000", "30000", "200000", "1e6", "1e7"):
        table = f"[fatigue]\nshots = {shots}\n"
        now = sized(changed(name, fatigue__shots=shots) if name in NAMES else DESIGNS[name] + table)
        assert all(now[key] >= size for key, size in before.items()), (shots, before, now)
        grown += now != before
        before = now
    assert grown > 1 or name == "soil-tamper"


@pytest.mark.parametrize("kind", list(DESIGNS))
def test_other_far_ends(kind: str) -> None:
    e = far_end(kind, "20000")
    assert not tired(e)
    assert raised(e)


@pytest.mark.parametrize(
    "values",
    [
        {}, {"link__width": '"32 mm"', "chain_pin__diameter": '"14 mm"'}, {"disc__thickness": '"20 mm"'},
        {"design__units": '"us"'}, {"disc__outer_diameter": '"165 mm"', "crank_pin__diameter": '"16 mm"'},
    ],
)  # fmt: skip
def test_no_other_check_pays_for_it(values: dict[str, str]) -> None:
    """For ever, which not every one of these designs can be made to last."""
    bare = machine("impact-rig", 1.0, **values)
    e = machine("impact-rig", 1e7, **values)
    assert statics(e) <= statics(bare)
    assert raised(e)
    row = {(r.part, r.site): r for r in studied(e).rows}
    before = {(r.part, r.site): r for r in studied(bare).rows}
    for part, site in (("main_shaft", "first_bearing"), ("crank_disc", "hub_face")):
        assert (row[part, site].endless_factor or 0.0) >= min(1.0, (before[part, site].endless_factor or 0.0) * 0.999)


def test_sizes_without_a_key_are_told_beside_those_that_have_one() -> None:
    e = machine("impact-rig", 1e6)
    assert why(e, "stop.width").endswith("; its dowels raised so that they live through 1e+06 shots")
    assert e.sizes.stop.dowel_diameter > machine("impact-rig").sizes.stop.dowel_diameter
    given = machine("impact-rig", 1e7, chain_pin__diameter='"14 mm"', link__width='"32 mm"')
    told = {row.key for row in given.assumed}
    assert given.sizes.chain_pin.diameter == 14.0
    assert "chain_pin.diameter" not in told


def test_every_row_of_fatigue_has_a_size_that_governs_it() -> None:
    """All but the chain, which is bought; of a tie the plate is found by its part."""
    for e in [machine(name) for name in NAMES] + [machine("impact-rig", shaft__drive='"key"')]:
        for row in studied(e).rows:
            known = f"{row.part} {row.site}" in GOVERNS or row.site in GOVERNS
            assert known or row.part in ("chain", "chain_end"), (row.part, row.site)
    assert {key for keys in GOVERNS.values() for key in keys} <= set(SERIES)
    assert set(SERIES) == set(current(machine("impact-rig").sizes))


def test_the_next_size_is_one_that_can_be_bought() -> None:
    e = machine("impact-rig")
    assert larger(e.design, "crank_pin.diameter", 16.0) == 18.0
    assert larger(e.design, "crank_pin.diameter", 100.0) is None
    assert larger(e.design, "link.thickness", 8.0) == 10.0
    assert larger(e.design, "link.width", 32.0) == 34.0
    assert larger(e.design, "disc.outer_diameter", 165.0) == 175.0
    assert larger(e.design, "disc.bolt_hole", cap_screws()[0].clearance_hole) == cap_screws()[1].clearance_hole
    us = machine("impact-rig", design__units='"us"')
    assert larger(us.design, "crank_pin.diameter", 15.875) == 19.05


def test_a_raised_design_written_out_stays_what_it_is(tmp_path: Path) -> None:
    """Given as they came out, the sizes hold, and nothing is raised again. What only was kept says so."""
    e = machine("seed-thrower")
    keep = {key for key in current(e.sizes) if why(e, key).endswith("no smaller than for fewer shots")}
    assert {"disc.thickness", "stop.diameter"} <= keep
    keys = {"link.thickness", "link.width", "crank_pin.diameter", "chain_pin.diameter"} | keep
    values = {key.replace(".", "__"): f"{current(e.sizes)[key]}" for key in keys}
    again = examined(tmp_path, put_all(changed("seed-thrower", fatigue__shots="20000"), values))
    assert not tired(again)
    assert current(again.sizes) == current(e.sizes)
    assert not raised(again)

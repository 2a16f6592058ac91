"""STEP files: read back, in other processes too, with names, colours and places; the same bytes every time."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from exporters.step import Placed, read_back, write_assembly, write_part
from exporters.step_text import canonical, encoded, entities, strings
from parts.outline import Part
from parts.shape import volume
from parts.solids import named_faces, solid
from tests.exporters.processes import run_python, write_samples
from tests.parts.samples import ALL, chain_end, link, pin, spacer

READER = str(Path(__file__).with_name("read_step.py"))


@pytest.mark.parametrize("part", ALL, ids=lambda p: p.name)
def test_a_part_reads_back_as_one_product_with_named_faces(part: Part, tmp_path: Path) -> None:
    path = tmp_path / "part.step"
    write_part(part, path, f"PIR-100 {part.name} A")
    found = read_back(path)
    assert found.products == (f"PIR-100 {part.name} A",)
    assert found.occurrences == ()
    assert found.solids == 1
    assert found.valid
    assert found.millimetres
    assert found.volume == pytest.approx(volume(part), rel=1e-7)
    assert sorted(found.faces) == sorted(named_faces(part, solid(part)))


def test_another_process_reads_names_and_colours(tmp_path: Path) -> None:
    path = tmp_path / "link.step"
    write_part(link(), path, "PIR-100 swing_link_front A")
    [found] = json.loads(run_python(READER, str(path)))
    assert found["name"] == "PIR-100 swing_link_front A"
    assert not found["assembly"]
    assert sorted(found["faces"]) == sorted(named_faces(link(), solid(link())))
    assert found["color"] == pytest.approx(link().color, abs=1e-6)


def test_an_assembly_reads_back_in_another_process_with_each_copy_in_its_place(tmp_path: Path) -> None:
    path = tmp_path / "assembly.step"
    turned = np.array([[0, -1, 0, 100], [1, 0, 0, 20], [0, 0, 1, -30], [0, 0, 0, 1]], dtype=float)
    shape = solid(link())
    placed: list[Placed | tuple[Part, Any, Any, str]] = [
        Placed(link(), shape, np.eye(4), "link_1"),
        Placed(link(), shape, turned, "link_2"),
        (pin(), solid(pin()), np.eye(4), "chain_pin"),
    ]
    write_assembly(placed, path, "PIR-100 assembly A", remarks=["FALLS SHORT: a web of 2.6 mm"])
    code = (
        "import cadquery, json, sys\n"
        "made = cadquery.Assembly.importStep(sys.argv[1])\n"
        "boxes = {}\n"
        "for child in made.children:\n"
        "    box = child.toCompound().BoundingBox()\n"
        "    boxes[child.name] = [box.xmin, box.xmax, box.ymin, box.ymax, box.zmin, box.zmax]\n"
        "sys.stdout.write(json.dumps([made.name, boxes]))\n"
    )
    name, boxes = json.loads(run_python("-c", code, str(path)))
    assert name == "PIR-100 assembly A"
    assert set(boxes) == {"link_1", "link_2", "chain_pin"}
    assert boxes["link_1"] == pytest.approx([-22, 108, -22, 22, 0, 12], abs=1e-4)
    assert boxes["link_2"] == pytest.approx([78, 122, -2, 128, -30, -18], abs=1e-4)
    found = read_back(path)
    assert found.solids == 3
    assert found.occurrences == ("link_1", "link_2", "chain_pin")
    assert sorted(found.products) == ["PIR-100 assembly A", "chain_pin", "swing_link_front"]
    assert found.volume == pytest.approx(2 * volume(link()) + volume(pin()), rel=1e-7)
    assert "FALLS SHORT: a web of 2.6 mm" in path.read_text(encoding="ascii")


def test_the_same_bytes_in_processes_with_different_hash_seeds(tmp_path: Path) -> None:
    first, second = (write_samples(tmp_path / f"{seed}", "step", seed) for seed in (1, 2))
    assert first == second
    assert len(first.splitlines()) == len(ALL) + 1


def test_the_same_bytes_whatever_was_written_before(tmp_path: Path) -> None:
    path, other = tmp_path / "pin.step", tmp_path / "other.step"
    write_part(pin(), path, "PIR-100 pin A")
    before = path.read_bytes()
    copies = [Placed(spacer(), solid(spacer()), np.eye(4), f"spacer_{i}") for i in range(3)]
    write_assembly(copies, other, "PIR-100 assembly A")
    assembly = other.read_bytes()
    write_part(chain_end(), tmp_path / "block.step", "PIR-100 block A")
    write_part(pin(), path, "PIR-100 pin A")
    write_assembly(copies, other, "PIR-100 assembly A")
    assert path.read_bytes() == before
    assert other.read_bytes() == assembly


def test_the_header_says_nothing_about_when_or_who(tmp_path: Path) -> None:
    path = tmp_path / "pin.step"
    write_part(pin(), path, "PIR-100 pin A")
    header = path.read_text(encoding="ascii").split("ENDSEC;")[0]
    assert "FILE_NAME('pin.step','1970-01-01T00:00:00',(''),(''),'drawcrank','drawcrank','')" in header
    assert "AUTOMOTIVE_DESIGN" in header


@pytest.mark.parametrize("name", ["d'Arc; #12 = ('x') \\ end", "Größe 中", "long " * 40 + "name"])
def test_a_name_of_any_letters_survives(name: str, tmp_path: Path) -> None:
    path = tmp_path / "pin.step"
    write_part(pin(), path, name)
    assert read_back(path).products == (name,)
    [found] = json.loads(run_python(READER, str(path)))
    assert found["name"] == name


def _shuffled(text: str, step: int) -> str:
    """The same data section with other numbers in another order."""
    data = entities(text)
    refs = sorted(data, key=lambda r: int(r[1:]) * step % 7919)
    number = {r: f"#{i + 5}" for i, r in enumerate(refs)}
    lines = []
    for ref in refs:
        pieces = [data[ref].texts[0]]
        for target, tail in zip(data[ref].refs, data[ref].texts[1:], strict=True):
            pieces += (number[target], tail)
        lines.append(f"{number[ref]} = {''.join(pieces)};")
    return "DATA;\n" + "\n".join(lines) + "\nENDSEC;\n"


def test_order_and_numbers_follow_from_the_content_alone(tmp_path: Path) -> None:
    path = tmp_path / "assembly.step"
    copies = [Placed(p, solid(p), np.eye(4), f"{p.name}_{i}") for p in (pin(), spacer()) for i in range(2)]
    write_assembly(copies, path, "PIR-100 assembly A")
    text = path.read_text(encoding="ascii")
    assert canonical(text, "assembly.step") == text
    for step in (3, 1009, 7001):
        assert canonical(_shuffled(text, step), "assembly.step") == text


def test_values_are_written_as_the_standard_has_them() -> None:
    assert encoded("a'b\\c") == "a\\X2\\0027\\X0\\b\\\\c"
    assert encoded("Größe") == "Gr\\X2\\00F600DF\\X0\\e"
    entity = entities(f"DATA;#1=PRODUCT('{encoded('Größe ⌀ d’Arc')}',(#2));ENDSEC;")["#1"]
    assert strings(entity) == ["Größe ⌀ d’Arc"]
    assert entity.refs == ["#2"]

"""Broken design files: each is refused, with the key, its line, and what would be accepted."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from parts.problems import DesignRefused, Problem
from parts.read import read_design
from tests.parts.designs import CATALOGUE, FULL, LEAST, line_of, read

# (the line of the full design to change, what to put there, the key that is named, what the message has to say).
# The problem must be on the line where the new text begins.
CHANGED = [
    ('crank_radius = "58 mm"', 'crank_radius = "58 N"', "mechanism.crank_radius", "a length is wanted"),
    ('crank_radius = "58 mm"', 'crank_radius = "-58 mm"', "mechanism.crank_radius", "from 0.001 mm"),
    ('crank_radius = "58 mm"', "crank_radius = 0", "mechanism.crank_radius", "from 0.001 mm"),
    ('crank_radius = "58 mm"', 'crank_radius = "2 1/4 in"', "mechanism.crank_radius", '"2.25 in"'),
    ('crank_radius = "58 mm"', 'crank_radius = "5,8 cm"', "mechanism.crank_radius", '"5.8 cm"'),
    ('crank_radius = "58 mm"', "crank_radius = '2.25\"'", "mechanism.crank_radius", '"2.25 in"'),
    ('crank_radius = "58 mm"', 'crank_radius = "58"', "mechanism.crank_radius", "bare number"),
    ('crank_radius = "58 mm"', "crank_radius = nan", "mechanism.crank_radius", "finite"),
    ('crank_radius = "58 mm"', "crank_radius = 1e999", "mechanism.crank_radius", "finite"),
    ('crank_radius = "58 mm"', "crank_radius = true", "mechanism.crank_radius", "a length"),
    ('crank_radius = "58 mm"', "crank_radius = 1979-05-27", "mechanism.crank_radius", "1979-05-27"),
    ('link_length = "86 mm"', 'link_length = "58 mm"', "mechanism.link_length", "longer than the crank radius"),
    ('link_length = "86 mm"', 'link_length = "2 in"', "mechanism.link_length", "50.8 mm"),
    ('link_length = "86 mm"', 'link_lenght = "86 mm"', "mechanism.link_lenght", "link_length (the nearest"),
    ('seat_angle = "3 deg"', 'seat_angle = "31 deg"', "mechanism.seat_angle", "-30 deg to 30 deg"),
    ('seat_angle = "3 deg"', 'seat_angle = "3 mm"', "mechanism.seat_angle", "an angle is wanted"),
    ('seat_angle = "3 deg"', 'seat_angle = "3°"', "mechanism.seat_angle", '"3 deg"'),
    ('stop_reach = "74 mm"', 'stop_reach = "86 mm"', "mechanism.stop_reach", "between its two pins"),
    ('stop_reach = "74 mm"', 'stop_reach = "0 mm"', "mechanism.stop_reach", "from 0.001 mm"),
    ('hold_margin = "4 deg"', 'hold_margin = "0 deg"', "mechanism.hold_margin", "more than 0 deg"),
    ('hold_margin = "4 deg"', "hold_margin = 60", "mechanism.hold_margin", "less than 60 deg"),
    ('stack = "twin"', 'stack = "twim"', "mechanism.stack", 'nearest is "twin"'),
    ('rotation = "ccw"', "rotation = 1", "mechanism.rotation", "'ccw' or 'cw'"),
    ("format = 1 ", "format = 2 ", "design.format", "format 2 is newer"),
    ("format = 1 ", "format = 0 ", "design.format", "accepted: 1"),
    ("format = 1 ", "format = true ", "design.format", "accepted: 1"),
    ('number = "PIR-100"', 'number = "../PIR"', "design.number", "file names"),
    ('number = "PIR-100"', 'number = ".hidden"', "design.number", "file names"),
    ('number = "PIR-100"', 'number = ""', "design.number", "file names"),
    ('number = "PIR-100"', 'number = "nul"', "design.number", "Windows"),
    ('number = "PIR-100"', f'number = "{"x" * 41}"', "design.number", "1 to 40"),
    ('number = "PIR-100"', "number = 100", "design.number", "file names"),
    ('revision = "B"', 'revision = "B/2"', "design.revision", "file names"),
    ('title = "Guard-panel impact rig"', 'title = "two\\nlines"', "design.title", "one line"),
    ('units = "metric"', 'units = "Metric"', "design.units", 'nearest is "metric"'),
    ('center = ["430 mm", "35 mm"]', 'center = ["30 mm", "35 mm"]', "sheave.center", "over the disc axis"),
    ('center = ["430 mm", "35 mm"]', 'center = ["150 mm", "35 mm"]', "sheave.center", "can reach the sheave"),
    ('center = ["430 mm", "35 mm"]', 'center = ["430 mm"]', "sheave.center", "two values"),
    ('center = ["430 mm", "35 mm"]', 'center = ["430 mm", "35 mm", 0]', "sheave.center", "2 values"),
    ('center = ["430 mm", "35 mm"]', 'center = "430 mm"', "sheave.center", "a list"),
    ('center = ["430 mm", "35 mm"]', 'center = ["430 mm", "1e9 mm"]', "sheave.center[1]", "100000000 mm"),
    ('pitch_radius = "48 mm"', 'pitch_radius = "-1 mm"', "sheave.pitch_radius", "from 0 mm"),
    ("efficiency = 0.97", "efficiency = 0.5", "sheave.efficiency", "more than 0.5"),
    ("efficiency = 0.97", "efficiency = 1.01", "sheave.efficiency", "1 at most"),
    ("efficiency = 0.97", 'efficiency = "97 %"', "sheave.efficiency", "a bare number"),
    ("efficiency = 0.97", "efficiency = nan", "sheave.efficiency", "a bare number"),
    ('exit_angle = "-90 deg"', 'exit_angle = "-400 deg"', "sheave.exit_angle", "-360 deg"),
    ('rate = "210 N/mm"', 'rate = "210 lb/in"', "spring.rate", '"210 lbf/in"'),
    ('rate = "210 N/mm"', 'rate = "-1 N/mm"', "spring.rate", "from 0 N/mm"),
    ('preload = "1.2 kN"', 'preload = "1 200 N"', "spring.preload", '"1200 N"'),
    ('designation = "LH1644"', 'designation = "LH1645"', "chain.designation", "LH1644"),
    ('designation = "LH1644"', 'designation = ""', "chain.designation", "printable"),
    ("strands = 1", "strands = 2", "chain.strands", "1 for LH1644"),
    ("strands = 1", "strands = 4", "chain.strands", "3 or less"),
    ("strands = 1", "strands = 1.0", "chain.strands", "a whole number"),
    ("strands = 1", 'min_tensile_strength = "100 mm"', "chain.min_tensile_strength", "a force is wanted"),
    ("strands = 1", 'pin_diameter = "25.4 mm"', "chain.pin_diameter", "less than pitch"),
    ('slack = "0 mm"', 'slack = "-1 mm"', "chain.slack", "from 0 mm"),
    ("bolt_count = 6", "bolt_count = 2", "disc.bolt_count", "3 or more"),
    ("bolt_count = 6", 'bolt_count = "6"', "disc.bolt_count", "a whole number"),
    ('bore = "40 mm"', 'boer = "40 mm"', "disc.boer", "bore (the nearest"),
    ('material = "S355J2"', 'material = "S355"', "disc.material", "S355J2 (the nearest)"),
    ('material = "Spring plate"', 'material = "spring plate"', "link.material", "Spring plate (the nearest)"),
    ('diameter = "25 mm"\nheight', 'length = "25 mm"\nheight', "stop.length", 'style = "block"'),
    ('style = "post"', 'style = "peg"', "stop.style", '"post" or "block"'),
    ('plate_gap = "1 mm"', 'plate_gap = "1 deg"', "clearances.plate_gap", "a length is wanted"),
    ("bearing = 0.1", "bearing = 1.1", "friction.bearing", "from 0 to 1"),
    ("shock_factor = 1.25", "shock_factor = 0.9", "targets.shock_factor", "from 1 to"),
    ("load_share = 0.6", "load_share = 0.4", "targets.load_share", "from 0.5 to 1"),
    ("chain = 5", "chain = 0.5", "targets.chain", "from 1 to"),
    ("yield = 2.0", "yield = inf", "targets.yield", "from 1 to"),
    (
        "outline = [[-200, -300], [600, -300], [600, 300], [-200, 300]]",
        "outline = [[-200, -300], [600, 300], [600, -300], [-200, 300]]",
        "enclosure.outline",
        "crosses itself",
    ),
    (
        "outline = [[-200, -300], [600, -300], [600, 300], [-200, 300]]",
        "outline = [[0, 0], [1, 1]]",
        "enclosure.outline",
        "three or more",
    ),
    (
        "outline = [[-200, -300], [600, -300], [600, 300], [-200, 300]]",
        "outline = [[0, 0], [9, 0], [5, 0]]",
        "enclosure.outline",
        "turns back",
    ),
    (
        "  [[300, 200], [350, 200], [350, 250]],",
        "  [[-9, -9], [9, -9], [0, 9]],",
        "enclosure.obstacles[0]",
        "disc axis",
    ),
    ("  [[-150, 200], [-100, 200], [-100, 250]],", "  [[9, 9], [9, 9], [0, 9]],", "enclosure.obstacles[1]", "repeated"),
    ('mass = "12 kg"', 'mass = "-12 kg"', "moving.mass", "from 0 kg"),
    ('mass = "12 kg"', 'mass = "12 N"', "moving.mass", "a mass is wanted"),
    ('payload_leaves_at = "20 mm"', 'payload_leaves_at = "-1 mm"', "moving.payload_leaves_at", "from 0 mm"),
    ('bumper_stiffness = "800 N/mm"', "bumper_stiffness = 0", "moving.bumper_stiffness", "more than 0"),
    ("gravity = 9.81", 'gravity = "9.81 kg"', "moving.gravity", "an acceleration is wanted"),
    ('disc_speed = "20 rpm"', "stopped_elsewhere = 1", "moving.stopped_elsewhere", "true or false"),
    ('yield = "900 MPa"', 'yield = "900 Mpa"', 'materials."Spring plate".yield', '"900 MPa"'),
    ('yield = "900 MPa"', 'yield = "1200 MPa"', 'materials."Spring plate".yield', "no more than ultimate"),
    ("[clearances]", "[clearance]", "clearance", "clearances (the nearest"),
    ("[clearances]", "[process.disc]\nkerf = 1\n[clearances]", "process", "does not evaluate [process] yet"),
    ("[clearances]", "[fatigue]\n[clearances]", "fatigue.shots", "missing"),
    ("[crank_pin]", "[[crank_pin]]", "crank_pin", "a table, [crank_pin]"),
]


# The same, where the line that is named is another one than the one that was changed: a text in it.
CHANGED_ELSEWHERE = [
    ('link_length = "86 mm"', 'link_length = "400 mm"', "sheave.center", "can reach the sheave", "center ="),
    ('preload = "1.2 kN"', 'table = [["0 mm", "0 N"], ["9 mm", "9 N"]]', "spring.rate", "table", 'rate = "210'),
    ('designation = "LH1644"', 'pitch = "25.4 mm"', "chain.pin_diameter", "missing", "[chain]"),
    ('payload_mass = "3 kg"\n', "", "moving.payload_mass", "missing", "[moving]"),
    ('bumper_travel = "25 mm"\n', "", "moving.bumper_travel", "missing", "[moving]"),
    ('density = "7850 kg/m3"\n', "", 'materials."Spring plate".density', "missing", "[materials"),
]


@pytest.mark.parametrize(("old", "new", "key", "says"), CHANGED)
def test_refused_with_key_line_and_advice(tmp_path: Path, old: str, new: str, key: str, says: str) -> None:
    check_refused(tmp_path, FULL.replace(old, new), key, says, line_of(FULL, old))


@pytest.mark.parametrize(("old", "new", "key", "says", "needle"), CHANGED_ELSEWHERE)
def test_refused_at_another_line(tmp_path: Path, old: str, new: str, key: str, says: str, needle: str) -> None:
    text = FULL.replace(old, new)
    check_refused(tmp_path, text, key, says, line_of(text, needle))


def check_refused(folder: Path, text: str, key: str, says: str, line: int) -> None:
    problems = read(folder, text).problems
    named = [problem for problem in problems if problem.key == key]
    assert named, [problem.key for problem in problems]
    assert {problem.line for problem in named} == {line}
    assert any(says in problem.sentence for problem in named), named
    assert all(problem.line is not None for problem in problems)


# (what to take out of the least design, the key that is missed, the line that is pointed at)
TAKEN_OUT: list[tuple[str, str, int | None]] = [
    ('crank_radius = "58 mm"\n', "mechanism.crank_radius", 1),
    ('link_length = "86 mm"\n', "mechanism.link_length", 1),
    ('center = ["430 mm", "35 mm"]\n', "sheave.center", 4),
    ("rate = 210\n", "spring.rate", 6),
    ('designation = "LH1644"\n', "chain.designation", 8),
    ('[chain]\ndesignation = "LH1644"\n', "chain", None),
    ("[spring]\nrate = 210\n", "spring", None),
]


@pytest.mark.parametrize(("gone", "key", "line"), TAKEN_OUT)
def test_missing(tmp_path: Path, gone: str, key: str, line: int | None) -> None:
    reading = read(tmp_path, LEAST.replace(gone, ""))
    assert [(problem.key, problem.line, problem.text) for problem in reading.problems] == [(key, line, "missing")]
    assert reading.design is None


# (the spring's lines, the key, the line within the least design, what is said)
SPRINGS = [
    ("rate = 0", "spring.rate", 7, "never pulls"),
    ('preload = "0 N"\nrate = 0', "spring.rate", 8, "never pulls"),
    ('preload = "1 kN"', "spring.rate", 6, "missing"),
    ("table = [[0, 0]]", "spring.table", 7, "two points"),
    ("table = []", "spring.table", 7, "two points"),
    ("table = [\n[1, 0],\n[2, 3]]", "spring.table[0]", 8, "start at zero draw"),
    ("table = [\n[0, 0],\n[2, 3],\n[2, 4]]", "spring.table[2]", 10, "rise in draw"),
    ("table = [\n[0, 0],\n[2, -3]]", "spring.table[1][1]", 9, "from 0 N"),
    ("table = [\n[0, 0],\n[2, 0]]", "spring.table", 7, "never pulls"),
    ('table = [\n["0 mm", "0 N"],\n["2 N", "3 mm"]]', "spring.table[1][0]", 9, "a length is wanted"),
    ("table = [\n[0, 0],\n[2]]", "spring.table[1]", 9, "two values"),
    ("table = [\n[0, 0],\n[2, 3, 4]]", "spring.table[1]", 9, "2 values"),
    ("table = 3", "spring.table", 7, "a list"),
    ('table = "no.csv"', "spring.table", 7, "no such file"),
    ('table = ""', "spring.table", 7, "a folder"),
    ("table = [[0, 0], [2, 3]]\npreload = 3", "spring.preload", 8, "gives this already"),
]


@pytest.mark.parametrize(("lines", "key", "line", "says"), SPRINGS)
def test_spring(tmp_path: Path, lines: str, key: str, line: int, says: str) -> None:
    reading = read(tmp_path, LEAST.replace("rate = 210", lines))
    first = next(problem for problem in reading.problems if problem.key == key)
    assert first.line == line
    assert says in first.sentence
    assert reading.design is None


# (the file, the line of it that is named, what is said)
CSV_FILES = [
    ("", 1, "no heading"),
    ("0,0\n1,1\n", 1, "a heading that names draw and force"),
    ("draw,force\n0,0\n", 1, "with their units"),
    ("draw [mm],force [mm]\n0,0\n", 1, "a force in one of"),
    ("draw [mm],draw [in]\n0,0\n", 1, "a heading that names draw and force"),
    ("draw [mm];force [N]\n0;0\n", 1, "commas between the columns"),
    ("draw [mm],force [N]\n0,0\n1,one\n", 3, "a plain number"),
    ("draw [mm],force [N]\n0,0\n1,5 N\n", 3, "a plain number"),
    ("draw [mm],force [N]\n0,0\n# note\n\n1,2,3\n", 5, "two numbers with one comma"),
    ("draw [mm],force [N]\n0,0\n1,nan\n", 3, "a plain number"),
    ("draw [mm],force [kN]\n0,0\n1,-2\n", 3, 'found "-2"; accepted: a force of 0 or more'),
    ("draw [mm],force [N]\n0,0\n1e9,2\n", 3, "from 0 mm to 1000000 mm"),
    ("draw [mm],force [N]\n0,0\n\n2,2\n2,3\n", 5, "must rise in draw"),
    ("draw [mm],force [N]\n\n1,0\n2,2\n", 3, "must start at zero draw"),
]


@pytest.mark.parametrize(("content", "line", "says"), CSV_FILES)
def test_spring_file_is_refused_at_its_own_line(tmp_path: Path, content: str, line: int, says: str) -> None:
    (tmp_path / "spring.csv").write_text(content, encoding="utf-8")
    reading = read(tmp_path, LEAST.replace("rate = 210", 'table = "spring.csv"'))
    assert [(p.key, p.file, p.line) for p in reading.problems] == [("spring.table", "spring.csv", line)]
    assert says in reading.problems[0].sentence
    assert f"spring.csv:{line}: spring.table" in str(DesignRefused("rig.toml", reading.problems))
    assert reading.design is None


@pytest.mark.parametrize(
    ("content", "line", "says"),
    [
        (b"[mechanism]\ncrank_radius = \n", 2, "not TOML"),
        (b"[mechanism]\n[mechanism]\n", 2, "not TOML"),
        (b"a = 1\na = 2\n", 2, "not TOML"),
        (b'a = "open\n', 1, "not TOML"),
        (b"a = [1,\n", 1, "not TOML"),
        (b'[design]\ntitle = "caf\xe9"\n', 2, "UTF-8"),
        (b"a = " + b"[" * 100_000, None, "nested too deeply"),
        (b"a = " + b"9" * 10_000, None, "digits"),
    ],
)
def test_not_toml(tmp_path: Path, content: bytes, line: int | None, says: str) -> None:
    (tmp_path / "rig.toml").write_bytes(content)
    reading = read_design(tmp_path / "rig.toml", CATALOGUE)
    (problem,) = reading.problems
    assert (reading.design, problem.line) == (None, line)
    assert says in problem.sentence


@pytest.mark.parametrize(
    ("name", "says"), [("none.toml", "no such file"), (".", "a folder"), ("a\0b", "cannot be read")]
)
def test_no_file(tmp_path: Path, name: str, says: str) -> None:
    (problem,) = read_design(tmp_path / name, CATALOGUE).problems
    assert says in problem.sentence


def test_all_problems_at_once_in_the_order_of_the_lines(tmp_path: Path) -> None:
    text = FULL
    for old, new in (
        ("86 mm", "86 kg"),
        ("bolt_count = 6", "bolt_count = 1"),
        ("1.2 kN", "1,2 kN"),
        ("yield = 2.0", "yeild = 2"),
    ):
        text = text.replace(old, new)
    problems = read(tmp_path, text).problems
    lines = [problem.line for problem in problems]
    assert len(problems) == 4
    assert lines == sorted(lines, key=lambda line: line or 0)


WRONG_VALUES = [
    '"x"',
    "-1",
    "true",
    "[]",
    "[[]]",
    "{}",
    "1e400",
    "nan",
    "{a = 1}",
    "[1, 2, 3]",
    "2000-01-01",
    "9" * 400,
]


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(data=st.data())
def test_no_value_in_the_wrong_place_gets_past_the_reader_or_brings_it_down(
    tmp_path: Path, data: st.DataObject
) -> None:
    """Some values replaced by ones of another type: where something is refused, every problem has its line."""
    lines = FULL.splitlines()
    places = [place for place, line in enumerate(lines) if " = " in line and "obstacles" not in line]
    for place in data.draw(st.lists(st.sampled_from(places), min_size=1, max_size=4, unique=True)):
        lines[place] = f"{lines[place].partition(' = ')[0]} = {data.draw(st.sampled_from(WRONG_VALUES))}"
    reading = read(tmp_path, "\n".join(lines))
    assert all(problem.line is not None and problem.key for problem in reading.problems)
    assert str(DesignRefused("rig.toml", reading.problems)).count("\n") == max(0, len(reading.problems) - 1)


def test_a_newer_format_is_refused_by_its_number_alone(tmp_path: Path) -> None:
    text = FULL.replace("format = 1 ", "format = 7 ").replace("bore", "something_new")
    (problem,) = read(tmp_path, text).problems
    assert problem.sentence == "design.format: format 7 is newer than this version reads; found 7; accepted: 1"


def test_the_mechanism_can_be_judged_although_another_table_is_wrong(tmp_path: Path) -> None:
    reading = read(tmp_path, FULL.replace("bolt_count = 6", "bolt_count = 2"))
    assert reading.problems
    assert reading.design is not None
    assert reading.design.disc.bolt_count is None
    assert reading.design.mechanism.crank_radius == 58


def test_a_refusal_is_one_line_a_problem() -> None:
    refusal = DesignRefused("rig.toml", [Problem("a.b", 12, "1", "2", "wrong"), Problem("a", 3, '"x"', "y")])
    assert str(refusal) == 'rig.toml:3: a: found "x"; accepted: y\nrig.toml:12: a.b: wrong; found 1; accepted: 2'


def test_a_refusal_for_the_eye_is_a_block_a_problem() -> None:
    """Place and key stay together on the first line, however long the path; nothing is lost or cut in two."""
    long = ", ".join(f"EN-AW-{n}-T6" for n in range(6000, 6040))
    folder = "a folder with spaces/" * 4
    refusal = DesignRefused(
        f"{folder}rig.toml",
        [
            Problem("link.material", 3, '"S355"', long, "not listed"),
            Problem("a", 4, '"x"', "y"),
            Problem("b", 5, "", ""),
        ],
    )
    for width in (40, 100):
        said = refusal.wrapped(width).splitlines()
        first = [line for line in said if not line.startswith("    ")]
        assert len(first) == 3
        assert first[0].startswith(f"{folder}rig.toml:3: link.material: not")
        assert first[1].startswith(f"{folder}rig.toml:4: a:")
        assert max(len(line) for line in said if line.startswith("    ")) <= width
        together = " ".join(line.strip() for line in said)
        assert together == " ".join(line.strip() for line in str(refusal).splitlines())
    for width in range(40, 70):
        whole = DesignRefused("rig.toml", [Problem("a", 3, "25.4 mm of steel", "up to 58 mm, no more")]).wrapped(width)
        assert "25.4 mm" in whole
        assert "58 mm" in whole
    (short,) = DesignRefused("rig.toml", [Problem("a", 3, '"x"', "y")]).wrapped(100).splitlines()
    assert short == 'rig.toml:3: a: found "x"; accepted: y'


def test_lengths_of_a_us_design_are_told_in_inches_too(tmp_path: Path) -> None:
    text = LEAST.replace("[mechanism]", '[design]\nunits = "us"\n[mechanism]').replace('"86 mm"', '"1 in"')
    said = "; ".join(problem.sentence for problem in read(tmp_path, text).problems)
    assert "25.4 mm (1 in)" in said
    metric = "; ".join(problem.sentence for problem in read(tmp_path, LEAST.replace('"86 mm"', '"25.4 mm"')).problems)
    assert "25.4 mm" in metric
    assert "(1 in)" not in metric

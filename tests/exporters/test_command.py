"""The command: its exit statuses, its messages, what it leaves alone."""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from exporters.command import main
from exporters.starters import starters
from tests.starters import changed, text_of, whole_text_of

RUN = "from exporters.entry import main; main()"


def run(monkeypatch: pytest.MonkeyPatch, *words: str) -> int:
    monkeypatch.setattr(sys, "argv", ["drawcrank", *words])
    with pytest.raises(SystemExit) as stop:
        main()
    return int(stop.value.code or 0)


Said = pytest.CaptureFixture[str]


def test_start_lists_and_writes(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Said) -> None:
    monkeypatch.chdir(tmp_path)
    assert run(monkeypatch, "start") == 0
    listed = capsys.readouterr().out
    for starter in starters():
        assert starter.name in listed
    assert run(monkeypatch, "start", "soil-tamper") == 0
    path = tmp_path / "soil-tamper.toml"
    assert path.read_text(encoding="utf-8") == whole_text_of("soil-tamper")
    path.write_text("mine", encoding="utf-8")
    assert run(monkeypatch, "start", "soil-tamper") == 3
    assert path.read_text(encoding="utf-8") == "mine"
    assert run(monkeypatch, "start", "soil-temper") == 2
    assert "did you mean soil-tamper?" in capsys.readouterr().err


@pytest.mark.parametrize("name", [s.name for s in starters()])
def test_every_line_of_a_starter_says_what_it_does(name: str) -> None:
    for line in whole_text_of(name).splitlines():
        if line.strip() and not line.startswith(("#", "[")) and line.strip() != "]":
            assert "#" in line, line


def test_check_says_the_verdict_first_and_exits_by_it(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Said
) -> None:
    path = tmp_path / "d.toml"
    path.write_text(whole_text_of("impact-rig"), encoding="utf-8")
    assert run(monkeypatch, "check", str(path)) == 0
    said = capsys.readouterr().out
    assert said.startswith("HOLDS")
    assert max(map(len, said.splitlines())) <= 80
    assert "can maim" in said
    path.write_text(changed("impact-rig", chain__designation='"LH1622"'), encoding="utf-8")
    assert run(monkeypatch, "check", str(path)) == 1
    assert capsys.readouterr().out.startswith("FALLS SHORT")
    assert [p.name for p in tmp_path.iterdir()] == ["d.toml"]


def test_check_as_json(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Said) -> None:
    path = tmp_path / "d.toml"
    path.write_text(text_of("seed-thrower"), encoding="utf-8")
    assert run(monkeypatch, "check", str(path), "--json") == 0
    document = json.loads(capsys.readouterr().out)
    assert document["holds"] is True
    assert document["format"] == 1


def test_a_design_that_cannot_be_used(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Said) -> None:
    path = tmp_path / "d.toml"
    path.write_text(
        text_of("impact-rig").replace('"86 mm"', '"86 N"').replace("stop_reach", "stop_reech"), encoding="utf-8"
    )
    for verb in ("check", "build"):
        assert run(monkeypatch, verb, str(path)) == 2
        said = capsys.readouterr()
        assert said.out == ""
        assert "mechanism.link_length" in said.err
        assert "stop_reach" in said.err
        assert "nothing was written" in said.err
    assert [p.name for p in tmp_path.iterdir()] == ["d.toml"]
    assert run(monkeypatch, "check", str(tmp_path / "absent.toml")) == 2
    assert "absent.toml" in capsys.readouterr().err


def test_refusals_are_broken_at_100_columns_where_no_window_takes_them(tmp_path: Path) -> None:
    path = tmp_path / "d.toml"
    path.write_text(changed("impact-rig", link__material='"mithril"', disc__colour='"red"'), encoding="utf-8")
    done = subprocess.run([sys.executable, "-c", RUN, "check", str(path)], capture_output=True, text=True, check=False)
    *blocks, last = done.stderr.splitlines()
    assert last == "2 problems; nothing was written"
    firsts = [line for line in blocks if not line.startswith("    ")]
    assert {line.split(": ")[1] for line in firsts} == {"link.material", "disc.colour"}
    assert all(line.startswith(f"{path}:") for line in firsts)
    rest = [line for line in blocks if line.startswith("    ")]
    assert 60 < max(map(len, rest)) <= 100


@pytest.mark.skipif(os.name != "posix", reason="needs a pseudo-terminal")
def test_refusals_are_broken_at_the_window_s_width(tmp_path: Path) -> None:
    import fcntl
    import struct
    import termios

    path = tmp_path / "d.toml"
    path.write_text(changed("impact-rig", link__material='"mithril"'), encoding="utf-8")
    ours, theirs = os.openpty()
    fcntl.ioctl(theirs, termios.TIOCSWINSZ, struct.pack("HHHH", 24, 60, 0, 0))
    subprocess.run([sys.executable, "-c", RUN, "check", str(path)], stdout=subprocess.PIPE, stderr=theirs, check=False)
    os.close(theirs)
    said = os.read(ours, 65536).decode().splitlines()
    os.close(ours)
    rest = [line for line in said if line.startswith("    ")]
    assert 40 < max(map(len, rest)) <= 60


def test_a_place_that_cannot_be_written(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Said) -> None:
    path = tmp_path / "d.toml"
    path.write_text(text_of("seed-thrower"), encoding="utf-8")
    assert run(monkeypatch, "build", str(path), "--to", str(path / "inside a file")) == 3
    assert "Traceback" not in capsys.readouterr().err
    assert run(monkeypatch, "start", "seed-thrower", "--to", str(tmp_path / "no such folder" / "d.toml")) == 3


@pytest.mark.parametrize("words", [["--help"], ["start", "--help"], ["check", "--help"], ["build", "--help"]])
def test_help_is_something_to_act_on(words: list[str], monkeypatch: pytest.MonkeyPatch, capsys: Said) -> None:
    monkeypatch.setenv("COLUMNS", "80")
    assert run(monkeypatch, *words) == 0
    said = capsys.readouterr().out
    assert "drawcrank" in said
    assert max(map(len, said.splitlines())) <= 80


def test_check_never_loads_the_solid_modeller_nor_what_only_build_needs(tmp_path: Path) -> None:
    path = tmp_path / "d.toml"
    path.write_text(text_of("impact-rig"), encoding="utf-8")
    code = (
        "import sys\nsys.argv = ['drawcrank', 'check', sys.argv[1]]\nfrom exporters.command import main\n"
        "try:\n    main()\nexcept SystemExit:\n    pass\n"
        "heavy = {'cadquery', 'OCP', 'ezdxf', 'trimesh', 'scipy.linalg', 'jinja2', 'matplotlib'} & set(sys.modules)\n"
        "print('LOADED', sorted(heavy))"
    )
    done = subprocess.run([sys.executable, "-c", code, str(path)], capture_output=True, text=True, check=True)
    assert done.stdout.splitlines()[-1] == "LOADED []"


def test_messages_go_to_standard_error_and_results_to_standard_output(tmp_path: Path) -> None:
    path = tmp_path / "d.toml"
    path.write_text(text_of("impact-rig").replace('"58 mm"', '"58 N"'), encoding="utf-8")
    code = "from exporters.command import main; main()"
    done = subprocess.run([sys.executable, "-c", code, "check", str(path)], capture_output=True, text=True, check=False)
    assert done.returncode == 2
    assert done.stdout == ""
    assert done.stderr


def test_whoever_reads_only_the_head_gets_the_verdict_s_status(tmp_path: Path) -> None:
    path = tmp_path / "d.toml"
    path.write_text(text_of("seed-thrower"), encoding="utf-8")
    for words in (["check", str(path)], ["check", str(path), "--json"], ["ratings", "chains"]):
        process = subprocess.Popen([sys.executable, "-c", RUN, *words], stdout=subprocess.PIPE, text=True)
        assert process.stdout is not None
        process.stdout.close()
        assert process.wait() == 0


def test_a_console_without_the_signs_shows_marks_in_their_place(tmp_path: Path) -> None:
    path = tmp_path / "d.toml"
    path.write_text(changed("seed-thrower", mechanism__seat_angle='"-3 deg"'), encoding="utf-8")
    for encoding in ("ascii", "cp1252"):
        done = subprocess.run(
            [sys.executable, "-c", RUN, "check", str(path)],
            capture_output=True, check=False, env={**os.environ, "PYTHONIOENCODING": encoding},
        )  # fmt: skip
        assert done.returncode in (0, 1)
        assert b"Traceback" not in done.stderr


@pytest.mark.skipif(os.name != "posix", reason="sends a posix signal")
@pytest.mark.parametrize("wait", [1.2, 2.5, 4.0])
def test_ctrl_c_stops_a_build_and_leaves_nothing(wait: float, tmp_path: Path) -> None:
    path = tmp_path / "d.toml"
    path.write_text(text_of("impact-rig"), encoding="utf-8")
    process = subprocess.Popen(
        [sys.executable, "-c", RUN, "build", str(path), "--to", str(tmp_path / "out")],
        stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True,
    )  # fmt: skip
    time.sleep(wait)
    process.send_signal(signal.SIGINT)
    _, said = process.communicate()
    if process.returncode in (0, 1):  # it was done before the signal came
        assert (tmp_path / "out" / "manifest.json").exists()
        return
    assert process.returncode == 130
    assert said == "drawcrank: interrupted; nothing was changed\n"
    assert "cannot be loaded" not in said
    assert sorted(p.name for p in tmp_path.iterdir()) == ["d.toml"]


INTERRUPTED_AT = """
import os, signal, sys

class Interruption:
    def find_spec(self, name, path=None, target=None):
        if name == "{module}":
            os.kill(os.getpid(), signal.SIGINT)

sys.meta_path.insert(0, Interruption())
from exporters.entry import main
main()
"""


@pytest.mark.skipif(os.name != "posix", reason="sends a posix signal")
@pytest.mark.parametrize(
    "module", ["exporters.command", "typer", "rich.console", "numpy", "numpy.linalg", "pydantic", "pint"]
)
def test_ctrl_c_while_modules_are_loaded_is_one_line(module: str, tmp_path: Path) -> None:
    path = tmp_path / "d.toml"
    path.write_text(text_of("seed-thrower"), encoding="utf-8")
    done = subprocess.run(
        [sys.executable, "-c", INTERRUPTED_AT.format(module=module), "check", str(path)],
        capture_output=True, text=True, check=False,
    )  # fmt: skip
    assert done.stderr == "drawcrank: interrupted; nothing was changed\n"
    assert done.returncode == 130
    assert done.stdout == ""


@pytest.mark.skipif(os.name != "posix", reason="sends a posix signal")
def test_an_interruption_that_the_shell_ignores_stays_ignored(tmp_path: Path) -> None:
    """As for a command that a script has put into the background."""
    code = "import signal; signal.signal(signal.SIGINT, signal.SIG_IGN)\n" + INTERRUPTED_AT.format(module="typer")
    done = subprocess.run([sys.executable, "-c", code, "start"], capture_output=True, text=True, check=False)
    assert done.returncode == 0
    assert "seed-thrower" in done.stdout


def test_the_command_begins_with_nothing_heavy() -> None:
    code = "import sys; before = set(sys.modules); import exporters.entry; print(*(set(sys.modules) - before))"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    ours = {name for name in done.stdout.split() if name.partition(".")[0] not in sys.stdlib_module_names}
    assert ours == {"exporters", "exporters.entry"}


def test_a_fault_of_the_tool_is_not_a_verdict(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Said) -> None:
    path = tmp_path / "d.toml"
    path.write_text(text_of("seed-thrower"), encoding="utf-8")

    def broken(*_: object) -> None:
        raise ZeroDivisionError("somewhere")

    monkeypatch.setattr("loads.examine.cycle", broken)
    assert run(monkeypatch, "check", str(path)) == 3
    assert "fault of the tool" in capsys.readouterr().err


IN_PIECES = {
    "thin link": {"link__thickness": '"1 mm"'},
    "small disc": {"disc__outer_diameter": '"20 mm"'},
    "bolts in the bore": {"disc__bolt_circle": '"10 mm"'},
    "thin disc": {"disc__thickness": '"3 mm"'},
    "small block": {"stop__style": '"block"', "stop__length": '"4 mm"', "stop__width": '"4 mm"'},
    "narrow chain end": {"chain_end__width": '"2 mm"'},
}


@pytest.mark.parametrize("name", IN_PIECES)
def test_sizes_that_make_no_sense_fall_short_and_are_still_written(
    name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Said
) -> None:
    """check and build agree: a part in pieces or with overlapping holes is a check that falls short."""
    path = tmp_path / "d.toml"
    path.write_text(changed("impact-rig", **IN_PIECES[name]), encoding="utf-8")
    assert run(monkeypatch, "check", str(path)) == 1
    assert run(monkeypatch, "build", str(path), "--to", str(tmp_path / "out")) == 1
    said = capsys.readouterr()
    assert said.err == ""
    assert (tmp_path / "out" / "manifest.json").exists()


BEYOND_MODELLING = {
    "paper link": ("seed-thrower", {"link__thickness": '"1 mm"'}),
    "hair of a pin": ("seed-thrower", {"crank_pin__diameter": '"0.1 mm"'}),
    "bore beyond the fits": ("impact-rig", {"disc__bore": '"260 mm"'}),
    "hole as large as the block": ("impact-rig", {"chain_end__pin_diameter": '"260 mm"'}),
}


@pytest.mark.parametrize("name", BEYOND_MODELLING)
def test_what_nobody_can_model_is_left_out_and_said(
    name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: Said
) -> None:
    starter, changes = BEYOND_MODELLING[name]
    path = tmp_path / "d.toml"
    path.write_text(changed(starter, **changes), encoding="utf-8")
    assert run(monkeypatch, "check", str(path)) == 1
    capsys.readouterr()
    assert run(monkeypatch, "build", str(path), "--to", str(tmp_path / "out")) == 1
    said = capsys.readouterr()
    assert said.err == ""
    manifest = json.loads((tmp_path / "out" / "manifest.json").read_text(encoding="utf-8"))
    for line in manifest["left_out"]:
        assert line in said.out
    written = {row["path"] for row in manifest["files"]}
    assert {"check.json", "bill_of_loads.html", "parts_list.csv"} <= written

"""What the project's own files say about each other: versions, system libraries, and what is shipped."""

import tomllib
from importlib import metadata
from pathlib import Path

import pytest

import exporters
from exporters.modeller import DEBIAN_PACKAGES, INSTALL_ON_DEBIAN

ROOT = Path(__file__).resolve().parent.parent
ROOMS = ("parts", "loads", "exporters", "templates")

wheel_is_tested = pytest.mark.skipif(
    Path(exporters.__file__).resolve().is_relative_to(ROOT / "exporters"),
    reason="the source tree is on the import path, so nothing installed is under test",
)


def shipped() -> set[str]:
    return {file.as_posix() for file in metadata.files("drawcrank") or []}


def locked() -> dict[str, str]:
    lines = (ROOT / "constraints.txt").read_text(encoding="utf-8").splitlines()
    names_and_versions = [line.partition(";")[0].strip().split("==") for line in lines if line.strip()]
    return dict(names_and_versions)


def test_every_line_of_the_lock_is_one_exact_version() -> None:
    for line in (ROOT / "constraints.txt").read_text(encoding="utf-8").splitlines():
        requirement = line.partition(";")[0].strip()
        assert requirement.count("==") == 1, line
        assert "://" not in line, line


def test_the_build_tool_is_locked_to_the_same_version() -> None:
    pyproject = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
    assert pyproject["build-system"]["requires"] == [f"setuptools=={locked()['setuptools']}"]


@pytest.mark.parametrize("file", ["README.md", ".ci/run"])
def test_system_libraries_are_the_same_everywhere(file: str) -> None:
    text = (ROOT / file).read_text(encoding="utf-8")
    assert INSTALL_ON_DEBIAN in text or all(package in text for package in DEBIAN_PACKAGES)


@wheel_is_tested
def test_tests_are_not_shipped_and_rooms_are() -> None:
    tops = {file.partition("/")[0] for file in shipped()}
    assert set(ROOMS) <= tops
    assert "tests" not in tops


@wheel_is_tested
def test_every_file_of_the_rooms_is_shipped() -> None:
    here = {
        path.relative_to(ROOT).as_posix()
        for room in ROOMS
        for path in (ROOT / room).rglob("*")
        if path.is_file() and path.suffix != ".pyc"
    }
    assert here - shipped() == set()

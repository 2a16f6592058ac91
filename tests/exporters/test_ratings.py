"""The list of ratings: all rows, marks on what is from memory, 80 columns, its exit statuses."""

from __future__ import annotations

import json
import sys

import pytest

from exporters import ratings
from exporters.command import main

Said = pytest.CaptureFixture[str]


def run(monkeypatch: pytest.MonkeyPatch, *words: str) -> int:
    monkeypatch.setattr(sys, "argv", ["drawcrank", "ratings", *words])
    with pytest.raises(SystemExit) as stop:
        main()
    return int(stop.value.code or 0)


@pytest.mark.parametrize("table", ratings.TABLES)
def test_a_table_is_plain_text_of_80_columns_with_its_marks(
    table: str, monkeypatch: pytest.MonkeyPatch, capsys: Said
) -> None:
    assert run(monkeypatch, table) == 0
    said = capsys.readouterr()
    assert said.err == ""
    lines = said.out.splitlines()
    assert max(map(len, lines)) <= 80
    assert "\x1b" not in said.out
    found = ratings.sections([table])
    for section in found:
        assert len(section.rows) > 3
        for row in section.rows:
            assert any(line.startswith(f"  {row.name}") for line in lines)
            if not row.confirmed:
                assert ratings.MEMORY in {row.mark(column.key) for column in section.columns}
    marked = any(not row.confirmed for s in found for row in s.rows)
    assert ("* from memory, confirm with the maker's certificate" in lines) is marked


@pytest.mark.parametrize("table", ratings.TABLES)
def test_json_has_every_row_with_source_and_what_is_from_memory(
    table: str, monkeypatch: pytest.MonkeyPatch, capsys: Said
) -> None:
    assert run(monkeypatch, table, "--json") == 0
    document = json.loads(capsys.readouterr().out)
    found = ratings.sections([table])
    assert list(document) == [section.key for section in found]
    for section in found:
        assert len(document[section.key]) == len(section.rows)
        for record in document[section.key]:
            assert record["source"]
            assert record["confirmed"] or record["from_memory"]
            assert set(record["from_memory"]) | set(record["estimated"]) <= set(record)


def test_like_filters_by_every_word_and_a_single_row_shows_all(monkeypatch: pytest.MonkeyPatch, capsys: Said) -> None:
    assert run(monkeypatch, "chains", "--like", "bl844") == 0
    said = capsys.readouterr().out
    assert "LH1644" in said
    assert "169" in said
    assert "plate_height_mm" not in said  # a column already
    assert "plate_thickness_mm: 4.16" in said or "plate_thickness_mm" in said
    assert "source: ISO 4347" in said
    assert "LH1646" not in said
    assert run(monkeypatch, "materials", "--like", "case STEEL") == 2
    assert run(monkeypatch, "materials", "--like", "case BAR") == 0
    assert "16MnCr5" in capsys.readouterr().out
    assert run(monkeypatch, "--like", "6204") == 0
    assert "Every value was read in a published table" in capsys.readouterr().out


def test_without_a_table_what_there_is_is_listed(monkeypatch: pytest.MonkeyPatch, capsys: Said) -> None:
    assert run(monkeypatch) == 0
    said = capsys.readouterr()
    assert all(table in said.out for table in ratings.TABLES)
    assert "drawcrank ratings TABLE" in said.err


@pytest.mark.parametrize(
    ("words", "hint"),
    [
        (["chain"], "did you mean chains?"),
        (["chains", "--like", "LH1645"], "LH1644"),
        (["materials", "--like", "S690QT"], "S690QL"),
        (["ropes", "--like", "zzzz"], "listed"),
    ],
)
def test_what_is_not_there_gives_the_nearest(
    words: list[str], hint: str, monkeypatch: pytest.MonkeyPatch, capsys: Said
) -> None:
    assert run(monkeypatch, *words) == 2
    said = capsys.readouterr()
    assert said.out == ""
    assert hint in said.err


def test_help_names_the_tables_in_80_columns(monkeypatch: pytest.MonkeyPatch, capsys: Said) -> None:
    monkeypatch.setenv("COLUMNS", "80")
    assert run(monkeypatch, "--help") == 0
    said = capsys.readouterr().out
    assert max(map(len, said.splitlines())) <= 80
    assert all(table in said for table in ratings.TABLES)

"""The command line. Messages go to standard error, results to standard output.

Exit status: 0 done and every target holds; 1 done, but a target falls short; 2 the input cannot be used; 3 something
outside the design failed; 130 interrupted by the person.
"""

from __future__ import annotations

import textwrap
from importlib.metadata import version
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from exporters.entry import INTERRUPTED, STOPPED
from exporters.terminal import (
    FAILED,
    HOLDS,
    REFUSED,
    Shown,
    ShownLate,
    console,
    emit,
    finish,
    guarded,
    message,
)

if TYPE_CHECKING:
    from loads.examine import Examination

app = typer.Typer(
    name="drawcrank",
    help=(
        "Design the over-centre crank draw of a stored-energy machine: from one text file to solids, cut files and a "
        "bill of loads with safety factors.\n\n"
        "Begin with 'drawcrank start', look with 'drawcrank check FILE', hand over with 'drawcrank build FILE'.\n\n"
        "A drawn spring can maim without warning: read the cautions that check prints."
    ),
    epilog="Exit status: 0 every target holds; 1 a target falls short; 2 the design cannot be used; 3 disk, permissions "
    "or a missing system library; 130 interrupted.",
    add_completion=False,
    no_args_is_help=True,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
)

File = Annotated[Path, typer.Argument(metavar="FILE", help="The design file (TOML).", show_default=False)]


def _version(wanted: bool) -> None:
    if wanted:
        typer.echo(f"drawcrank {version('drawcrank')}")
        raise typer.Exit(HOLDS)


@app.callback()
def _common(
    show_version: Annotated[
        bool, typer.Option("--version", callback=_version, is_eager=True, help="Print the version and stop.")
    ] = False,
) -> None:
    """Options that stand before the verb."""


@app.command(help="List the starter designs, or write one to begin from.")
def start(
    name: Annotated[
        str | None,
        typer.Argument(metavar="[NAME]", help="A starter design; without it they are listed.", show_default=False),
    ] = None,
    to: Annotated[
        Path | None,
        typer.Option("--to", metavar="FILE", help="The file to write; default NAME.toml.", show_default=False),
    ] = None,
) -> None:
    from exporters.starters import starters

    known = {s.name: s for s in starters()}
    if name is None:
        if to is not None:
            message(f"--to {to} needs the name of a starter design: {', '.join(known)}")
            raise typer.Exit(REFUSED)
        width = max(map(len, known))
        for starter in known.values():
            lines = textwrap.wrap(starter.about, 78 - width)
            typer.echo(f"{starter.name:{width}}  " + f"\n{'':{width + 2}}".join(lines))
        message("Write one with: drawcrank start NAME --to FILE")
        return
    if name not in known:
        import difflib

        near = difflib.get_close_matches(name, known, n=1, cutoff=0.4)
        message(
            f"no starter design {name!r}"
            + (f"; did you mean {near[0]}?" if near else f"; there are {', '.join(known)}")
        )
        raise typer.Exit(REFUSED)
    path = to or Path(f"{name}.toml")
    try:
        with path.open("x", encoding="utf-8", newline="\n") as file:
            file.write(known[name].text)
    except FileExistsError:
        message(f"{path} is there already and is left as it is; name another file with --to")
        raise typer.Exit(FAILED) from None
    typer.echo(f"{path} written; next: drawcrank check {path}")


@app.command(help="Solve the design and show cycle, loads and safety factors. Writes no file.")
def check(
    file: File,
    json: Annotated[bool, typer.Option("--json", help="Print everything as JSON.")] = False,
) -> None:
    from exporters.check_json import check_document, dump
    from loads.examine import examine
    from loads.studies.progress import listening

    with ShownLate() as report, listening(report):
        e = examine(file)
    if json:
        emit(dump(check_document(e)))
    else:
        emit(summary(e))
    finish(e.holds)


@app.command(help="Write solids, cut files, bill of loads and parts list into one folder.")
def build(
    file: File,
    to: Annotated[
        Path | None,
        typer.Option("--to", metavar="DIR", help="The folder to write; default NUMBER-REVISION.", show_default=False),
    ] = None,
) -> None:
    from exporters.folder import build_folder
    from loads.examine import examine
    from loads.studies.progress import listening

    with ShownLate() as report, listening(report):
        e = examine(file)
    target = to or Path(f"{e.design.identity.number}-{e.design.identity.revision}")
    try:
        with Shown() as report:
            left_out = build_folder(e, target, report)
    except KeyboardInterrupt:
        message(INTERRUPTED)
        raise typer.Exit(STOPPED) from None
    missing = "".join(f"Left out, {line}\n" for line in left_out)
    emit(summary(e) + f"\nFolder: {target}\n{missing}")
    finish(e.holds)


@app.command(help="List chains, ropes, materials, fits and bearings; say which values are from memory.")
def ratings(
    table: Annotated[
        str | None,
        typer.Argument(
            metavar="[TABLE]", help="chains, ropes, materials, fits or bearings; without it, what there is.",
            show_default=False,
        ),
    ] = None,
    like: Annotated[
        str | None,
        typer.Option("--like", metavar="TEXT", help="Only rows whose name or kind has these words.", show_default=False),
    ] = None,
    json: Annotated[bool, typer.Option("--json", help="Print the rows as JSON, each with its source.")] = False,
) -> None:  # fmt: skip
    from exporters import ratings as listed

    if table is not None and table not in listed.TABLES:
        import difflib

        near = difflib.get_close_matches(table, listed.TABLES, n=1, cutoff=0.4)
        message(f"no table {table!r}; " + (f"did you mean {near[0]}?" if near else f"of {', '.join(listed.TABLES)}"))
        raise typer.Exit(REFUSED)
    names = list(listed.TABLES) if table is None else [table]
    if table is None and like is None and not json:
        emit("\n".join(listed.overview()) + "\n")
        message("List one with: drawcrank ratings TABLE --like TEXT")
        return
    found = listed.sections(names, like or "")
    if not found:
        near = listed.nearest(names, like or "")
        message(f"nothing like {like!r}" + (f"; the nearest are {', '.join(near)}" if near else " is listed"))
        raise typer.Exit(REFUSED)
    if json:
        from exporters.check_json import dump

        emit(dump(listed.document(found)))
        return
    emit("\n".join(listed.lines(found)) + "\n")


def summary(e: Examination) -> str:
    """The summary as it is shown on this output."""
    from exporters.summary import print_summary

    out = console()
    with out.capture() as text:
        print_summary(e, out)
    return text.get()


def main() -> None:
    """Run the command."""
    guarded(app)

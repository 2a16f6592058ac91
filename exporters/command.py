"""The command line. Messages go to standard error, results to standard output.

Exit status: 0 done and every target holds; 1 done, but a target falls short; 2 the input cannot be used; 3 something
outside the design failed.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Callable
from importlib.metadata import version
from pathlib import Path
from typing import Annotated

import typer
from rich.console import Console

from exporters.failure import ToolFailure
from parts.problems import DesignRefused

HOLDS, FALLS_SHORT, REFUSED, FAILED = 0, 1, 2, 3

app = typer.Typer(
    name="drawcrank",
    help=(
        "Design the over-centre crank draw of a stored-energy machine: from one text file to solids, cut files and a "
        "bill of loads with safety factors.\n\n"
        "Begin with 'drawcrank start', look with 'drawcrank check FILE', hand over with 'drawcrank build FILE'.\n\n"
        "A drawn spring can maim without warning: read the cautions that check prints."
    ),
    epilog="Exit status: 0 every target holds; 1 a target falls short; 2 the design cannot be used; 3 disk, permissions "
    "or a missing system library.",
    add_completion=False,
    no_args_is_help=True,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
)

File = Annotated[Path, typer.Argument(metavar="FILE", help="The design file (TOML).", show_default=False)]


def _message(text: str) -> None:
    typer.echo(text, err=True)


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
            _message(f"--to {to} needs the name of a starter design: {', '.join(known)}")
            raise typer.Exit(REFUSED)
        width = max(map(len, known))
        for starter in known.values():
            typer.echo(f"{starter.name:{width}}  {starter.about}")
        _message("Write one with: drawcrank start NAME --to FILE")
        return
    if name not in known:
        import difflib

        near = difflib.get_close_matches(name, known, n=1, cutoff=0.4)
        _message(
            f"no starter design {name!r}"
            + (f"; did you mean {near[0]}?" if near else f"; there are {', '.join(known)}")
        )
        raise typer.Exit(REFUSED)
    path = to or Path(f"{name}.toml")
    try:
        with path.open("x", encoding="utf-8", newline="\n") as file:
            file.write(known[name].text)
    except FileExistsError:
        _message(f"{path} is there already and is left as it is; name another file with --to")
        raise typer.Exit(FAILED) from None
    typer.echo(f"{path} written; next: drawcrank check {path}")


@app.command(help="Solve the design and show cycle, loads and safety factors. Writes no file.")
def check(
    file: File,
    json: Annotated[bool, typer.Option("--json", help="Print everything as JSON.")] = False,
) -> None:
    from exporters.check_json import check_document, dump
    from loads.examine import examine

    e = examine(file)
    if json:
        typer.echo(dump(check_document(e)), nl=False)
    else:
        from exporters.summary import print_summary

        print_summary(e, _console())
    raise typer.Exit(HOLDS if e.holds else FALLS_SHORT)


@app.command(help="Write solids, cut files, bill of loads and parts list into one folder.")
def build(
    file: File,
    to: Annotated[
        Path | None,
        typer.Option("--to", metavar="DIR", help="The folder to write; default NUMBER-REVISION.", show_default=False),
    ] = None,
) -> None:
    from exporters.folder import build_folder
    from exporters.summary import print_summary
    from loads.examine import examine

    e = examine(file)
    target = to or Path(f"{e.design.identity.number}-{e.design.identity.revision}")
    with _progress() as report:
        build_folder(e, target, report)
    print_summary(e, _console())
    typer.echo(f"\nFolder: {target}")
    raise typer.Exit(HOLDS if e.holds else FALLS_SHORT)


def _console() -> Console:
    """A console of at most 80 columns, whatever the window; plain text when the output is not a terminal."""
    out = Console()
    return Console(width=min(80, out.width) if out.is_terminal else 80, highlight=False)


class _progress:
    """Progress of long work on standard error; nothing where that is not a terminal."""

    def __enter__(self) -> Callable[[str, int, int], None]:
        self.bar = None
        if not sys.stderr.isatty():
            return lambda what, done, of: None
        from rich.progress import BarColumn, Progress, TextColumn

        self.bar = Progress(
            TextColumn("{task.description:<40}"), BarColumn(bar_width=24), TextColumn("{task.completed}/{task.total}"),
            console=Console(stderr=True, width=80), transient=True,
        )  # fmt: skip
        self.bar.start()
        task = self.bar.add_task("", total=None)
        bar = self.bar
        return lambda what, done, of: bar.update(task, description=what, completed=done, total=of)

    def __exit__(self, *_: object) -> None:
        if self.bar is not None:
            self.bar.stop()


def main() -> None:
    """Run the command; what cannot be done is said in one line each, never as a traceback."""
    try:
        app()
    except DesignRefused as refused:
        _message(str(refused))
        count = len(refused.problems)
        _message(f"{count} problem{'s' if count != 1 else ''}; nothing was written")
        sys.exit(REFUSED)
    except BrokenPipeError:
        # whoever read the output has gone, such as head
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        sys.exit(FAILED)
    except (OSError, ToolFailure) as failure:
        _message(f"drawcrank: {failure}")
        sys.exit(FAILED)
    except KeyboardInterrupt:
        _message("drawcrank: stopped; nothing was changed")
        sys.exit(FAILED)

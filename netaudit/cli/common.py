"""Options and steps that several commands share."""

from __future__ import annotations

import argparse
import io
import os
import sys
from collections.abc import Callable, Iterable, Sequence
from typing import Any, TypeVar

from netaudit.cli.settings import Target
from netaudit.failure import InputError, printable
from netaudit.finding import LEVELS
from netaudit.interface import LoadedBoard
from netaudit.place import Place
from netaudit.project.project import Project
from netaudit.report.style import Style

Item = TypeVar("Item")
#: a switch that a project may have on: ``--nominal`` and ``--no-nominal``
FLAG = argparse.BooleanOptionalAction


def add_files(command: argparse.ArgumentParser) -> None:
    command.add_argument(
        "files",
        nargs="*",
        metavar="NETLIST",
        help="netlist file; several are done one after the other; none: the boards that netaudit.toml names",
    )
    command.add_argument("--root", metavar="FOLDER", help="project root: nothing outside it is read")
    command.add_argument(
        "--format", choices=("text", "json"), default="text", help="text for people, JSON for programs"
    )
    command.add_argument(
        "--set",
        action="append",
        default=[],
        metavar="R1=1k",
        dest="changes",
        help="change a value or state in every mode; repeatable",
    )
    command.add_argument("-o", "--output", metavar="FILE", help="write the report to a file instead of stdout")


def add_modes(command: argparse.ArgumentParser) -> None:
    command.add_argument(
        "--mode", action="append", default=[], metavar="NAME", dest="modes", help="only this mode; repeatable"
    )


def add_fail_on(command: argparse.ArgumentParser) -> None:
    command.add_argument("--fail-on", choices=LEVELS, help="exit with 1 at this level or above (default: error)")
    command.add_argument("--notes", action="store_true", help="show every note in full")


def shown(items: Iterable[Item], count: int) -> Iterable[Item]:
    """The items, with a progress bar on stderr where that is a terminal and there are several."""
    if count < 2 or not sys.stderr.isatty():
        return items
    from rich.console import Console
    from rich.progress import track

    return track(items, description="boards", total=count, console=Console(stderr=True), transient=True)


def each(
    options: argparse.Namespace,
    kind: str,
    work: Callable[[LoadedBoard, Style, Project | None], tuple[int, dict[str, Any] | None, str]],
    files: Sequence[Target],
) -> int:
    """Does one file after the other; a broken one does not hide the others.  The status is the highest of all.

    ``work`` gives the status, the JSON record and the text of one board, by its project if it has one.
    """
    style = Style.for_stream(sys.stdout.isatty() and options.output is None)
    several = len(files) > 1
    records: list[dict[str, Any]] = []
    texts: list[str] = []
    status = 0
    for target in shown(files, len(files)):
        try:
            loaded = LoadedBoard.from_file(target.path, target.root, options.changes)
            result, record, text = work(loaded, style, target.project)
        except InputError as error:
            if not several:
                raise
            refuse(error)
            result, record, text = 2, {"netlist": target.path, "error": str(error)}, f"{error}\n"
        status = max(status, result)
        records.append(record or {})
        texts.append(text)
    if options.format == "json":
        from netaudit.report.json_text import dumps

        whole = {"schema": f"netaudit/{kind}-set/1", "boards": records} if several else records[0]
        deliver(dumps(whole) + "\n", options.output)
    else:
        deliver("\n".join(texts), options.output)
    return status


def deliver(text: str, path: str | None) -> None:
    """Writes a report to stdout, or whole to a file: a reader of that file never sees half of it."""
    if path is None:
        _to_stdout(text)
        return
    from netaudit.cli.reports import replace_files

    replace_files([(path, text)])


def _to_stdout(text: str) -> None:
    if isinstance(sys.stdout, io.TextIOWrapper):
        # a terminal of another encoding gets an escape, never a crash
        sys.stdout.reconfigure(errors="backslashreplace")
    try:
        sys.stdout.write(text)
        sys.stdout.flush()
    except BrokenPipeError:
        raise
    except OSError as error:
        abandon_stdout()
        raise InputError(f"the report cannot be written to stdout: {error.strerror}") from None


def abandon_stdout() -> None:
    """Lets what is still in the buffer go nowhere, so that the interpreter does not complain at exit."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def refuse(error: InputError) -> int:
    """One line on stderr; the source line with a caret follows only on a terminal."""
    complain(str(error), error.place)
    return 2


def complain(text: str, place: Place | None) -> None:
    """The line of an error, on a terminal with its source below."""
    print(text, file=sys.stderr)
    if place is not None and sys.stderr.isatty() and place.caret():
        print("\n".join(printable(line) for line in place.caret().split("\n")), file=sys.stderr)

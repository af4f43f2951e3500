"""Options and steps that several commands share."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Callable
from typing import Any

from netaudit.failure import InputError
from netaudit.finding import LEVELS
from netaudit.interface import LoadedBoard
from netaudit.report.style import Style


def add_files(command: argparse.ArgumentParser) -> None:
    command.add_argument(
        "files", nargs="+", metavar="NETLIST", help="netlist file; several are done one after the other"
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
        help="change a value or state in every mode",
    )


def add_modes(command: argparse.ArgumentParser) -> None:
    command.add_argument("--mode", action="append", default=[], metavar="NAME", dest="modes", help="only this mode")


def add_fail_on(command: argparse.ArgumentParser) -> None:
    command.add_argument("--fail-on", choices=LEVELS, default="error", help="exit with 1 at this level or above")
    command.add_argument("--notes", action="store_true", help="show every note in full")


def load(options: argparse.Namespace, path: str) -> LoadedBoard:
    """The board of one file with the command line's settings; unknown modes are refused."""
    board = LoadedBoard.from_file(path, options.root, options.changes)
    known = [c.mode for c in board.board.circuits]
    for mode in getattr(options, "modes", ()):
        if mode not in known:
            raise InputError(f"{path}: there is no mode {mode!r}", mend=f"it has {', '.join(known)}")
    return board


def each(
    options: argparse.Namespace, kind: str, work: Callable[[LoadedBoard, Style], tuple[int, dict[str, Any] | None, str]]
) -> int:
    """Does one file after the other; a broken one does not hide the others.  The status is the highest of all.

    ``work`` gives the status, the JSON record and the text of one board.
    """
    from netaudit.cli.main import refuse

    style = Style.for_stream(sys.stdout.isatty())
    records: list[dict[str, Any]] = []
    status = 0
    for number, path in enumerate(options.files):
        try:
            result, record, text = work(load(options, path), style)
        except InputError as error:
            if len(options.files) == 1:
                raise
            refuse(error)
            result, record, text = 2, {"netlist": path, "error": str(error)}, ""
        status = max(status, result)
        if options.format == "json":
            records.append(record or {})
        elif text:
            sys.stdout.write(text if not number else "\n" + text)
    if options.format == "json":
        from netaudit.report.json_text import dumps

        single = len(options.files) == 1
        sys.stdout.write(
            dumps(records[0] if single else {"schema": f"netaudit/{kind}-set/1", "boards": records}) + "\n"
        )
    return status

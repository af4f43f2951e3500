"""``netaudit parts missing``: the table rows that a board still needs."""

from __future__ import annotations

import argparse
import sys
from typing import Any


def add(commands: Any) -> None:
    command = commands.add_parser(
        "parts",
        help="what a board still needs in its part tables",
        description="parts missing BOARD writes a skeleton of the rows that the board still needs, most used first, with what "
        "the export knew and which checks each would open.",
        allow_abbrev=False,
    )
    command.add_argument("what", choices=("missing",))
    command.add_argument("file", metavar="NETLIST")
    command.add_argument("--root", metavar="FOLDER", help="project root: nothing outside it is read")
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    from netaudit.audit.missing import missing_rows
    from netaudit.interface import LoadedBoard
    from netaudit.report.missing_text import missing_text

    loaded = LoadedBoard.from_file(options.file, options.root)
    sys.stdout.write(missing_text(options.file, missing_rows(loaded.board)))
    return 0

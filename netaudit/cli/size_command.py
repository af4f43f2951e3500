"""``netaudit size``: the values of a part for which the whole board passes."""

from __future__ import annotations

import argparse
import sys
from typing import Any

from netaudit.interface import LoadedBoard


def add(commands: Any) -> None:
    command = commands.add_parser(
        "size",
        help="the values of a part for which the board passes",
        description="Finds the nominal values of a part for which no check of the board fails at its worst case, what limits "
        "them at each end, and the preferred values inside.",
        allow_abbrev=False,
    )
    command.add_argument("file", metavar="NETLIST")
    command.add_argument("device", metavar="DEVICE")
    command.add_argument("--policy", default="none", metavar="NAME|FILE", help="share of each rating that may be used")
    command.add_argument(
        "--series", action="append", default=[], metavar="E24", help="series of preferred values (E12 E24 E96)"
    )
    command.add_argument("--root", metavar="FOLDER", help="project root: nothing outside it is read")
    command.add_argument("--format", choices=("text", "json"), default="text")
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    from netaudit.audit.size import size
    from netaudit.report.size_text import size_record, size_text

    loaded = LoadedBoard.from_file(options.file, options.root)
    found = size(loaded.board, options.device, options.policy, tuple(options.series) or ("E24",))
    if options.format == "json":
        from netaudit.report.json_text import dumps

        sys.stdout.write(dumps(size_record(found)) + "\n")
    else:
        sys.stdout.write(size_text(found))
    return 0 if found.passes else 1

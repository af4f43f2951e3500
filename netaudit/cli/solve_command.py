"""``netaudit solve``."""

from __future__ import annotations

import argparse
from typing import Any

from netaudit import __version__
from netaudit.cli.common import add_files, add_modes, each
from netaudit.interface import LoadedBoard
from netaudit.report.style import Style


def add(commands: Any) -> None:
    command = commands.add_parser(
        "solve",
        help="operating points at nominal values",
        description="Finds the operating points of every mode at nominal values. Exit status 1 when a mode has none.",
        allow_abbrev=False,
    )
    add_files(command)
    add_modes(command)
    command.add_argument("--nominal", action="store_true", help="nominal values (what solve does anyway)")
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    def work(loaded: LoadedBoard, style: Style) -> tuple[int, dict[str, Any] | None, str]:
        results = loaded.solve(options.modes)
        status = int(any(not r.points for r in results))
        if options.format == "json":
            from netaudit.report.json_text import solve_record

            return status, solve_record(loaded.board, results, __version__), ""
        from netaudit.report.text import solve_text

        return status, None, solve_text(loaded.board, results, style, __version__)

    return each(options, "solve", work)

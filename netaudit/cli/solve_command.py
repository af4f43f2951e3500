"""``netaudit solve``.

Voltages of a part of the circuit without a reference are defined up to a constant only: that structural finding is
repeated here, since numbers would hide it.
"""

from __future__ import annotations

import argparse
from typing import Any

from netaudit import __version__
from netaudit.cli.common import add_files, add_modes, each
from netaudit.cli.settings import targets
from netaudit.interface import LoadedBoard
from netaudit.project.project import Project
from netaudit.report.style import Style


def add(commands: Any) -> None:
    command = commands.add_parser(
        "solve",
        help="operating points at nominal values",
        description="Finds the operating points of every mode at nominal values. Exit status 1 when a mode "
        "has none, or when nets have no reference.",
        allow_abbrev=False,
    )
    add_files(command)
    add_modes(command)
    command.add_argument("--nominal", action="store_true", help="nominal values (what solve does anyway)")
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    def work(loaded: LoadedBoard, style: Style, project: Project | None) -> tuple[int, dict[str, Any] | None, str]:
        results = loaded.solve(options.modes)
        findings = [f for f in loaded.lint() if f.rule == "graph/unreferenced-net" and f.level == "error"]
        status = int(bool(findings) or any(not r.points for r in results))
        if options.format == "json":
            from netaudit.report.json_text import solve_record

            return status, solve_record(loaded.board, results, findings, __version__), ""
        from netaudit.report.text import solve_text

        return status, None, solve_text(loaded.board, results, findings, style, __version__)

    return each(options, "solve", work, targets(options))

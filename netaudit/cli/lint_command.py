"""``netaudit lint``."""

from __future__ import annotations

import argparse
import datetime
from typing import Any

from netaudit import __version__
from netaudit.cli.common import add_fail_on, add_files, each
from netaudit.cli.settings import board_name, fail_on, targets
from netaudit.finding import rank
from netaudit.gate.waive import waive
from netaudit.gate.waivers import read_waivers
from netaudit.interface import LoadedBoard
from netaudit.project.project import Project
from netaudit.report.style import Style


def add(commands: Any) -> None:
    command = commands.add_parser(
        "lint",
        help="structure only: nets, grounds, loops, unknown parts",
        description="Checks the structure of netlists without solving them.",
        allow_abbrev=False,
    )
    add_files(command)
    add_fail_on(command)
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    files = targets(options)
    projects = {target.project.file: target.project for target in files if target.project is not None}
    waivers = {name: read_waivers(project).every for name, project in projects.items()}
    today = datetime.date.today()

    def work(loaded: LoadedBoard, style: Style, project: Project | None) -> tuple[int, dict[str, Any] | None, str]:
        name = board_name(project, loaded.board.name)
        own = [w for w in waivers[project.file] if w.board == name] if project is not None else []
        findings = waive(loaded.lint(), own, today)
        level = rank(fail_on(options, project))
        failed = any(rank(f.level) >= level for f in findings if f.waived is None)
        if options.format == "json":
            from netaudit.report.json_text import lint_record

            return int(failed), lint_record(loaded.board, findings, failed, __version__), ""
        from netaudit.report.text import lint_text

        return int(failed), None, lint_text(loaded.board, findings, failed, style, options.notes)

    return each(options, "lint", work, files)

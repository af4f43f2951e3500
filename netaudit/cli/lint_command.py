"""``netaudit lint``."""

from __future__ import annotations

import argparse
from typing import Any

from netaudit import __version__
from netaudit.cli.common import add_fail_on, add_files, each
from netaudit.cli.settings import fail_on, targets
from netaudit.finding import rank
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
    def work(loaded: LoadedBoard, style: Style, project: Project | None) -> tuple[int, dict[str, Any] | None, str]:
        findings = loaded.lint()
        failed = any(rank(f.level) >= rank(fail_on(options, project)) for f in findings)
        if options.format == "json":
            from netaudit.report.json_text import lint_record

            return int(failed), lint_record(loaded.board, findings, failed, __version__), ""
        from netaudit.report.text import lint_text

        return int(failed), None, lint_text(loaded.board, findings, failed, style, options.notes)

    return each(options, "lint", work, targets(options))

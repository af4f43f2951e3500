"""``netaudit audit``."""

from __future__ import annotations

import argparse
from typing import Any

from netaudit import __version__
from netaudit.cli.common import add_fail_on, add_files, add_modes, each
from netaudit.interface import LoadedBoard
from netaudit.parts.policy import load_policy
from netaudit.report.style import Style


def add(commands: Any) -> None:
    command = commands.add_parser(
        "audit",
        help="every part against its ratings, worst case",
        description="Solves every mode and compares every part's stress with its rating over all ranges and tolerances.",
        allow_abbrev=False,
    )
    add_files(command)
    add_modes(command)
    add_fail_on(command)
    command.add_argument("--nominal", action="store_true", help="nominal values only: no ranges, no tolerances")
    command.add_argument(
        "--policy",
        default="none",
        metavar="NAME|FILE",
        help="share of each rating that may be used (none, cautious, ...)",
    )
    command.add_argument("--require-complete", action="store_true", help="fail when something could not be audited")
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    policy = load_policy(options.policy)

    def work(loaded: LoadedBoard, style: Style) -> tuple[int, dict[str, Any] | None, str]:
        audit = loaded.audit(policy, options.nominal, options.modes)
        failed = audit.fails(options.fail_on, options.require_complete)
        if options.format == "json":
            from netaudit.report.json_text import audit_record

            return int(failed), audit_record(audit, failed, __version__), ""
        from netaudit.report.text import audit_text

        return int(failed), None, audit_text(audit, failed, style, options.notes, __version__)

    return each(options, "audit", work)

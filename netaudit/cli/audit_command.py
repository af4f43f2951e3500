"""``netaudit audit``."""

from __future__ import annotations

import argparse
from typing import Any

from netaudit import __version__
from netaudit.cli.common import FLAG, add_fail_on, add_files, add_modes, each
from netaudit.cli.settings import fail_on, nominal, plan_of, policy_name, require_complete, targets
from netaudit.interface import LoadedBoard
from netaudit.project.project import Project
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
    command.add_argument(
        "--nominal", action=FLAG, help="nominal values only: no ranges, no tolerances (default: worst case)"
    )
    command.add_argument(
        "--policy", metavar="NAME|FILE", help="share of each rating that may be used (default: none; cautious, ...)"
    )
    command.add_argument("--require-complete", action=FLAG, help="fail when something could not be audited")
    draws = command.add_argument_group("samples", "statistics over boards drawn from the ranges and tolerances")
    draws.add_argument("--samples", type=int, metavar="N", help="how many boards to draw")
    draws.add_argument("--seed", type=int, metavar="N", help="the same seed draws the same boards")
    draws.add_argument(
        "--sequence", choices=("sobol", "latin-hypercube", "plain"), help="how the boards are spread (default: sobol)"
    )
    draws.add_argument(
        "--distribution",
        choices=("uniform", "normal"),
        help="uniform over the span, or normal with the span as 3 sigma to both sides",
    )
    draws.add_argument(
        "--together",
        action="append",
        default=[],
        metavar="R1,R2",
        help="values that move together (one reel, a tracking network), as corners name them",
    )
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    from netaudit.parts.policy import load_policy

    files = targets(options)
    policies = {name: load_policy(name) for name in {policy_name(options, f.project) for f in files}}

    def work(loaded: LoadedBoard, style: Style, project: Project | None) -> tuple[int, dict[str, Any] | None, str]:
        policy = policies[policy_name(options, project)]
        audit = loaded.audit(policy, nominal(options, project), options.modes, plan_of(options, project))
        failed = audit.fails(fail_on(options, project), require_complete(options, project))
        if options.format == "json":
            from netaudit.report.json_text import audit_record

            return int(failed), audit_record(audit, failed, __version__), ""
        from netaudit.report.text import audit_text

        return int(failed), None, audit_text(audit, failed, style, options.notes, __version__)

    return each(options, "audit", work, files)

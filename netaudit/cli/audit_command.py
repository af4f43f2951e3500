"""``netaudit audit``."""

from __future__ import annotations

import argparse
from typing import TYPE_CHECKING, Any

from netaudit import __version__
from netaudit.cli.common import add_fail_on, add_files, add_modes, each
from netaudit.failure import InputError
from netaudit.interface import LoadedBoard
from netaudit.report.style import Style

if TYPE_CHECKING:
    from netaudit.audit.statistics import Plan


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
    draws = command.add_argument_group("samples", "statistics over boards drawn from the ranges and tolerances")
    draws.add_argument("--samples", type=int, default=0, metavar="N", help="how many boards to draw")
    draws.add_argument("--seed", type=int, default=1, metavar="N", help="the same seed draws the same boards")
    draws.add_argument(
        "--sequence", choices=("sobol", "latin-hypercube", "plain"), default="sobol", help="how the boards are spread"
    )
    draws.add_argument(
        "--distribution",
        choices=("uniform", "normal"),
        default="uniform",
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


def _plan(options: argparse.Namespace) -> Plan | None:
    from netaudit.audit.statistics import Plan

    if options.samples < 0 or options.samples > 10_000_000:
        raise InputError(f"--samples {options.samples}", mend="between 1 and 10000000")
    if not options.samples:
        return None
    together = tuple(tuple(group.split(",")) for group in options.together)
    return Plan(options.samples, options.seed, options.sequence, options.distribution, together)


def run(options: argparse.Namespace) -> int:
    from netaudit.parts.policy import load_policy

    policy = load_policy(options.policy)

    def work(loaded: LoadedBoard, style: Style) -> tuple[int, dict[str, Any] | None, str]:
        audit = loaded.audit(policy, options.nominal, options.modes, _plan(options))
        failed = audit.fails(options.fail_on, options.require_complete)
        if options.format == "json":
            from netaudit.report.json_text import audit_record

            return int(failed), audit_record(audit, failed, __version__), ""
        from netaudit.report.text import audit_text

        return int(failed), None, audit_text(audit, failed, style, options.notes, __version__)

    return each(options, "audit", work)

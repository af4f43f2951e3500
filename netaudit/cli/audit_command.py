"""``netaudit audit``."""

from __future__ import annotations

import argparse
import sys
from typing import TYPE_CHECKING, Any

from netaudit import __version__
from netaudit.cli.common import FLAG, add_fail_on, add_files, add_modes, complain, deliver, shown
from netaudit.cli.reports import add_reports, wanted, write_reports
from netaudit.cli.settings import Target, fail_on, nominal, plan_of, policy_name, require_complete, targets
from netaudit.report.style import Style

if TYPE_CHECKING:
    from netaudit.audit.batch import Batch, BoardResult
    from netaudit.gate.job import Job


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
    add_reports(command)
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
    from netaudit.audit.batch import Batch
    from netaudit.gate.run import run_jobs
    from netaudit.parts.policy import load_policy

    reports = wanted(options.reports)
    jobs = tuple(_job(target, options) for target in targets(options))
    for name in {job.policy for job in jobs}:
        # a policy that is not there is said once, before anything is solved
        load_policy(name)
    results: list[BoardResult] = []
    for result in shown(run_jobs(jobs), len(jobs)):
        results.append(result)
        if result.audit is None:
            complain(result.error, result.place)
    batch = Batch(tuple(results), __version__)
    text = write_reports(reports, batch) if reports else ""
    if len(jobs) > 1 or results[0].audit is not None:
        text = text or _text(options, batch)
    if text:
        deliver(text, options.output)
    return max((2 if r.audit is None else int(r.failed) for r in results), default=0)


def _job(target: Target, options: argparse.Namespace) -> Job:
    from netaudit.gate.job import Job

    project = target.project
    return Job(
        target.path,
        target.root,
        tuple(options.changes),
        policy_name(options, project),
        nominal(options, project),
        tuple(options.modes),
        plan_of(options, project),
        fail_on(options, project),
        require_complete(options, project),
    )


def _text(options: argparse.Namespace, batch: Batch) -> str:
    """What goes to stdout when no report does."""
    if options.format == "json":
        from netaudit.report.json_report import render

        return render(batch)
    from netaudit.report.text import audit_text

    style = Style.for_stream(sys.stdout.isatty() and options.output is None)
    return "\n".join(
        f"{board.error}\n"
        if board.audit is None
        else audit_text(board.audit, board.failed, style, options.notes, __version__)
        for board in batch.boards
    )

"""``netaudit audit``."""

from __future__ import annotations

import argparse
import sys
from typing import TYPE_CHECKING, Any

from netaudit import __version__
from netaudit.cli.common import FLAG, add_fail_on, add_files, add_modes, complain, deliver
from netaudit.cli.reports import add_reports, wanted, write_reports
from netaudit.cli.settings import add_cache, cache_of, jobs_of, targets, workers_of
from netaudit.cli.work import add_workers, at_work
from netaudit.report.style import Style

if TYPE_CHECKING:
    from netaudit.audit.batch import Batch, BoardResult


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
    add_workers(command)
    add_cache(command)
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
    from netaudit.gate.waive import homeless

    reports = wanted(options.reports)
    files = targets(options)
    jobs = jobs_of(options, files)
    live = any(report.format.live for report in reports)
    results: list[BoardResult] = []
    with at_work(workers_of(options, files[0].project), options.cluster) as workers:
        for result in run_jobs(jobs, cache_of(options, files), live, workers):
            results.append(result)
            if result.audit is None:
                complain(result.error, result.place)
    # the whole project was looked at only when no files were named
    lost = () if options.files else homeless(jobs[0].verdict.waivers, (job.verdict.board for job in jobs))
    batch = Batch(tuple(results), __version__, lost)
    text = write_reports(reports, batch) if reports else ""
    if len(jobs) > 1 or results[0].audit is not None:
        text = text or _text(options, batch)
    if text:
        deliver(text, options.output)
    return max(int(batch.failed), *(2 if r.audit is None and not r.interrupted else 0 for r in results))


def _text(options: argparse.Namespace, batch: Batch) -> str:
    """What goes to stdout when no report does."""
    if options.format == "json":
        from netaudit.report.json_report import render

        return render(batch)
    from netaudit.report.text import audit_text, findings_text

    style = Style.for_stream(sys.stdout.isatty() and options.output is None)
    texts = [
        f"{board.error}\n"
        if board.audit is None
        else audit_text(board.audit, board.failed, style, options.notes, __version__)
        for board in batch.boards
    ]
    if batch.findings:
        texts.append("\n".join(findings_text(batch.findings, style, options.notes)) + "\n")
    return "\n".join(texts)

"""``netaudit compare``: what a change made worse."""

from __future__ import annotations

import argparse
import sys
from contextlib import ExitStack
from typing import TYPE_CHECKING, Any

from netaudit import __version__
from netaudit.cli.common import FLAG, add_fail_on, complain, deliver
from netaudit.cli.reports import add_reports, wanted, write_reports
from netaudit.cli.settings import add_cache, fail_on, nominal, policy_name, require_complete, workers_of
from netaudit.cli.work import add_workers, at_work
from netaudit.failure import InputError
from netaudit.project.project import Project, Steps
from netaudit.project.read import find_project
from netaudit.report.style import Style

if TYPE_CHECKING:
    from netaudit.audit.batch import Batch
    from netaudit.gate.side import Side


def add(commands: Any) -> None:
    command = commands.add_parser(
        "compare",
        help="what a change made worse",
        description="Audits two revisions and tells new, worse, better and mended findings apart. The verdict counts only "
        "what is new or worse. Each side is a folder, a saved JSON report, or a git revision, which is read from git's "
        "object store: no checkout is touched. What is there as a folder or a file is that.",
        allow_abbrev=False,
    )
    command.add_argument("base", metavar="BASE", help="what was: a folder, a JSON report, a git revision")
    command.add_argument("head", metavar="HEAD", help="what is now, the same way; . is the current folder")
    add_fail_on(command)
    command.add_argument(
        "--format", choices=("text", "json"), default="text", help="text for people, JSON for programs"
    )
    command.add_argument("-o", "--output", metavar="FILE", help="write the report to a file instead of stdout")
    add_reports(command)
    command.add_argument("--policy", metavar="NAME|FILE", help="share of each rating that may be used, on both sides")
    command.add_argument("--nominal", action=FLAG, help="nominal values only, on both sides (default: worst case)")
    command.add_argument("--require-complete", action=FLAG, help="fail when something of the head could not be audited")
    command.add_argument("--step", metavar="5%", help="by how much of itself a finding's ratio may rise (default: 5%%)")
    command.add_argument(
        "--stress-step",
        metavar="20%",
        help="the same for stresses inside their limits (default: they are only listed)",
    )
    add_cache(command)
    add_workers(command)
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    from netaudit.gate.side import open_side

    reports = wanted(options.reports)
    if any(report.format.live for report in reports):
        raise InputError("a report with pictures is made of one revision", mend="netaudit audit --report makes it")
    with ExitStack() as stack:
        level = fail_on(options, None)
        head = open_side(options.head, stack, level)
        base = open_side(options.base, stack, level, head)
        batch = _compared(options, base, head)
    for board in batch.boards:
        if board.audit is None:
            complain(board.error, board.place)
    text = write_reports(reports, batch) if reports else ""
    deliver(text or _text(options, batch), options.output)
    return 2 if any(b.audit is None for b in batch.boards) else int(batch.failed)


def _compared(options: argparse.Namespace, base: Side, head: Side) -> Batch:
    from netaudit.audit.batch import Batch
    from netaudit.gate.compare import compare
    from netaudit.gate.sides import Settings, audited
    from netaudit.gate.waive import homeless
    from netaudit.gate.waivers import read_waivers
    from netaudit.parts.policy import load_policy

    project = head.project if head.saved is None else find_project(".")
    policy = policy_name(options, project)
    load_policy(policy)
    settings = Settings(
        policy, nominal(options, project), None, fail_on(options, project), require_complete(options, project),
        _cache(options),
    )  # fmt: skip
    with at_work(workers_of(options, project), options.cluster) as workers:
        sides = audited(base, head, settings, workers)
    lost = homeless(read_waivers(head.project), head.boards) if head.project is not None else ()
    return Batch(
        tuple(sides.head), __version__, lost, compare(sides, _steps(options, project), settings.require_complete)
    )


def _cache(options: argparse.Namespace) -> str | None:
    """The cache of the project that the current folder belongs to: one of a revision's would be lost."""
    if options.no_cache or options.cache is not None:
        return options.cache if not options.no_cache else None
    here = find_project(".")
    return here.path(here.cache) if here is not None and here.cache is not None else None


def _steps(options: argparse.Namespace, project: Project | None) -> Steps:
    gate = project.gate if project is not None else Steps()
    step = _share("--step", options.step)
    stress = _share("--stress-step", options.stress_step)
    return Steps(gate.step if step is None else step, gate.stress_step if stress is None else stress)


def _share(option: str, text: str | None) -> float | None:
    from netaudit.place import Place
    from netaudit.quantities.read import read_number

    if text is None:
        return None
    value = read_number(text, "1", Place(f"{option} {text}", 1))
    if not 0 <= value <= 10:
        raise InputError(f"{option} {text}", mend="between 0% and 1000%")
    return value


def _text(options: argparse.Namespace, batch: Batch) -> str:
    if options.format == "json":
        from netaudit.report.compare_json import compare_record
        from netaudit.report.json_text import dumps

        return dumps(compare_record(batch)) + "\n"
    from netaudit.report.compare_text import compare_text

    return compare_text(batch, Style.for_stream(sys.stdout.isatty() and options.output is None), options.notes)

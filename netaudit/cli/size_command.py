"""``netaudit size``: the values of a part for which the whole board passes."""

from __future__ import annotations

import argparse
import sys
from typing import Any

from netaudit import __version__
from netaudit.cli.settings import count_of
from netaudit.cli.work import add_workers, at_work
from netaudit.interface import LoadedBoard
from netaudit.workers import Interrupted, Workers


def add(commands: Any) -> None:
    command = commands.add_parser(
        "size",
        help="the values of a part for which the board passes, or what mends each failing check",
        description="Finds the nominal values of a part for which no check of the board fails at its worst case, what limits "
        "them at each end, and the preferred values inside. With --all-failing: for every failing check the smallest single "
        "change (a preferred value of a resistor nearby, the next class of the exceeded rating) that mends it and makes no "
        "new finding; exit status 1 when a check has none.",
        allow_abbrev=False,
    )
    command.add_argument("file", metavar="NETLIST")
    what = command.add_mutually_exclusive_group(required=True)
    what.add_argument("device", metavar="DEVICE", nargs="?", help="designator of the part whose value is looked for")
    what.add_argument("--all-failing", action="store_true", help="what mends each failing check of the board")
    command.add_argument("--policy", default="none", metavar="NAME|FILE", help="share of each rating that may be used")
    command.add_argument(
        "--series", action="append", default=[], metavar="E24", help="series of preferred values (E12 E24 E96)"
    )
    command.add_argument("--root", metavar="FOLDER", help="project root: nothing outside it is read")
    command.add_argument("--format", choices=("text", "json"), default="text")
    add_workers(command)
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    loaded = LoadedBoard.from_file(options.file, options.root)
    series = tuple(options.series) or ("E24",)
    with at_work(count_of(options.workers), options.cluster) as workers:
        try:
            return (
                _all_failing(options, loaded, series, workers)
                if options.all_failing
                else _one(options, loaded, series, workers)
            )
        except Interrupted:
            print(f"netaudit: interrupted: not all values of {options.device} were looked at", file=sys.stderr)
            return 1


def _one(options: argparse.Namespace, loaded: LoadedBoard, series: tuple[str, ...], workers: Workers) -> int:
    from netaudit.audit.size import size
    from netaudit.report.size_text import size_record, size_text

    found = size(loaded.board, options.device, options.policy, series, workers)
    _say(options, size_record(found), size_text(found))
    return 0 if found.passes else 1


def _all_failing(options: argparse.Namespace, loaded: LoadedBoard, series: tuple[str, ...], workers: Workers) -> int:
    from netaudit.audit.mend import mends
    from netaudit.report.size_text import mends_record, mends_text

    found = mends(loaded.board, options.policy, series, workers)
    _say(options, mends_record(found, __version__), mends_text(found))
    return int(found.partial or any(not m.changes for m in found.mends))


def _say(options: argparse.Namespace, record: dict[str, Any], text: str) -> None:
    if options.format == "json":
        from netaudit.report.json_text import dumps

        text = dumps(record) + "\n"
    sys.stdout.write(text)

"""``netaudit explain``."""

from __future__ import annotations

import argparse
from typing import Any

from netaudit import explain
from netaudit.cli.common import deliver


def add(commands: Any) -> None:
    command = commands.add_parser(
        "explain",
        help="what a rule finds, what a kind is",
        description="Prints the page of a rule or a device kind; without a name, the list of both.",
        allow_abbrev=False,
    )
    command.add_argument("name", nargs="?", metavar="RULE|KIND")
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    deliver(explain(options.name), None)
    return 0

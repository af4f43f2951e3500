"""``netaudit explain``."""

from __future__ import annotations

import argparse
import sys
from typing import Any

from netaudit.failure import InputError


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
    from netaudit.report.pages import index_page, kind_page, rule_page

    page = index_page() if options.name is None else rule_page(options.name) or kind_page(options.name)
    if page is None:
        from netaudit.audit.rules import RULES
        from netaudit.devices import KINDS
        from netaudit.syntax.suggest import closest

        near = closest(options.name, [*RULES, *KINDS])
        mend = f"did you mean {near}?" if near else "netaudit explain lists them"
        raise InputError(f"there is no rule or kind {options.name}", mend=mend)
    sys.stdout.write(page)
    return 0

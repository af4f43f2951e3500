"""The command: parses arguments, calls one module a command, turns bad news into exit statuses.

0 nothing at or above the fail level; 1 something is; 2 wrong command, file or netlist; 3 a fault of netaudit itself.
"""

from __future__ import annotations

import argparse
import sys
import traceback
from collections.abc import Sequence
from typing import NoReturn

from netaudit import __version__
from netaudit.cli import (
    audit_command,
    compare_command,
    convert_command,
    explain_command,
    fit_command,
    init_command,
    lint_command,
    parts_command,
    size_command,
    solve_command,
)
from netaudit.cli.common import abandon_stdout, refuse
from netaudit.failure import InputError

_EPILOG = """\
examples:
  netaudit lint board.netlist            structure only, in a moment
  netaudit solve board.netlist           operating points at nominal values
  netaudit audit board.netlist           every part against its ratings, worst case
  netaudit audit --policy cautious --format json *.netlist
  netaudit compare origin/main .         only what this change made worse
  netaudit explain stress/power          what a rule finds, and why

exit status: 0 nothing at or above --fail-on, 1 something is, 2 the command, a file or a netlist is wrong,
3 a fault of netaudit itself
"""

_COMMANDS = (
    lint_command,
    solve_command,
    audit_command,
    compare_command,
    size_command,
    explain_command,
    fit_command,
    convert_command,
    parts_command,
    init_command,
)


class _Parser(argparse.ArgumentParser):
    """Wrong arguments are one line and exit status 2, like every other wrong input."""

    def error(self, message: str) -> NoReturn:
        raise InputError(f"netaudit: {message}", mend=f"{self.prog} --help")


def parser() -> argparse.ArgumentParser:
    """The whole command line."""
    top = _Parser(
        prog="netaudit",
        description="Finds the DC operating points of a netlist and checks every part against its ratings.",
        epilog=_EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    top.add_argument("--version", action="version", version=f"netaudit {__version__}")
    commands = top.add_subparsers(dest="command", metavar="COMMAND", required=True)
    for module in _COMMANDS:
        module.add(commands)
    return top


def main(arguments: Sequence[str] | None = None) -> int:
    """Runs a command line and gives its exit status."""
    try:
        options = parser().parse_args(arguments)
        status: int = options.run(options)
        sys.stdout.flush()
        return status
    except InputError as error:
        return refuse(error)
    except KeyboardInterrupt:
        print("netaudit: interrupted", file=sys.stderr)
        return 130
    except BrokenPipeError:
        # whoever read the output has seen enough
        abandon_stdout()
        return 0
    except SystemExit as done:
        return int(done.code or 0)
    except Exception:
        traceback.print_exc()
        print("netaudit: this is a fault of netaudit itself; please report it with the netlist", file=sys.stderr)
        return 3


def run() -> None:
    """The entry point of the installed command."""
    sys.exit(main())

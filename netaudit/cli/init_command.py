"""``netaudit init``: a commented ``netaudit.toml``, and the lines for a hook and for continuous integration."""

from __future__ import annotations

import argparse
import os
import sys
from typing import Any

from netaudit.failure import InputError

_HOOKS = """
For a hook at every commit, in .pre-commit-config.yaml:

    repos:
      - repo: URL-OF-NETAUDIT
        rev: v{version}
        hooks:
          - id: netaudit

For continuous integration, two lines:

    python -m pip install netaudit
    netaudit audit --report markdown=netaudit.md --report junit=netaudit.xml --report sarif=netaudit.sarif

To block a merge only for what it makes worse:

    netaudit compare origin/main HEAD
"""


def add(commands: Any) -> None:
    command = commands.add_parser(
        "init",
        help="write a commented netaudit.toml",
        description="Looks for netlists, part tables and schematic exports below the folder and writes a commented "
        "netaudit.toml; prints the lines for a hook and for continuous integration. Nothing is overwritten.",
        allow_abbrev=False,
    )
    command.add_argument("folder", nargs="?", default=os.curdir, metavar="FOLDER", help="default: the current folder")
    command.set_defaults(run=run)


def run(options: argparse.Namespace) -> int:
    from netaudit import __version__
    from netaudit.project.project import FILE_NAME
    from netaudit.project.starter import look_around, starter

    path = os.path.normpath(os.path.join(options.folder, FILE_NAME))
    if not os.path.isdir(options.folder):
        raise InputError(f"{options.folder} is no folder", mend="name the folder that holds the boards")
    if os.path.lexists(path):
        raise InputError(f"{path} is there already", mend="change it by hand, or remove it first")
    found = look_around(options.folder)
    _create(path, starter(found))
    said = f"{len(found.boards)} boards, {len(found.parts)} part tables and {len(found.exports)} exports were found"
    sys.stdout.write(f"{path} written: {said}\n{_HOOKS.format(version=__version__)}")
    return 0


def _create(path: str, text: str) -> None:
    """Writes a new file, whole or not at all; one that came up meanwhile stays."""
    try:
        with open(path, "x", encoding="utf-8", newline="\n") as stream:
            try:
                stream.write(text)
                stream.flush()
            except OSError:
                os.unlink(path)
                raise
    except OSError as error:
        raise InputError(f"{path} cannot be written: {error.strerror}", mend="check the folder") from None

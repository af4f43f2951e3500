"""``--report FORMAT=FILE``: which reports are wanted, and writing them, each whole or not at all."""

from __future__ import annotations

import argparse
import contextlib
import os
import stat
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from netaudit.failure import InputError
from netaudit.report.formats import FORMATS, Format
from netaudit.syntax.suggest import closest

if TYPE_CHECKING:
    from netaudit.audit.batch import Batch


@dataclass(frozen=True)
class Wanted:
    """A report and where it goes (``-``: stdout)."""

    format: Format
    path: str


def add_reports(command: argparse.ArgumentParser) -> None:
    listed = ", ".join(FORMATS)
    command.add_argument(
        "--report",
        action="append",
        default=[],
        metavar="FORMAT=FILE",
        dest="reports",
        help=f"write a report as well; repeatable; - is stdout, instead of the text; formats: {listed}",
    )


def wanted(texts: Sequence[str]) -> tuple[Wanted, ...]:
    """The reports that were asked for.  Raises InputError for an unknown format or two on one file."""
    found: list[Wanted] = []
    for text in texts:
        name, equals, path = text.partition("=")
        if not equals or not path:
            raise InputError(f"--report {text}", mend="write --report sarif=FILE, or FILE as - for stdout")
        if name not in FORMATS:
            near = closest(name, FORMATS)
            mend = f"did you mean {near}?" if near else f"one of {', '.join(FORMATS)}"
            raise InputError(f"--report {text}: there is no format {name}", mend=mend)
        if any(other.path == path for other in found):
            raise InputError(f"--report {text}: two reports go to {path}", mend="name another file")
        found.append(Wanted(FORMATS[name], path))
    return tuple(found)


def write_reports(reports: Sequence[Wanted], batch: Batch) -> str:
    """Writes the files and gives the text for stdout (empty when no report goes there).

    All are made before the first is written, and all are written beside their places before the first is put there: a
    report of an earlier run stays whole whatever happens.
    """
    texts = [(report, report.format.render(batch)) for report in reports]
    replace_files([(report.path, text) for report, text in texts if report.path != "-"])
    return next((text for report, text in texts if report.path == "-"), "")


def replace_files(contents: Sequence[tuple[str, str]]) -> None:
    """Puts texts into files, whole or not at all.  Raises InputError when one cannot be written."""
    ready: list[tuple[str, str]] = []
    path = ""
    try:
        for path, text in contents:
            ready.append((_beside(path, text), path))
        for temporary, path in ready:
            if temporary != path:
                os.replace(temporary, os.path.realpath(path))
    except OSError as error:
        raise InputError(
            f"{path} cannot be written: {error.strerror}", mend="name another file, or make room"
        ) from None
    finally:
        for temporary, path in ready:
            if temporary != path:
                with contextlib.suppress(OSError):
                    os.unlink(temporary)


def _beside(path: str, text: str) -> str:
    """Writes a file beside the place it is for; a device or a pipe is written as it is, never replaced."""
    real = os.path.realpath(path)
    special = os.path.exists(real) and not stat.S_ISREG(os.stat(real).st_mode)
    temporary = path if special else f"{real}.{os.getpid()}.part"
    try:
        with open(temporary, "w", encoding="utf-8", newline="") as stream:
            stream.write(text)
            stream.flush()
            if not special:
                os.fsync(stream.fileno())
    except BaseException:
        if not special:
            with contextlib.suppress(OSError):
                os.unlink(temporary)
        raise
    return temporary

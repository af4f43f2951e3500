"""One side of a comparison: a folder, a saved JSON report, or a git revision."""

from __future__ import annotations

import os
import tempfile
from collections.abc import Mapping, Sequence
from contextlib import ExitStack
from dataclasses import dataclass, field

from netaudit.audit.batch import BoardResult
from netaudit.failure import InputError
from netaudit.finding import Level
from netaudit.gate.checkout import Revision, write
from netaudit.gate.git import Repository
from netaudit.gate.saved import read_saved
from netaudit.project.globs import matching, named_files
from netaudit.project.project import FILE_NAME, Project
from netaudit.project.read import find_project, project_at
from netaudit.project.starter import look_around

_NETLISTS = (".netlist", ".net", ".nl", ".txt")


@dataclass(frozen=True)
class Side:
    """Where a side's files lie: its boards by their paths from ``folder``; or ``saved`` results.

    ``hidden``: the folder is a temporary one that no report shall name.  ``broken``: boards whose files are not all here.
    """

    name: str
    folder: str = ""
    project: Project | None = None
    boards: tuple[str, ...] = ()
    hidden: bool = False
    broken: Mapping[str, InputError] = field(default_factory=dict)
    saved: tuple[BoardResult, ...] | None = None
    remarks: tuple[str, ...] = ()

    @property
    def prefix(self) -> str:
        """What names begin with that reports show without it."""
        return "" if self.folder == os.curdir else f"{self.folder}{os.sep}"

    @property
    def tables(self) -> tuple[str, ...]:
        """The part tables of the side's project."""
        return named_files(self.project, "parts", self.project.parts) if self.project is not None else ()


def open_side(text: str, stack: ExitStack, fail_on: Level, like: Side | None = None) -> Side:
    """The side that a word names: what is there as a folder or file is that, else it is a revision.

    ``like``: the head, whose patterns of boards hold where a base has no netaudit.toml.
    """
    if os.path.isdir(text):
        return _folder(text, like)
    if os.path.exists(text):
        return Side(text, saved=read_saved(text, fail_on))
    repository = Repository(os.curdir)
    why = repository.exists()
    if why is not None:
        raise InputError(
            f"{text} is no folder or file, and there are no revisions here: {why}",
            mend="name a folder, a report or a revision",
        )
    folder = stack.enter_context(tempfile.TemporaryDirectory(prefix="netaudit-"))
    try:
        return _revision(text, Revision.read(repository, text), os.path.realpath(folder), like)
    except InputError as error:
        # the folder is nobody's: the names in it are those of the revision
        said = str(error).replace(f"{os.path.realpath(folder)}{os.sep}", f"{text}:")
        raise InputError(said) from None


def _folder(text: str, like: Side | None) -> Side:
    folder = os.path.normpath(text)
    project = project_at(folder)
    if project is None and os.path.samefile(folder, os.curdir) and (project := find_project(folder)) is not None:
        # the current folder stands for the project that it lies in, as for a revision
        folder = project.folder
    return Side(text, folder, project, _boards(folder, project, like))


def _boards(folder: str, project: Project | None, like: Side | None) -> tuple[str, ...]:
    """By the project's patterns, else by those of the other side, else every netlist that no other one includes."""
    if project is not None and project.boards:
        return named_files(project, "boards", project.boards)
    if like is not None and like.project is not None and like.project.boards:
        every = [os.path.relpath(os.path.join(inside, n), folder).replace(os.sep, "/")
                 for inside, _, names in os.walk(folder) for n in names]  # fmt: skip
        return matching(every, like.project.boards)
    return look_around(folder).boards


def _revision(text: str, revision: Revision, folder: str, like: Side | None) -> Side:
    """Puts what the revision's boards read into the folder."""
    write(folder, revision.closure([FILE_NAME]))
    project = project_at(folder)
    patterns = project or (like.project if like is not None else None)
    if patterns is not None and patterns.boards:
        candidates: Sequence[str] = matching(revision.entries, patterns.boards)
    else:
        candidates = [path for path in revision.entries if path.endswith(_NETLISTS)]
    if project is not None:
        write(folder, revision.closure(matching(revision.entries, (*project.parts, *project.waivers))))
    revision.fetch(candidates)
    broken = {}
    for path in candidates:
        try:
            write(folder, revision.closure([path]))
        except InputError as error:
            broken[path] = error
            write(folder, {path: revision.content.get(path, b"")})
    remarks = tuple(
        f"{text}: the submodule {module} is not here with commit {commit[:12]}; boards in it were not looked at"
        for module, commit in revision.missing.items()
    )
    boards = _boards(folder, project, like)
    return Side(text, folder, project, boards, True, {p: e for p, e in broken.items() if p in boards}, remarks=remarks)

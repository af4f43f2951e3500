"""Patterns of files: ``*`` and ``?`` stay in a folder, ``**`` stands for any folders, a leading ``!`` takes out again."""

from __future__ import annotations

import os
import re
from collections.abc import Iterable, Iterator, Sequence

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.project.project import Project

_FOLDER = r"(?!\.)[^/]+"


def matching(paths: Iterable[str], patterns: Sequence[str]) -> tuple[str, ...]:
    """Those of the paths (with ``/`` between folders) that the patterns name, in order of their names."""
    every = sorted(set(paths))
    kept: set[str] = set()
    for pattern in patterns:
        expression = expression_of(pattern.removeprefix("!"))
        found = {p for p in every if expression.fullmatch(p)}
        kept = kept - found if pattern.startswith("!") else kept | found
    return tuple(p for p in every if p in kept)


def expression_of(pattern: str) -> re.Pattern[str]:
    """The regular expression of one pattern."""
    out = ""
    for piece in re.split(r"(\*\*/|\*\*|\*|\?|\[!?[^]]+\])", os.path.normpath(pattern).replace(os.sep, "/")):
        # a wildcard at the start of a name passes over names that begin with a dot
        shown = r"(?!\.)" if not out or out.endswith(("/", "/)*")) else ""
        if piece == "**/":
            out += rf"(?:{_FOLDER}/)*"
        elif piece == "**":
            out += rf"(?:{_FOLDER}/)*{_FOLDER}"
        elif piece in ("*", "?"):
            out += shown + (r"[^/]*" if piece == "*" else "[^/]")
        elif piece.startswith("[") and piece.endswith("]"):
            inside = re.escape(piece[1:-1].removeprefix("!")).replace("\\-", "-")
            out += f"[{'^' if piece[1] == '!' else ''}{inside}]"
        else:
            out += re.escape(piece)
    return re.compile(out)


def named_files(project: Project, key: str, patterns: Sequence[str]) -> tuple[str, ...]:
    """The files that a key of the project names, relative to its folder; InputError for one that names none."""
    for pattern in patterns:
        below_project(project, key, pattern)
    found: dict[str, None] = {}
    every = list(_files(project, patterns))
    for pattern in patterns:
        if not pattern.startswith("!") and not matching(every, [pattern]):
            raise InputError(
                f"{key}: no file matches {pattern!r}", place=project.place(key), mend="it is relative to this file"
            )
        # tables keep the order in which they are named: a later row wins
        found.update(dict.fromkeys(matching(every, [pattern])))
    kept = set(matching(every, patterns))
    for path in kept:
        _inside(project, key, path)
    return tuple(path for path in found if path in kept)


def _inside(project: Project, key: str, path: str) -> None:
    """A link may not lead out of the project either."""
    top, real = os.path.realpath(project.folder), os.path.realpath(os.path.join(project.folder, path))
    if os.path.commonpath([top, real]) != top:
        raise InputError(f"{key}: {path!r} leads out of the project", place=project.place(key), mend="copy the file")


def below_project(project: Project, key: str, name: str) -> None:
    """InputError when a name leads out of the project's folder."""
    plain = os.path.normpath(name.removeprefix("!"))
    if os.path.isabs(plain) or plain.split(os.sep)[0] == os.pardir:
        place: Place = project.place(key)
        raise InputError(f"{key}: {name!r} lies outside the project", place=place, mend="name files below this folder")


def _files(project: Project, patterns: Sequence[str]) -> Iterator[str]:
    """The files below the folders in which the patterns begin; folders whose names begin with a dot only if named."""
    starts = {_start(p) for p in patterns if not p.startswith("!")}
    for start in sorted(starts):
        top = os.path.join(project.folder, start)
        if os.path.isfile(top):
            yield start
        depth = start.count("/") + 1 if start else 0
        deep = any("**" in p or p.count("/") > depth for p in patterns if _start(p) == start)
        for folder, folders, names in os.walk(top):
            folders[:] = sorted(f for f in folders if not f.startswith(".")) if deep else []
            inside = os.path.relpath(folder, project.folder)
            for name in names:
                yield name if inside == os.curdir else f"{inside.replace(os.sep, '/')}/{name}"


def _start(pattern: str) -> str:
    """The part of a pattern before its first wildcard: a folder, or the file itself."""
    pieces = os.path.normpath(pattern).split(os.sep)
    plain = [p for k, p in enumerate(pieces) if not any(c in "".join(pieces[: k + 1]) for c in "*?[")]
    return "/".join(plain) if plain else ""

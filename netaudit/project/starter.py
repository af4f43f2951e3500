"""What ``netaudit init`` finds in a folder and the commented ``netaudit.toml`` that it writes."""

from __future__ import annotations

import os
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from netaudit.syntax.statements import PartsStatement

_EXPORTS = (".edf", ".edn", ".edif")
_MOST = 200_000


@dataclass(frozen=True)
class Found:
    """Paths relative to the folder: netlists that no other one includes, part tables, exports that none includes."""

    boards: tuple[str, ...]
    parts: tuple[str, ...]
    exports: tuple[str, ...]


def look_around(folder: str) -> Found:
    """The netlists, part tables and exports of a folder, by their content, hidden folders left out."""
    netlists: list[str] = []
    exports: list[str] = []
    for path in _files(folder):
        if path.endswith(_EXPORTS):
            exports.append(path)
        elif _begins(os.path.join(folder, path)):
            netlists.append(path)
    included: set[str] = set()
    tables: set[str] = set()
    for path in netlists:
        more, parts = _named(os.path.join(folder, path), folder)
        included |= more
        tables |= parts
    return Found(
        tuple(p for p in netlists if p not in included),
        tuple(sorted(tables)),
        tuple(p for p in exports if p not in included),
    )


def _files(folder: str) -> Iterator[str]:
    count = 0
    for inside, folders, names in os.walk(folder):
        folders[:] = sorted(f for f in folders if not f.startswith(".") and f != "node_modules")
        for name in sorted(names):
            count += 1
            if count > _MOST:
                return
            yield os.path.relpath(os.path.join(inside, name), folder).replace(os.sep, "/")


def _begins(path: str) -> bool:
    """Whether a file's first statement is ``netlist 1``."""
    if not path.endswith((".netlist", ".net", ".txt", ".nl")):
        return False
    try:
        with open(path, encoding="utf-8-sig", errors="replace") as stream:
            for line in stream.readlines(1 << 16):
                words = line.partition("#")[0].split()
                if words:
                    return words[0] == "netlist" and len(words) == 2
    except OSError:
        return False
    return False


def _named(path: str, folder: str) -> tuple[set[str], set[str]]:
    """Files that a netlist includes, and its part tables; nothing of one that cannot be read."""
    from netaudit.failure import InputError
    from netaudit.syntax.reader import read_netlist

    try:
        netlist = read_netlist(path, root=folder)
    except InputError:
        return set(), set()
    top = os.path.realpath(folder)

    def inside(name: str) -> str:
        return os.path.relpath(os.path.realpath(name), top).replace(os.sep, "/")

    tables = {inside(s.path) for s in netlist.statements if isinstance(s, PartsStatement) and s.file.quoted}
    return {inside(f) for f in netlist.files} - {inside(path)}, tables


def starter(found: Found) -> str:
    """The text of a commented ``netaudit.toml`` with what was found."""
    return f"""\
# What netaudit does in this repository; the command line wins over it.

# Netlists to look at: * stays in a folder, ** stands for any folders, a leading "!" takes out again.
boards = {_listed(found.boards, "boards/*.netlist")}

# Part tables that every board reads before its own; a later row of a name wins.
# parts = {_listed(found.parts, "parts.toml", once=True)}

# Share of each rating that may be used: none, cautious, another shipped policy, or a .toml file of yours.
policy = "none"

# Exit status 1 at this level or above: note, warning or error.
fail-on = "error"

# Fail when something could not be audited.
require-complete = false

# Files with reviewed waivers.
# waivers = ["waivers.toml"]

# Boards at a time (0: every processor), and a folder that keeps the audits of boards that have not changed.
workers = 0
cache   = ".netaudit-cache"

[corners]
values = "worst"    # or "nominal"
# samples = 1024    # boards to draw for statistics

[gate]
step = "5%"         # by how much a finding's ratio may rise against the base
# stress-step = "20%"   # the same for stresses inside their limits; left out, they are only listed

# [export]          # how parts of schematic exports are read: see the README
{_exports(found.exports)}"""


def _listed(paths: Sequence[str], otherwise: str, once: bool = False) -> str:
    """The paths, or one pattern for all netlists of a folder."""
    if not paths:
        return f'["{otherwise}"]'
    if once or len(paths) <= 3:
        return "[" + ", ".join(_quoted(p) for p in paths[:20]) + "]"
    patterns = sorted({os.path.join(os.path.dirname(p), f"*{os.path.splitext(p)[1]}") for p in paths})
    return "[" + ", ".join(_quoted(p) for p in (patterns if len(patterns) <= 20 else ["**/*.netlist"])) + "]"


def _quoted(text: str) -> str:
    return (
        '"' + "".join(f"\\u{ord(c):04x}" if not c.isprintable() else f"\\{c}" if c in '"\\' else c for c in text) + '"'
    )


def _exports(paths: Sequence[str]) -> str:
    if not paths:
        return ""
    shown = "".join(f"#   {_quoted(p)}\n" for p in paths[:20])
    return f"\n# Exports that no netlist includes yet (netaudit convert EXPORT, or include them):\n{shown}"

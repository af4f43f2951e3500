"""The files of a revision that its boards read, put into a folder of their own.

Which these are is found by their words: every word of a text that names a file of the revision, seen from the folder of the
text, may be read by it.  That takes in all that netlists include, and at times a file too many, but never the whole tree.
"""

from __future__ import annotations

import os
import posixpath
import re
from collections.abc import Iterable
from dataclasses import dataclass, field

from netaudit.failure import InputError
from netaudit.gate.git import Entry, Repository
from netaudit.syntax.reader import LARGEST_FILE, POINTER

_WORD = re.compile(r'"((?:[^"\\\n]|\\.)*)"|\'([^\'\n]*)\'|([^\s"\',;=\[\]{}]+)')
_TEXTS = (".edf", ".edn", ".edif", ".csv")


@dataclass
class Revision:
    """A commit's files below ``top`` (empty, or a folder with ``/`` at its end), by their paths from there.

    ``missing``: submodules whose commits are not here, by their paths.
    """

    repository: Repository
    commit: str
    top: str
    entries: dict[str, Entry] = field(default_factory=dict)
    missing: dict[str, str] = field(default_factory=dict)
    content: dict[str, bytes] = field(default_factory=dict)

    @classmethod
    def read(cls, repository: Repository, revision: str) -> Revision:
        """The revision as seen from the repository's folder: from the nearest folder upwards with a netaudit.toml."""
        commit = repository.commit(revision)
        tree = repository.tree(commit)
        folders = posixpath.normpath(repository.prefix() or ".").split("/")
        above = ["/".join(folders[:k]) for k in range(len(folders), 0, -1) if folders != ["."]]
        top = next((f"{f}/" for f in above if f"{f}/netaudit.toml" in tree), "")
        found = cls(repository, commit, top)
        for path, entry in tree.items():
            if path.startswith(top):
                found.entries[path.removeprefix(top)] = entry
        found._open_submodules()
        return found

    def _open_submodules(self) -> None:
        """Takes in the files of submodules that are checked out here with the commit that is wanted."""
        for path, entry in [(p, e) for p, e in self.entries.items() if e.mode == "160000"]:
            del self.entries[path]
            work_tree = self.repository.call("rev-parse", "--show-toplevel", check=False)[1].decode("utf-8").strip()
            inside = Repository(os.path.join(work_tree, self.top, path))
            own = os.path.isdir(inside.folder) and os.path.exists(os.path.join(inside.folder, ".git"))
            if own and inside.call("cat-file", "-e", f"{entry.oid}^{{commit}}", check=False)[0] == 0:
                for name, deeper in inside.tree(entry.oid).items():
                    if deeper.mode == "160000":
                        self.missing[f"{path}/{name}"] = deeper.oid
                    else:
                        self.entries[f"{path}/{name}"] = deeper
            else:
                self.missing[path] = entry.oid

    def fetch(self, paths: Iterable[str]) -> None:
        """Reads files, one call for all of them."""
        wanted = {p: self.entries[p] for p in paths if p in self.entries and p not in self.content}
        for repository in {e.repository for e in wanted.values()}:
            blobs = Repository(repository).blobs([e.oid for e in wanted.values() if e.repository == repository])
            for path, entry in wanted.items():
                if entry.repository == repository:
                    self.content[path] = self._meant(path, entry, blobs[entry.oid])

    def _meant(self, path: str, entry: Entry, data: bytes) -> bytes:
        """What a link leads to, or a pointer to a large file stands for, where that is here."""
        if entry.mode == "120000":
            target = posixpath.normpath(posixpath.join(posixpath.dirname(path), data.decode("utf-8", "replace")))
            if target not in self.entries or self.entries[target].mode == "120000":
                return data
            self.fetch([target])
            return self.content[target]
        return self._large(data) if data.startswith(POINTER) else data

    def _large(self, pointer: bytes) -> bytes:
        found = re.search(rb"^oid sha256:([0-9a-f]{64})$", pointer, re.MULTILINE)
        if found is None:
            return pointer
        common = self.repository.call("rev-parse", "--git-common-dir")[1].decode("utf-8", "surrogateescape").strip("\n")
        name = found[1].decode("ascii")
        store = os.path.join(self.repository.folder, common, "lfs", "objects", name[:2], name[2:4], name)
        try:
            with open(store, "rb") as stream:
                return stream.read(LARGEST_FILE + 1)
        except OSError:
            return pointer

    def closure(self, paths: Iterable[str]) -> dict[str, bytes]:
        """The files and all that their words name, by their paths.  Raises InputError for what is not here."""
        waiting, done = set(paths), set[str]()
        while waiting:
            self.fetch(waiting)
            done |= waiting
            waiting = {
                other for path in waiting if path in self.content for other in self._named(path) if other not in done
            }
        return {path: self.content[path] for path in done if path in self.content}

    def _named(self, path: str) -> set[str]:
        """The files of the revision that the words of a text name."""
        data = self.content[path]
        if path.lower().endswith(_TEXTS) or b"\0" in data[:8192] or len(data) > LARGEST_FILE:
            return set()
        folder = posixpath.dirname(path)
        found = set()
        for match in _WORD.finditer(data.decode("utf-8", "replace")):
            word = re.sub(r"\\(.)", r"\1", match[1]) if match[1] is not None else match[2] or match[3]
            if word and len(word) < 4096 and not word.startswith("/"):
                for base in {folder, ""}:
                    found.add(posixpath.normpath(posixpath.join(base, word)))
        self._absent(found, path)
        return {name for name in found if name in self.entries}

    def _absent(self, names: set[str], path: str) -> None:
        for name in names:
            for module, commit in self.missing.items():
                if name.startswith(f"{module}/"):
                    raise InputError(
                        f"{path} at {self.commit[:12]} reads {name}, but commit {commit[:12]} of the submodule {module} is "
                        "not here",
                        mend="git submodule update --init, and fetch it there",
                    )


def write(folder: str, files: dict[str, bytes]) -> None:
    """Puts the files into a folder."""
    for path, data in files.items():
        target = os.path.normpath(os.path.join(folder, path))
        if not target.startswith(folder + os.sep):
            # no honest tree holds such a name
            continue
        os.makedirs(os.path.dirname(target), exist_ok=True)
        with open(target, "wb") as stream:
            stream.write(data)

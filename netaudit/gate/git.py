"""A git revision read through the object store: no checkout, no index, no work tree is touched, nothing is fetched.

Only plumbing is called: ``rev-parse``, ``ls-tree``, ``cat-file --batch``, ``for-each-ref``.
"""

from __future__ import annotations

import os
import subprocess
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from netaudit.failure import InputError
from netaudit.syntax.suggest import closest

_QUIET = {"LC_ALL": "C", "GIT_OPTIONAL_LOCKS": "0", "GIT_TERMINAL_PROMPT": "0", "GIT_NO_LAZY_FETCH": "1"}


def _environment() -> dict[str, str]:
    """A hook's environment points at its own repository, which would hide the one of the folder."""
    own = ("GIT_DIR", "GIT_WORK_TREE", "GIT_INDEX_FILE", "GIT_PREFIX", "GIT_COMMON_DIR", "GIT_NAMESPACE")
    return {**{k: v for k, v in os.environ.items() if k not in own}, **_QUIET}


@dataclass(frozen=True)
class Entry:
    """An entry of a tree: ``mode`` 100644, 100755, 120000 (a link) or 160000 (a submodule's commit)."""

    mode: str
    oid: str
    repository: str


@dataclass(frozen=True)
class Repository:
    """A git repository by a folder inside it (or its bare folder)."""

    folder: str

    def call(self, *arguments: str, data: bytes = b"", check: bool = True) -> tuple[int, bytes, str]:
        """Runs git there.  Raises InputError when git is missing or, with ``check``, fails."""
        try:
            done = subprocess.run(
                ["git", "-C", self.folder, *arguments],
                input=data, capture_output=True, check=False, env=_environment(),
            )  # fmt: skip
        except OSError as error:
            raise InputError(f"git cannot be run: {error.strerror}", mend="install git, or compare folders") from None
        said = done.stderr.decode("utf-8", "replace").strip()
        if check and done.returncode != 0:
            raise InputError(
                f"git {arguments[0]}: {said.splitlines()[0] if said else 'failed'}", mend="see git's words"
            )
        return done.returncode, done.stdout, said

    def exists(self) -> str | None:
        """None when this is a repository that git can read, else what git says of it."""
        status, _, said = self.call("rev-parse", "--git-dir", check=False)
        return None if status == 0 else (said.splitlines() or ["not a git repository"])[0].removeprefix("fatal: ")

    def prefix(self) -> str:
        """The folder's path from the top of the work tree, with ``/`` at the end; empty at the top."""
        return self.call("rev-parse", "--show-prefix")[1].decode("utf-8", "surrogateescape").strip("\n")

    def commit(self, revision: str) -> str:
        """The object name of a revision's commit.  Raises InputError that says why there is none."""
        wanted = f"{revision}^{{commit}}"
        status, out, _ = self.call("rev-parse", "--verify", "--quiet", "--end-of-options", wanted, check=False)
        if status == 0 and self.call("cat-file", "-e", wanted, check=False)[0] == 0:
            return out.decode("ascii").strip()
        raise self._no_revision(revision)

    def _no_revision(self, revision: str) -> InputError:
        if self.call("rev-parse", "--verify", "--quiet", "HEAD", check=False)[0] != 0 and not self.names():
            return InputError(f"there is no revision {revision}: this repository has no commits", mend="commit first")
        if self.call("rev-parse", "--is-shallow-repository")[1].strip() == b"true":
            mend = "fetch it first (git fetch --depth=1 origin REVISION), or git fetch --unshallow"
            return InputError(f"the revision {revision} is not in this shallow clone", mend=mend)
        near = closest(revision, self.names())
        mend = f"did you mean {near}?" if near else "fetch it, or name a folder or a saved JSON report"
        return InputError(f"there is no revision, folder or report {revision}", mend=mend)

    def names(self) -> list[str]:
        """Branches and tags, with those of remotes."""
        return self.call("for-each-ref", "--format=%(refname:short)")[1].decode("utf-8", "replace").split()

    def tree(self, commit: str) -> dict[str, Entry]:
        """Every entry of a commit by its path."""
        out = self.call("ls-tree", "-r", "-z", "--full-tree", commit)[1].decode("utf-8", "surrogateescape")
        found = {}
        for line in out.split("\0"):
            if line:
                about, _, path = line.partition("\t")
                mode, _, oid = about.split(" ")
                found[path] = Entry(mode, oid, self.folder)
        return found

    def blobs(self, oids: Sequence[str]) -> Mapping[str, bytes]:
        """The content of objects.  Raises InputError when one is not there."""
        wanted = list(dict.fromkeys(oids))
        if not wanted:
            return {}
        out = self.call("cat-file", "--batch", data="".join(f"{oid}\n" for oid in wanted).encode("ascii"))[1]
        found: dict[str, bytes] = {}
        start = 0
        for oid in wanted:
            end = out.index(b"\n", start)
            words = out[start:end].split()
            if len(words) != 3 or words[1] != b"blob":
                raise InputError(f"object {oid} is not in this repository", mend="fetch it: this clone is not complete")
            size = int(words[2])
            found[oid] = out[end + 1 : end + 1 + size]
            start = end + 1 + size + 1
        return found

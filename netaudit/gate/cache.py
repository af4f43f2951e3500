"""Audits that need not be made again: kept by the content of every file that a board read, by options and by the program.

A folder with two kinds of files: for a board with its options the lists of files that it read, with their SHA-256, and
for each list the audit.  A list that still holds gives the audit; an entry that cannot be read counts as none.
"""

from __future__ import annotations

import contextlib
import hashlib
import json
import os
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from functools import cache as remembered
from pathlib import Path
from typing import Any

from netaudit import __version__
from netaudit.audit.records import Audit
from netaudit.failure import InputError
from netaudit.gate.codec import from_plain
from netaudit.gate.job import Job
from netaudit.parts.policy_file import policy_files
from netaudit.project.project import FILE_NAME
from netaudit.syntax.paths import project_root

#: lists of files that are kept of one board: revisions take turns
_MOST = 8


@dataclass
class Cache:
    """The folder, and the digests of files that were looked at in this run.  Raises InputError when it is not writable."""

    folder: str
    _digests: dict[str, str | None] = field(default_factory=dict)

    def __post_init__(self) -> None:
        probe = os.path.join(self.folder, f"probe.{os.getpid()}.part")
        try:
            os.makedirs(self.folder, exist_ok=True)
            Path(self.folder, ".gitignore").write_text("*\n", encoding="utf-8")
            with open(probe, "w", encoding="utf-8"):
                pass
            os.unlink(probe)
        except OSError as error:
            raise _unwritable(self.folder, error) from None

    def find(self, job: Job) -> Audit | None:
        """The audit of a job of which nothing has changed; None when it must be made."""
        key = _key(job)
        for files, name in self._lists(key):
            if all(self._digest(_real(job, path)) == digest for path, digest in files.items()):
                with contextlib.suppress(OSError, ValueError, TypeError, KeyError, IndexError, AttributeError):
                    return from_plain(json.loads(Path(self.folder, name).read_bytes()))
        return None

    def keep(self, job: Job, plain: Any, files: Mapping[str, str]) -> None:
        """Keeps an audit (as plain values) with the files that it was made from."""
        key = _key(job)
        listed = json.dumps(dict(files), sort_keys=True)
        name = f"{key}-{hashlib.sha256(listed.encode()).hexdigest()[:16]}.json"
        lists = [(f, n) for f, n in self._lists(key) if n != name]
        self._write(name, json.dumps(plain, separators=(",", ":")))
        self._write(f"{key}.json", json.dumps([[dict(files), name], *([f, n] for f, n in lists[: _MOST - 1])]))
        for _, old in lists[_MOST - 1 :]:
            with contextlib.suppress(OSError):
                os.unlink(os.path.join(self.folder, old))

    def _lists(self, key: str) -> Iterator[tuple[dict[str, str], str]]:
        """The lists of files of a board, the newest first, with the names of their audits."""
        with contextlib.suppress(OSError, ValueError, TypeError):
            found = json.loads(Path(self.folder, f"{key}.json").read_bytes())
            good = [
                (dict(files), name)
                for files, name in found
                if isinstance(name, str) and name.startswith(f"{key}-") and os.path.basename(name) == name
            ]
            yield from good

    def _digest(self, path: str) -> str | None:
        if path not in self._digests:
            self._digests[path] = digest(path)
        return self._digests[path]

    def _write(self, name: str, text: str) -> None:
        path = os.path.join(self.folder, name)
        temporary = f"{path}.{os.getpid()}.part"
        try:
            Path(temporary).write_text(text, encoding="utf-8")
            os.replace(temporary, path)
        except OSError as error:
            raise _unwritable(self.folder, error) from None
        finally:
            with contextlib.suppress(OSError):
                os.unlink(temporary)


def _unwritable(folder: str, error: OSError) -> InputError:
    return InputError(
        f"the cache {folder} cannot be written: {error.strerror}", mend="name another cache, or go without: --no-cache"
    )


def digest(path: str) -> str | None:
    """SHA-256 of a file; None when it cannot be read."""
    try:
        return hashlib.sha256(Path(path).read_bytes()).hexdigest()
    except OSError:
        return None


def _key(job: Job) -> str:
    """What an audit depends on besides the content of files."""
    said = (
        __version__, program(), job.name, _root(job), job.tables, job.changes, _policy(job), job.nominal, job.modes,
        job.plan,
    )  # fmt: skip
    return hashlib.sha256(repr(said).encode()).hexdigest()[:32]


def _policy(job: Job) -> tuple[str | None, ...]:
    """A shipped policy by its name, one of one's own by what it says."""
    return (Path(job.policy).stem, *(digest(path) for path in policy_files(job.policy)))


def _real(job: Job, path: str) -> str:
    """Where a file lies that reports show without the first prefix, that of the job's own folder."""
    return f"{job.prefixes[0]}{path}" if job.prefixes and not os.path.isabs(path) else path


def _root(job: Job) -> tuple[str, bool]:
    """Where the project's root lies, seen from the netlist, and whether a netaudit.toml stands there: a new one changes
    what the netlist means."""
    root = project_root(job.path, job.root)
    seen = os.path.relpath(root, os.path.dirname(os.path.realpath(job.path)))
    return seen, os.path.lexists(os.path.join(root, FILE_NAME))


@remembered
def program() -> str:
    """A digest of netaudit's own files, so that no audit of an older program is taken for one of this."""
    import netaudit
    from netaudit.syntax.grammar import grammar_text

    folder = Path(netaudit.__file__).parent
    files = [p for p in folder.rglob("*") if p.suffix in (".py", ".toml")]
    total = hashlib.sha256((grammar_text("netlist.lark") + grammar_text("edif.lark")).encode())
    for path in sorted(files):
        total.update(path.relative_to(folder).as_posix().encode())
        total.update(path.read_bytes())
    return total.hexdigest()

"""The project root, below which everything that a netlist names must lie."""

from __future__ import annotations

from pathlib import Path

from netaudit.failure import InputError
from netaudit.place import Place


def project_root(path: str, root: str | None = None) -> str:
    """The stated root, else the nearest folder upwards with ``netaudit.toml``, else a git work tree's root, else the
    netlist's own folder."""
    if root is not None:
        return str(Path(root).resolve())
    folder = Path(path).resolve().parent
    for marker in ("netaudit.toml", ".git"):
        for candidate in (folder, *folder.parents):
            if (candidate / marker).exists():
                return str(candidate)
    return str(folder)


def below_root(name: str, place: Place, root: str) -> str:
    """The path of a file named in a netlist, relative to the file that names it; InputError outside the root."""
    path = (Path(place.file).parent / name) if not Path(name).is_absolute() else Path(name)
    resolved = path.resolve()
    if not resolved.is_relative_to(Path(root)):
        raise InputError(
            f"{name} lies outside the project ({root})", place=place, mend="move it below the root or set --root"
        )
    return str(path)

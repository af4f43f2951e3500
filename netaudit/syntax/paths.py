"""The project root, below which everything that a netlist names must lie."""

from __future__ import annotations

import os
from pathlib import Path

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.quantities.text import shown


def project_root(path: str, root: str | None = None) -> str:
    """The stated root, else the nearest folder upwards with ``netaudit.toml``, else a git work tree's root, else the
    netlist's own folder."""
    if root is not None:
        return str(_resolved(root, None))
    folder = _resolved(path, None).parent
    for marker in ("netaudit.toml", ".git"):
        for candidate in (folder, *folder.parents):
            # unlike the method of Path this never raises
            if os.path.exists(candidate / marker):
                return str(candidate)
    return str(folder)


def below_root(name: str, place: Place, root: str) -> str:
    """The path of a file named in a netlist, relative to the file that names it; InputError outside the root.

    Links are followed before the comparison, so that none leads outside.
    """
    path = Path(place.file).parent / name
    if not _resolved(str(path), place).is_relative_to(root):
        raise InputError(
            f"{shown(name)} lies outside the project ({root})", place=place, mend="move it below the root or set --root"
        )
    return str(path)


def _resolved(path: str, place: Place | None) -> Path:
    """The path without links; a loop of links stays as it is and fails when it is opened."""
    try:
        return Path(os.path.realpath(path))
    except ValueError as error:
        raise InputError(f"{shown(path)} is no name of a file: {error}", place=place, mend="check the name") from None

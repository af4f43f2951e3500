"""What a command works on: the files it was given or the project's boards, and settings from both, the command's first."""

from __future__ import annotations

import argparse
import os
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from netaudit.failure import InputError
from netaudit.finding import Level
from netaudit.project.globs import named_files
from netaudit.project.project import FILE_NAME, Project
from netaudit.project.read import find_project, project_at
from netaudit.syntax.paths import project_root

if TYPE_CHECKING:
    from netaudit.audit.statistics import Plan
    from netaudit.gate.cache import Cache
    from netaudit.gate.job import Job


@dataclass(frozen=True)
class Target:
    """A netlist to work on: its path as the user would name it, the root given for it, and its project if it has one."""

    path: str
    root: str | None
    project: Project | None


def targets(options: argparse.Namespace) -> tuple[Target, ...]:
    """The files named on the command line, or every board of the project that the current folder belongs to."""
    if options.files:
        projects: dict[str, Project | None] = {}
        return tuple(_target(path, options.root, projects) for path in options.files)
    project = project_of(options.root, "name a NETLIST")
    if not project.boards:
        raise InputError(f"{project.file} names no boards", mend='add boards = ["boards/*.netlist"], or name a NETLIST')
    root = project.folder
    return tuple(Target(project.path(name), root, project) for name in named_files(project, "boards", project.boards))


def _target(path: str, root: str | None, projects: dict[str, Project | None]) -> Target:
    folder = project_root(path, root)
    if folder not in projects:
        projects[folder] = project_at(folder)
    return Target(path, root, projects[folder])


def project_of(root: str | None, instead: str) -> Project:
    """The project of a folder (the current one); InputError, with what to do instead, when there is none."""
    project = find_project(os.curdir) if root is None else project_at(root)
    if project is None:
        where = "in this folder or above it" if root is None else f"in {root}"
        raise InputError(f"no {FILE_NAME} stands {where}", mend=f"{instead}, or write one with: netaudit init")
    return project


def jobs_of(options: argparse.Namespace, files: Sequence[Target]) -> tuple[Job, ...]:
    """What to audit, and how: what each project says once is read once.  Raises InputError for what it says wrong."""
    from netaudit.gate.job import Job, Verdict
    from netaudit.gate.waivers import read_waivers
    from netaudit.parts.policy import load_policy

    projects = {target.project.file if target.project else "": target.project for target in files}
    waivers = {name: read_waivers(project) for name, project in projects.items()}
    tables = {name: tables_of(project) for name, project in projects.items()}
    for policy in {policy_name(options, project) for project in projects.values()}:
        # one that is not there is said once, before anything is solved
        load_policy(policy)
    jobs = []
    for target in files:
        project, name = target.project, target.project.file if target.project else ""
        policy = policy_name(options, project)
        board = board_name(project, target.path)
        verdict = Verdict(fail_on(options, project), require_complete(options, project), waivers[name], board)
        jobs.append(
            Job(
                target.path, target.root, tuple(options.changes), policy, nominal(options, project),
                tuple(options.modes), plan_of(options, project), tables[name], verdict=verdict,
            )
        )  # fmt: skip
    return tuple(jobs)


def tables_of(project: Project | None) -> tuple[str, ...]:
    """The paths of a project's part tables."""
    if project is None:
        return ()
    return tuple(project.path(name) for name in named_files(project, "parts", project.parts))


def board_name(project: Project | None, path: str) -> str:
    """A netlist's path from its project's folder, as waivers name it."""
    if project is None:
        return path
    return os.path.relpath(os.path.realpath(path), os.path.realpath(project.folder)).replace(os.sep, "/")


def cache_of(options: argparse.Namespace, files: Sequence[Target]) -> Cache | None:
    """The cache that the command line or the project names."""
    from netaudit.gate.cache import Cache

    if options.no_cache:
        return None
    if options.cache is not None:
        return Cache(options.cache)
    project = files[0].project if files else None
    return Cache(project.path(project.cache)) if project is not None and project.cache is not None else None


def workers_of(options: argparse.Namespace, project: Project | None) -> int:
    """How many boards at a time; 0 stands for every processor."""
    return count_of(stated(options.workers, project, lambda p: p.workers, 1))


def count_of(workers: int | None) -> int:
    """The number behind ``--workers``, 1 where it is not given.  Raises InputError for one that cannot be meant."""
    count = 1 if workers is None else workers
    if not 0 <= count <= 256:
        raise InputError(f"--workers {count}", mend="between 0 and 256")
    return count


def add_cache(command: argparse.ArgumentParser) -> None:
    command.add_argument(
        "--cache", metavar="FOLDER", help="keep the audits of boards there; only changed ones are solved"
    )
    command.add_argument("--no-cache", action="store_true", help="solve every board anew, keep nothing")


def stated(given: Any, project: Project | None, of: Callable[[Project], Any], otherwise: Any) -> Any:
    """The command line's value, else the project's, else what holds without both."""
    if given is not None:
        return given
    return of(project) if project is not None else otherwise


def fail_on(options: argparse.Namespace, project: Project | None) -> Level:
    found: Level = stated(options.fail_on, project, lambda p: p.fail_on, "error")
    return found


def require_complete(options: argparse.Namespace, project: Project | None) -> bool:
    found: bool = stated(options.require_complete, project, lambda p: p.require_complete, False)
    return found


def policy_name(options: argparse.Namespace, project: Project | None) -> str:
    found: str = stated(options.policy, project, lambda p: p.policy, "none")
    return found


def nominal(options: argparse.Namespace, project: Project | None) -> bool:
    found: bool = stated(options.nominal, project, lambda p: p.corners.values == "nominal", False)
    return found


def plan_of(options: argparse.Namespace, project: Project | None) -> Plan | None:
    """The boards to draw; None for none.  Raises InputError for a count that cannot be meant."""
    from netaudit.audit.statistics import Plan

    count: int = stated(options.samples, project, lambda p: p.corners.samples, 0)
    if count < 0 or count > 10_000_000:
        raise InputError(f"--samples {count}", mend="between 0 and 10000000")
    if not count:
        return None
    pairs = tuple(tuple(group.split(",")) for group in options.together) or None
    return Plan(
        count,
        stated(options.seed, project, lambda p: p.corners.seed, 1),
        stated(options.sequence, project, lambda p: p.corners.sequence, "sobol"),
        stated(options.distribution, project, lambda p: p.corners.distribution, "uniform"),
        stated(pairs, project, lambda p: p.corners.together, ()),
    )

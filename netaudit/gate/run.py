"""Boards one after the other, in the order in which they were named; a broken one does not hide the others."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from netaudit.audit.batch import BoardResult
from netaudit.failure import InputError
from netaudit.gate.job import Job, judged, refused, solve


def run_jobs(jobs: Sequence[Job]) -> Iterator[BoardResult]:
    """The results in the order of the jobs."""
    for job in jobs:
        try:
            yield judged(job, solve(job))
        except InputError as error:
            yield refused(job, error)

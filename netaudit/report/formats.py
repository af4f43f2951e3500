"""The formats of ``--report FORMAT=FILE``: a line each.

A module named here has ``render(batch: Batch) -> str``, and is imported when it is asked for.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from importlib import import_module
from typing import cast

from netaudit.audit.batch import Batch


@dataclass(frozen=True)
class Format:
    """``live``: it needs solved boards, not only what was found; such audits do not come from the cache."""

    module: str
    text: str
    live: bool = False

    def render(self, batch: Batch) -> str:
        """The report's text."""
        function = cast(Callable[[Batch], str], import_module(self.module).render)
        return function(batch)


FORMATS: Mapping[str, Format] = {
    "json": Format("netaudit.report.json_report", "all there is, for programs"),
    "sarif": Format("netaudit.report.sarif", "SARIF 2.1.0: findings with rules and places"),
    "junit": Format("netaudit.report.junit", "JUnit XML: a test case a part or expectation"),
    "markdown": Format("netaudit.report.markdown", "a comment for a merge: worst first, details folded"),
    "csv": Format("netaudit.report.csv_text", "the stresses as a table (RFC 4180)"),
}

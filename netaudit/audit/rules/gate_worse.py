"""Worse than the base revision.

``netaudit compare BASE HEAD`` reports a finding that was not there, one whose level rose, and one whose ratio rose by more
than the allowed step (5 % of itself unless netaudit.toml sets ``step``).  Where its limit is 0 the value counts instead.  A
stress that rose inside its limits is listed, and blocks only if the project sets ``stress-step``.

Findings that stood before do not block: what a change made worse does.  A finding is the same one when its rule and its
part are: moved lines, renamed files, and new designators on the same nets change nothing.

Mend: what the finding itself says, or a reviewed waiver.

Source: common practice of merge gates.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("gate/worse", "error", "gate", "a finding that the base revision did not have, or had less badly")

"""No operating point was found.

Newton's method and every remedy behind it (damping, supply continuation, pseudo-transient) ended without a point that
satisfies Kirchhoff's law.  The finding names the net with the largest unbalanced current.  A mode without an
operating point never passes.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/none-found", "error", "point", "no operating point was found")

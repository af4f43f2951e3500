"""No operating point was found.

Newton's method and every remedy behind it (damping, supply continuation, pseudo-transient) ended without a point that
satisfies Kirchhoff's law, at nominal values or at a corner.  The finding names the net with the largest unbalanced
current.  A mode without an operating point never passes.

Mend: look at the parts on that net: a value with the wrong prefix, a source without a path.

Source: no result without Kirchhoff's current law and Tellegen's theorem, recomputed from the pin currents.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/none-found", "error", "point", "no operating point was found")

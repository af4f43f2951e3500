"""Power against P_tot at the temperature.

The heat of a part against P_tot, which falls linearly with the ambient temperature: full up to T_ref (25 degC;
resistors 70 degC), zero at T_j (resistors T_max, 155 degC).

    P <= P_tot (T_j - T_a) / (T_j - T_ref)

A P_tot that refers to the case (R_th_jc stated, R_th_ja not) needs a heat path.  Mend: a larger part, or less
current.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/power", "error", "stress", "power against P_tot at the temperature")

"""Power against P_tot at the temperature.

The heat of a part against P_tot, which falls linearly with the ambient temperature: full up to T_ref (25 degC;
resistors 70 degC), zero at T_j (resistors T_max, 155 degC).

    P <= P_tot (T_j - T_a) / (T_j - T_ref)

P_tot by pairs ("250mW @ 25degC") is followed as stated.  A P_tot that refers to the case (R_th_jc stated, R_th_ja not)
needs a heat path, and counts with the case's temperature.

Mend: a larger part, several in series, or less current.

Source: linear derating, common practice of semiconductor and resistor data sheets; 70 degC and 155 degC are the common
values of film resistors.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V 9V..15V +:V -:GND
        R1 resistor 100R 10% P_tot=2W 1:V 2:GND

    passes:
        PS1 supply 12V 9V..15V +:V -:GND
        R1 resistor 100R 10% P_tot=3W 1:V 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/power", "error", "stress", "power against P_tot at the temperature")

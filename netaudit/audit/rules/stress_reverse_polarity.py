"""Reverse voltage on a polarised capacitor.

More than 10 mV beyond the reverse voltage V_rev that a capacitor written with + and - allows (0 unless stated).

Mend: turn it round, or use one without polarity.

Source: common practice of electrolytic and tantalum capacitors.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        C1 capacitor 10u V_R=25V +:GND -:V

    passes:
        PS1 supply 12V +:V -:GND
        C1 capacitor 10u V_R=25V +:V -:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/reverse-polarity", "error", "stress", "reverse voltage on a polarised capacitor")

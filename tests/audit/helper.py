"""Boards for tests of the audit: a header that every netlist shares, and findings as sets."""

from __future__ import annotations

import netaudit
from netaudit.audit.records import Audit, Stress
from netaudit.finding import Finding

HEAD = "netlist 1\nground GND\nambient 25degC\n"
LED = "led I_S=1e-18A n=2 I_F=25mA V_R=5V P_tot=75mW T_j=100degC R_th_ja=450K/W"
DIODE = "diode I_S=1nA n=1.8 I_F=1A V_R=100V"
ZENER = "zener V_Z=5.1V I_Z=5mA r_Z=20ohm I_ZK=1mA I_ZM=90mA P_tot=500mW"
NPN = "npn I_S=1e-14A beta_F=150 beta_R=4 I_C=200mA V_CEO=40V V_EBO=6V P_tot=5W"
NMOS = "nmos V_th=2V K=0.5 I_D=1A V_DS=60V V_GS=20V P_tot=10W"


def audited(text: str, policy: str = "none", nominal: bool = False) -> Audit:
    """The audit of a netlist without its header."""
    return netaudit.loads(HEAD + text).audit(policy, nominal)


def loud(audit: Audit) -> set[tuple[str, str | None, str]]:
    """(rule, device or net, level) of every warning and error."""
    return {(f.rule, f.device or f.net, f.level) for f in audit.findings if f.level != "note"}


def one(audit: Audit, rule: str, mode: str | None = None) -> Finding:
    """The only finding of a rule (in a mode)."""
    (found,) = [f for f in audit.findings if f.rule == rule and mode in (None, f.mode)]
    return found


def stress(audit: Audit, device: str, quantity: str, mode: str = "normal", variant: str | None = None) -> Stress:
    """The only stress of a device and quantity in a mode."""
    (found,) = [
        s for s in audit.stresses if (s.device, s.quantity, s.mode, s.variant) == (device, quantity, mode, variant)
    ]
    return found

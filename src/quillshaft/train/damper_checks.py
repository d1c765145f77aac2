"""What [dampers] and fluid couplings need of other tables."""

from __future__ import annotations

from quillshaft.train.validate import Findings, Rows


def check_dampers(findings: Findings, rows: Rows) -> None:
    """Names that dampers add must be free, and no excitation acts inside a damper."""
    for name, row in rows.keyed["dampers"].items():
        added = f"{name} {'masses' if row.kind == 'pendulum' else 'ring'}"
        if added in rows.declared["stations"]:
            findings.add(("dampers", name), f"its own station would be called {added}, and that name is taken")
    for name, row in rows.keyed["excitations"].items():
        if row.at in rows.declared["dampers"] and row.at not in rows.declared["stations"]:
            allowed = "the station that the damper sits at"
            findings.add(("excitations", name, "at"), "an excitation does not act inside a damper", row.at, allowed)
    for name, row in rows.keyed["couplings"].items():
        if row.kind == "fluid":
            for excitation, other in rows.keyed["excitations"].items():
                if other.at == name:
                    message = "a fluid coupling is no spring, so nothing acts inside it"
                    findings.add(("excitations", excitation, "at"), message, name, "one of its two stations")

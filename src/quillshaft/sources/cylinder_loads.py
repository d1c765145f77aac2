"""Torques of the cylinders of an engine or reciprocating compressor at any speed and load, order by order."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from quillshaft.graph.network import Floats
from quillshaft.records import dataclass
from quillshaft.sources.gas import Complexes
from quillshaft.sources.reciprocating import cylinder_torques, has_torque, machine_orders, turns_of
from quillshaft.train.model import Machine


@dataclass(frozen=True)
class CylinderLoads:
    """Complex amplitudes C_n of every cylinder, the torque being mean + Σ Re(C_n exp(j n θ)) in the crank's own sense.

    orders           (O,) per turn of the crank; turns of a working cycle
    full_nm          (cylinders, O) gas torque at full load [N·m], those dead in the file as they are
    motored_nm       (cylinders, O) of a cylinder that does not fire, or is unloaded
    inertia_kgm2     (cylinders, O) torque of the reciprocating mass over the square of the crank speed
    follows_load     True of an engine: gas torque goes in proportion from motored to full load (common practice);
                     that of a compressor is taken from its cards at every speed and load
    """

    machine: Machine
    orders: Floats
    turns: int
    full_nm: Complexes
    motored_nm: Complexes
    inertia_kgm2: Complexes
    follows_load: bool

    def gas_nm(self, load_share: Floats, dead: int | None = None) -> Complexes:
        """(cylinders, O, S) gas torque [N·m] at shares of full load (S,), with one more cylinder dead (its place)."""
        share = load_share if self.follows_load else np.ones_like(load_share)
        gas = self.motored_nm[:, :, None] + (self.full_nm - self.motored_nm)[:, :, None] * share
        if dead is not None:
            gas[dead] = self.motored_nm[dead][:, None]
        return np.asarray(gas)

    def mass_nm(self, crank_rad_s: Floats) -> Complexes:
        """(cylinders, O, S) torque of the reciprocating masses [N·m] at crank speeds (S,) [rad/s]."""
        return np.asarray(self.inertia_kgm2[:, :, None] * crank_rad_s**2)


def cylinder_loads(machine: Machine) -> CylinderLoads | None:
    """The loads of a machine; None where the file gives neither gas nor mass. Raises CycleError as the cycle does."""
    if not has_torque(machine):
        return None
    unfired = replace(machine, cylinders=tuple(replace(item, dead=True) for item in machine.cylinders))
    full, motored = (cylinder_torques(own, 1.0) for own in (machine, unfired))
    orders = np.array(machine_orders(machine))
    none = np.zeros(len(orders), dtype=complex)
    return CylinderLoads(
        machine,
        orders,
        turns_of(machine),
        np.array([none if item.gas_nm is None else item.gas_nm for item in full]),
        np.array([none if item.gas_nm is None else item.gas_nm for item in motored]),
        np.array([none if item.inertia_nm is None else item.inertia_nm for item in full]),
        machine.kind == "reciprocating-engine",
    )

"""The kinds of quantity that a train file holds: units, what a bare number means, bounds."""

from __future__ import annotations

from quillshaft.records import dataclass


@dataclass(frozen=True)
class Measure:
    """One kind of quantity: its units, what a bare number means, and the bounds that keep absurd numbers out.

    `si_unit` is the unit of a Reading and the target of the conversion; `bare_si` and `bare_us` are None
    where a unit must be given. `low` and `high` are in the SI unit, both allowed. With `pound_is_force`,
    lb is read as lbf where only that gives the wanted dimension.
    """

    name: str
    si_unit: str
    bare_si: str | None
    bare_us: str | None
    pound_is_force: bool
    low: float
    high: float
    example_si: str
    example_us: str


# name | SI unit | bare unit in SI | in US (empty: give a unit) | lb may be lbf | low | high | examples
_MEASURE_ROWS = """
inertia          | kg m^2      | kg m^2      | lbf in s^2     | yes | 0 | 1e9 | 19.6 kg m^2 | 173 lbf in s^2
wr2              | kg m^2      | kg m^2      | lb ft^2        | yes | 0 | 1e9 | 0.7 kg m^2 | 16.6 lb ft^2
gd2              | kg m^2      | kg m^2      |                | no | 0 | 1e9 | 1.8 kg m^2 | 43 lb ft^2
stiffness        | N m/rad     | N m/rad     | lbf in/rad     | yes | 1e-6 | 1e18 | 7.9 MN m/rad | 70e6 lbf in/rad
flexibility      | rad/(N m)   | rad/(N m)   | rad/(lbf in)   | yes | 1e-18 | 1e6 | 0.23e-6 rad/(N m) | 26e-9 rad/(lbf in)
torque           | N m         | N m         | lbf in         | yes | -1e12 | 1e12 | 10 kN m | 88000 lbf in
power            | W           | kW          | hp             | yes | -1e12 | 1e12 | 1120 kW | 1500 hp
heat             | W           | W           | W              | yes | 0 | 1e12 | 620 W | 620 W
speed            | rad/s       | rpm         | rpm            | no | 0 | 104719.75511965978 | 1487 rpm | 1780 rpm
signed_speed     | rad/s       | rpm         | rpm            | no | -104719.75511965978 | 104719.75511965978 | -310 rpm | -310 rpm
speed_rate       | rad/s^2     | rpm/s       | rpm/s          | no | 0 | 1e6 | 60 rpm/s | 60 rpm/s
frequency        | Hz          | Hz          | Hz             | no | 0 | 1e6 | 50 Hz | 60 Hz
signed_frequency | Hz          | Hz          | Hz             | no | -1e6 | 1e6 | -4 Hz | -4 Hz
length           | m           | mm          | in             | no | 0 | 1e4 | 95 mm | 3.75 in
angle            | rad         | deg         | deg            | no | -1e4 | 1e4 | 480 deg | 480 deg
stress           | Pa          | MPa         | psi            | yes | 0 | 1e12 | 850 MPa | 123000 psi
modulus          | Pa          | GPa         | psi            | yes | 1e2 | 1e13 | 79.3 GPa | 11.5e6 psi
pressure         | Pa          |             | psi            | yes | 0 | 1e11 | 155 bar | 2250 psi
density          | kg/m^3      | kg/m^3      | lb/in^3        | no | 1e-2 | 1e5 | 7850 kg/m^3 | 0.283 lb/in^3
mass             | kg          | kg          | lb             | no | 0 | 1e9 | 9.4 kg | 20.7 lb
mesh_stiffness_per_face | N/m^2 |            |                | yes | 1e3 | 1e15 | 20 N/(mm um) | 2.9e6 lbf/(in in)
linear_stiffness | N/m         |             |                | yes | 1e-3 | 1e18 | 1.9 MN/m | 11000 lbf/in
temperature      | K           | degC        | degF           | no | 0 | 5000 | 30 degC | 86 degF
temperature_rise | K           | K           | degF           | no | -5000 | 5000 | 70 K | 126 degF
viscous          | N m s/rad   | N m s/rad   | lbf in s/rad   | yes | 0 | 1e12 | 310 N m s/rad | 2740 lbf in s/rad
signed_viscous   | N m s/rad   | N m s/rad   | lbf in s/rad   | yes | -1e12 | 1e12 | -12 N m s/rad | -106 lbf in s/rad
synchronizing    | W/rad       |             |                | no | 0 | 1e15 | 45 kW/deg | 60 hp/deg
time             | s           | s           | s              | no | 0 | 1e9 | 0.8 s | 0.8 s
share            | unity       | unity       | unity          | no | 0 | 10 | 15 % | 15 %
signed_share     | unity       | unity       | unity          | no | -1 | 10 | -5 % | -5 %
"""  # noqa: E501


def _measure(row: str) -> Measure:
    name, si, bare_si, bare_us, force, low, high, *examples = (cell.strip() for cell in row.split("|"))
    bounds = float(low), float(high)
    return Measure(name, si, bare_si or None, bare_us or None, force == "yes", *bounds, *examples)


MEASURES: dict[str, Measure] = {
    measure.name: measure for measure in map(_measure, _MEASURE_ROWS.strip().splitlines())
} | {"number": Measure("number", "", None, None, False, -1e12, 1e12, "1.13", "1.13")}
"""Every kind of quantity by the name `read_quantity` takes."""

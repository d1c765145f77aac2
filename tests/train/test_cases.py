"""Cases: what is laid over what, what is replaced, and what is said where a case is wrong."""

from __future__ import annotations

import pytest

from quillshaft.train.document import parse_document
from quillshaft.train.model import Train
from quillshaft.train.read import train_of
from train_files import MORE, NAME, TEXT, complaint, edited, screened

CHANGE = "couplings.flex-block = { stiffness = "
CASE = 'couplings.flex-block = { stiffness = "0.19 MN m/rad", psi = 0.9 }'


def with_case(lines: str, text: str = TEXT) -> str:
    return edited(CASE, lines, text)


def train(lines: str, *cases: str, text: str = TEXT) -> Train:
    return train_of(parse_document(with_case(lines, text), NAME), cases or ("new-coupling",))


def test_a_key_of_a_case_replaces_that_key_and_keeps_the_row_s_others():
    before, after = (train(CASE, text=TEXT).couplings[0], train_of(parse_document(TEXT, NAME)).couplings[0])
    assert before.stiffness_nm_rad == pytest.approx(0.19e6, rel=1e-15)
    assert before.between == after.between == ("motor-hub", "gear-hub")
    assert before.tolerance == after.tolerance == (-0.15, 0.15)


@pytest.mark.parametrize(
    ("lines", "expected"),
    [
        ('stations.motor-hub = { wr2 = "1 kg m^2" }', 1.0),
        ('stations.motor-hub = { gd2 = "4 kg m^2" }', 1.0),
        ('stations.gear-hub = { inertia = "1 kg m^2" }', 1.0),
        ('stations.pump-hub = { inertia = "1 kg m^2" }', 1.0),
    ],
)
def test_one_spelling_of_an_inertia_replaces_the_other(lines, expected):
    name = lines.split(".")[1].split(" ")[0]
    found = next(station for station in train(lines).stations if station.name == name)
    assert found.inertia_kgm2 == pytest.approx(expected, rel=1e-15)


@pytest.mark.parametrize("name", ["wheel-shaft", "pump-shaft", "pinion-shaft", "motor-end"])
@pytest.mark.parametrize(
    ("spelling", "stiffness"),
    [('stiffness = "2 MN m/rad"', 2e6), ('flexibility = "0.5e-6 rad/(N m)"', 2e6),
     ('equivalent = { length = "1 m", diameter = "100 mm" }', None),
     ('pieces = [{ od = "100 mm", length = "1 m" }]', None)],
)  # fmt: skip
def test_one_spelling_of_a_stiffness_replaces_any_other(name, spelling, stiffness):
    drop = 'material = "steel"\n'
    found = next(
        item for item in train(f"shafts.{name} = {{ {spelling} }}", text=edited(drop, "")).shafts if item.name == name
    )
    given = [found.stiffness_nm_rad is not None, found.equivalent is not None, bool(found.pieces)]
    assert given.count(True) == 1
    assert found.stiffness_nm_rad == (stiffness if stiffness is None else pytest.approx(stiffness, rel=1e-15))


def test_an_order_replaces_a_frequency_and_psi_a_loss_factor():
    changed = train("excitations.interharmonic = { order = 3 }\ncouplings.flex-block = { loss-factor = 0.1 }")
    pulse = next(item for item in changed.excitations if item.name == "interharmonic")
    assert (pulse.order, pulse.frequency_hz) == (3.0, 0.0)
    assert changed.couplings[0].loss_factor == pytest.approx(0.1, rel=1e-15)


def test_omit_leaves_an_element_out_and_a_new_row_adds_one():
    changed = train('excitations.interharmonic = { omit = true }\nexcitations.new = { at = "wheel", order = 4 }')
    assert [item.name for item in changed.excitations] == ["process-pulse", "new"]


def test_plain_tables_are_overlaid_key_by_key():
    changed = train(
        'operation.rated = "1480 rpm"\ntrain.title = "Other"\n"excitations-off"."motor-core 2x" = "no misalignment"'
    )
    assert changed.title == "Other"
    assert changed.tag == "BP-310B"
    assert list(changed.excitations_off) == ["pump-hub 2x", "motor-core 2x"]


def test_cases_are_laid_in_turn_and_the_later_wins():
    text = TEXT + '[cases.soft]\ncouplings.flex-block = { stiffness = "0.1 MN m/rad" }\n'
    one = train_of(parse_document(text, NAME), ("new-coupling", "soft")).couplings[0]
    two = train_of(parse_document(text, NAME), ("soft", "new-coupling")).couplings[0]
    assert (one.stiffness_nm_rad, two.stiffness_nm_rad) == pytest.approx((0.1e6, 0.19e6), rel=1e-15)
    assert one.loss_factor == two.loss_factor == pytest.approx(0.9 / (2 * 3.141592653589793), rel=1e-15)


def test_the_base_is_untouched_by_a_case():
    document = parse_document(TEXT, NAME)
    train_of(document, ("new-coupling",))
    assert train_of(document).couplings[0].stiffness_nm_rad == pytest.approx(0.145e6, rel=1e-15)


def test_a_case_gives_its_name_and_reason_and_changes_the_frequencies():
    changed, base = screened(TEXT, "new-coupling"), screened(TEXT)
    assert (changed.train.cases, changed.train.cases_because) == (
        ("new-coupling",),
        ("replacement element, harder grade",),
    )
    assert changed.modes[0].frequency_hz > base.modes[0].frequency_hz


WRONG = [
    ("couplings.flexblock = { psi = 0.9 }", 'so this row must be complete; did you mean "flex-block"?'),
    ('machines.pmp = { vanes = 5 }', 'so this row must be complete; did you mean "pump"?'),
    ('stations.impelller = { entrained = "20 %" }', 'so this row must be complete; did you mean "impeller"?'),
    ("gears.reducton = { teeth = [31, 77] }", 'so this row must be complete; did you mean "reduction"?'),
    ("couplings.flexblock = { omit = true }", 'there is no flexblock to leave out; did you mean "flex-block"?'),
    ("couplings.flex-block = { omit = 1 }", "couplings.flex-block.omit = 1: does not leave the element out"),
    ("couplings.flex-block = { omit = true, psi = 1.0 }", "omit = true leaves the element out, and psi with it"),
    ("cuplings.flex-block = { psi = 1.0 }", 'a case cannot change a table of this name; did you mean "couplings"?'),
    ("schema = 1", "a case cannot change a table of this name"),
    ("couplings.flex-block = 5", "couplings.flex-block = 5: is not a row of keys and values"),
    ("couplings = 5", "couplings = 5: is not a table of named rows"),
    ('power.motor-core = "1 foo"', 'power.motor-core = "1 foo": unknown unit "foo"'),
    ("operation.ratd = 5", 'operation.ratd: is not a key of this table; did you mean "rated"?'),
    ("shafts.pinion-shaft = { pieces = [\n { od = 95, length = 1 },\n { od = 9 } ] }", "pieces[2].length: is missing"),
    ("gears.reduction = { teeth = [29, 2] }", "gears.reduction.teeth[2] = 2: must be at least 3"),
    ('stations.motor-hub = { inertia = "1 kg", wr2 = "1 kg m^2" }', 'stations.motor-hub.inertia = "1 kg"'),
]  # fmt: skip


@pytest.mark.parametrize(("lines", "said"), WRONG, ids=[lines[:30] for lines, _ in WRONG])
def test_a_mistake_in_a_case_is_found_in_the_lines_of_the_case(lines, said):
    text = complaint(with_case(lines), "new-coupling")
    assert said in text
    where = 60 if "pieces[2]" in said else 58
    assert f"{NAME}:{where}: [cases.new-coupling]" in text
    assert complaint(with_case(lines)) == ""


def test_an_unknown_case_names_the_nearest_and_all_there_are():
    said = complaint(TEXT, "newcoupling")
    assert said == f'{NAME}:56: there is no case "newcoupling"; did you mean "new-coupling"? Allowed: new-coupling.'
    assert "this file has no cases" in complaint(TEXT[: TEXT.index("[cases")], "x")


def test_a_case_that_changes_nothing_or_is_laid_twice_is_refused():
    assert "this case changes nothing." in complaint(with_case(""), "new-coupling")
    assert "this case changes nothing." in complaint(with_case("couplings.flex-block = { psi = 1.1 }"), "new-coupling")
    assert "this case is laid twice." in complaint(TEXT, "new-coupling", "new-coupling")
    again = TEXT + "[cases.again]\ncouplings.flex-block = { psi = 0.9 }\n"
    assert "changes nothing after the cases before it" in complaint(again, "new-coupling", "again")


def test_a_station_that_a_case_leaves_out_is_said_to_be_left_out_wherever_it_is_named():
    said = complaint(with_case("stations.impeller = { omit = true }"), "new-coupling")
    assert said.count("the case leaves the station impeller out, but it is still named here") == 4
    assert "did you mean" not in said


def test_a_mistake_of_the_base_stays_where_it_is_when_a_case_changes_another_key_of_the_row():
    said = complaint(
        edited('id = "30 mm"', 'id = "300 mm"', with_case('shafts.pinion-shaft = { note = "x" }')), "new-coupling"
    )
    assert f"{NAME}:29: [shafts.pinion-shaft] pieces[2].id" in said


def test_omit_outside_a_case_says_where_it_belongs():
    said = complaint(edited('motor-hub  = { inertia = "0.74 kg m^2" }', "motor-hub = { omit = true }"))
    assert "omit: leaves an element out, and only a case can do that" in said


@pytest.mark.parametrize(
    "lines", ["ties.grid = { stiffness = 6000 }", "dismissals.v = { mode = 2 }", "materials.own = { density = 7700 }"]
)
def test_rows_of_every_table_can_be_changed(lines):
    assert complaint(with_case(lines, TEXT + MORE), "new-coupling") == ""

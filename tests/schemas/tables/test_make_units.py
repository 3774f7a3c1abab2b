"""The table of units against its own generator."""

from fractions import Fraction

import pint
import pytest

from schemas.tables import make_units


@pytest.fixture(scope="module")
def made():
    return make_units.table()


def test_the_committed_table_is_what_its_list_makes(made):
    assert (make_units.FOLDER / "units.json").read_text(encoding="utf-8") == make_units.written(made)


def test_no_two_dimensions_are_one(made):
    registry = pint.UnitRegistry()
    atoms = make_units.read_atoms(_listed())
    physical = set()
    for dimension in made["dimensions"]:
        unit = registry.Quantity(1.0, "")
        for name, power in make_units.factors(dimension["si"]):
            unit = unit * registry.parse_expression(atoms[name].expression) ** power
        physical.add(str(unit.dimensionality))
    assert len(physical) == len(made["dimensions"])


def test_a_unit_of_another_dimension_stops_the_generator():
    listed = _listed()
    atoms = make_units.read_atoms(listed)
    with pytest.raises(pint.DimensionalityError):
        make_units.exact_size("eV", "m", atoms, pint.UnitRegistry(non_int_type=make_units.Decimal))


def test_two_units_with_one_spelling_stop_the_generator(monkeypatch):
    listed = _listed()
    listed["dimension"][1]["units"].append(["km", "", "nm"])
    monkeypatch.setattr(make_units.tomllib, "loads", lambda text: listed)
    with pytest.raises(ValueError, match="'nm' is a spelling of 'nm' and of 'km'"):
        make_units.table()


@pytest.mark.parametrize(
    ("size", "divisor"),
    [(Fraction(1, 10**9), 1e9), (Fraction(10**6), None), (Fraction(1), None), (Fraction(1, 10**22), 1e22)],
)
def test_a_power_of_ten_is_kept_in_the_form_that_a_double_holds_exactly(size, divisor):
    assert make_units.divisor(size) == divisor


def _listed():
    return make_units.tomllib.loads((make_units.FOLDER / "units.toml").read_text(encoding="utf-8"))

"""Provenance: every value says where it comes from, every key exists, tables keep their size and sums."""

import csv
from dataclasses import fields

import pytest

from retrofit.refrigerants import STATUSES, Value, designations, find, source
from retrofit.refrigerants.tables import FOLDER, read_disputes, read_sources, read_table

TABLES = ("substances", "blends", "safety", "environment", "boiling", "use")


@pytest.mark.parametrize("name", designations())
def test_every_value_has_source_and_basis(name):
    """What is stated has a source and a basis, and a confidence exactly when from memory."""
    for field, value in find(name).values().items():
        if value.value is not None:
            assert value.source in read_sources(), field
            assert value.basis in ("read", "computed", "memory"), field
        assert (value.confidence != "") == (value.basis == "memory"), field
        assert value.status == "" or value.status in STATUSES, field


@pytest.mark.parametrize("name", designations())
def test_basis_is_the_one_of_the_source(name):
    """A value is read, computed or remembered as its source says, so memory is never shown as read."""
    for value in find(name).values().values():
        if value.source:
            assert value.basis == source(value.source).basis
            assert value.confidence == source(value.source).confidence


@pytest.mark.parametrize("table", TABLES)
def test_every_key_of_a_table_exists_and_goes_with_a_value(table):
    """A source cell holds known keys, and it is filled exactly when its value cell is."""
    units, rows = read_table(table)
    for column in [column for column in units if column.endswith("_source")]:
        for name, row in rows.items():
            assert bool(row[column]) == bool(row[column.removesuffix("_source")]), (name, column)
            assert all(key in read_sources() for key in row[column].split("; ") if key), (name, column)


def test_bibliography_is_complete():
    """Each source tells what was taken and how it was read; memory has a confidence, others have none."""
    for entry in read_sources().values():
        assert all((entry.title, entry.edition, entry.publisher, entry.kind, entry.taken, entry.how)), entry.key
        assert (entry.confidence != "") == (entry.basis == "memory"), entry.key


def test_every_data_file_is_read_in_full():
    """Each CSV row has as many cells as its head, and no designation occurs twice."""
    for table in TABLES:
        with (FOLDER / f"{table}.csv").open(encoding="utf-8", newline="") as file:
            rows = list(csv.reader(file))
        assert {len(row) for row in rows} == {len(rows[0])}, table
        assert len({row[0] for row in rows}) == len(rows), table


# Pinned: our own transcription counted and added up once; proves that no cell went lost, not that it is true.
@pytest.mark.parametrize(
    ("table", "column", "count", "total"),
    [
        ("substances", "molar_mass", 48, 4866.191),
        ("safety", "lfl_mass", 27, 4.675),
        ("safety", "lfl_volume", 3, 24.3),
        ("safety", "rcl_volume", 100, 4404420.0),
        ("safety", "rcl_mass", 100, 18510.52),
        ("safety", "oel", 104, 92695.0),
        ("safety", "practical_limit", 94, 23.93985),
        ("safety", "atel_odl", 87, 21.69832),
        ("safety", "autoignition", 27, 15778.0),
        ("environment", "odp", 47, 15.67247),
        ("environment", "gwp_100yr_ar4", 46, 133795.857),
        ("environment", "gwp_100yr_ar5", 37, 123726.1462),
        ("environment", "gwp_100yr_ar6", 36, 142479.551),
        ("environment", "gwp_eu_2024_573", 31, 68189.206),
        ("environment", "gwp_us_aim", 25, 39121.3),
        ("boiling", "bubble_1atm", 117, -4196.31),
        ("boiling", "dew_1atm", 70, -2671.72),
    ],
)
def test_count_and_sum_of_a_column(table, column, count, total):
    """A numeric column keeps its number of plain figures and their sum (pinned)."""
    rows = read_table(table).rows.values()
    figures = [float(row[column]) for row in rows if row[column] and row[column][0] not in "NCS<>"]

    assert len(figures) == count
    assert sum(figures) == pytest.approx(total, abs=1e-6)


def test_number_of_refrigerants():
    """The catalogue holds 47 single substances, 1 that is only a component, and 72 blends (pinned)."""
    kinds = [find(name).kind for name in designations()]

    assert [kinds.count(kind) for kind in ("single", "component", "blend")] == [47, 1, 72]
    for table in ("safety", "boiling", "use"):
        assert set(read_table(table).rows) == set(designations())


@pytest.mark.parametrize("name", designations())
def test_composition_sums_to_one(name):
    """Mass fractions sum to 1, and each component is itself a single substance of the catalogue."""
    composition = find(name).composition

    assert sum(fraction for _, fraction in composition) == pytest.approx(1.0, abs=1e-9)
    assert all(find(part).composition == ((part, 1.0),) for part, _ in composition)


@pytest.mark.parametrize("name", designations())
def test_tolerances_go_with_the_components(name):
    """Where tolerances are stated there is one for each component."""
    refrigerant = find(name)
    stated = refrigerant.tolerances_mass_pct.text

    assert not stated or len(stated.split("/")) == len(refrigerant.composition)


def test_disputes_name_known_refrigerants_and_fields():
    """Each dispute belongs to a known refrigerant and a value field, and stands in that value's note."""
    known = set(find("R22").values())
    for name, disputes in read_disputes().items():
        for dispute in disputes:
            assert dispute.field in known
            assert dispute.status in ("kept", "unresolved")
            assert dispute.text in getattr(find(name), dispute.field).note


def test_values_lists_every_value_field():
    """values() holds every field that is a value, for tables of provenance."""
    refrigerant = find("R32")
    expected = [field.name for field in fields(refrigerant) if isinstance(getattr(refrigerant, field.name), Value)]

    assert list(refrigerant.values()) == expected


@pytest.mark.parametrize("name", [name for name in designations() if find(name).cas])
def test_cas_number_has_its_check_digit(name):
    """The last digit of a CAS number is the weighted sum of the others modulo 10 (rule of the registry)."""
    *digits, check = (int(letter) for letter in find(name).cas if letter.isdigit())
    weighted = sum(place * digit for place, digit in enumerate(reversed(digits), start=1))

    assert weighted % 10 == check

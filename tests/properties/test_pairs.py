"""Pairs of components the library has no fit for: estimated, named, and never leaking into another blend."""

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from retrofit.properties import fluid
from retrofit.properties.components import is_pair_in_library, mixture_of, provide_pairs
from retrofit.refrigerants import find

TOP = Path(__file__).parents[2]
# Each shares a pair or a component with another: R125/R601a in the first two, R22 and R124 in the next two.
NAMES = ("R424A", "R426A", "R401A", "R409A", "R22", "R410A", "R404A")
CODE = """
import hashlib, json, sys
from retrofit.properties import fluid
found = {}
for name in sys.argv[1:]:
    f = fluid(name)
    tables = f.tables.arrays()
    digest = hashlib.blake2b(b"".join(tables[key].tobytes() for key in sorted(tables))).hexdigest()
    found[name] = [digest, [list(pair) for pair in f.estimated_pairs]]
print(json.dumps(found))
"""


def _built_in_order(names, folder):
    environment = os.environ | {"RETROFIT_STORE": str(folder), "PYTHONPATH": str(TOP)}
    command = [sys.executable, "-c", CODE, *names]
    return json.loads(subprocess.run(command, env=environment, capture_output=True, text=True, check=True).stdout)


@pytest.fixture(scope="module")
def orders(tmp_path_factory):
    """The same blends built in one order and in the other, each order in a process and a store of its own."""
    return [_built_in_order(names, tmp_path_factory.mktemp("order")) for names in (NAMES, NAMES[::-1])]


@pytest.mark.parametrize("name", NAMES)
def test_order_of_building_changes_nothing(orders, name):
    """Every table is the same to the last bit, and so are the estimated pairs, whatever was built before."""
    first, second = orders

    assert first[name] == second[name]


@pytest.mark.parametrize(
    ("name", "pairs"),
    [
        ("R424A", [["R125", "R601a"], ["R134a", "R601a"]]),
        ("R426A", [["R125", "R601a"], ["R134a", "R601a"]]),
        ("R401A", [["R22", "R124"], ["R152a", "R124"]]),
        ("R409A", [["R22", "R124"]]),
        ("R22", []),
        ("R410A", []),
        ("R404A", []),
    ],
)
def test_estimated_pairs_are_named(orders, name, pairs):
    """A blend names the pairs estimated for it, also if another blend had them estimated before, and no others."""
    for order in orders:
        assert order[name][1] == pairs


def test_an_estimated_pair_never_looks_fitted():
    """Once estimated, a pair is still reported as missing from the library."""
    mixture = mixture_of("R401A")
    first = provide_pairs(mixture)

    assert provide_pairs(mixture) == first == (("R22", "R124"), ("R152a", "R124"))
    assert not is_pair_in_library("R124", "R22")
    assert is_pair_in_library("R125", "R32")


@pytest.mark.parametrize("name", ["R410A", "R448A", "R404A", "R513A", "R515B"])
def test_fully_fitted_blends_report_none(name):
    """A blend with all pairs fitted reports none, though this session has estimated others."""
    provide_pairs(mixture_of("R438A"))

    assert fluid(name).estimated_pairs == ()
    assert provide_pairs(mixture_of(name)) == ()


@pytest.mark.parametrize("name", ["R404A", "R448A", "R515B", "R134a"])
def test_composition_is_the_catalogue_s(name):
    """The mixture has the catalogue's components and mass fractions, adding up to one."""
    mixture, entry = mixture_of(name), find(name)

    assert mixture.components == tuple(part for part, _ in entry.composition)
    assert sum(mixture.mass_fractions) == pytest.approx(1.0, abs=1e-12)
    assert mixture.mass_fractions == pytest.approx([share for _, share in entry.composition], abs=1e-5)


@pytest.mark.parametrize(
    ("name", "grams_per_mol"), [("R404A", 97.6), ("R407C", 86.2), ("R410A", 72.6), ("R507A", 98.9)]
)
def test_molar_mass_of_blends(name, grams_per_mol):
    """Molar masses as printed in the designation tables of blends (ASHRAE Handbook Fundamentals 2021, ch. 29, Table 2;
    from memory), to the printed tenth."""
    assert fluid(name).molar_mass_kg_per_mol * 1e3 == pytest.approx(grams_per_mol, abs=0.051)

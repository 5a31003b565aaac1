"""Molar mass, CAS number, composition and class against the open property library's own records."""

import CoolProp.CoolProp as CoolProp
import pytest

from retrofit.refrigerants import designations, find

# Spelt otherwise in the library.
SPELT = {
    "R1224yd(Z)": "R1224YDZ",
    "RE170": "DimethylEther",
    "R50": "Methane",
    "R718": "Water",
    "R744": "CarbonDioxide",
}
ABSENT = ("R1132a", "R1130(E)", "R13B1")
SINGLES = [name for name in designations() if find(name).kind != "blend" and name not in ABSENT]
# Predefined there, but not loadable: a binary pair or R1132a is missing.
NOT_LOADABLE = {
    *("R401A", "R402A", "R406A", "R408A", "R409A", "R424A", "R426A", "R437A", "R438A", "R453A", "R458A"),
    *("R468A", "R473A"),
}
PREDEFINED = CoolProp.get_global_param_string("predefined_mixtures").split(",")
MIXTURES = [name for name in designations() if f"{name}.mix" in PREDEFINED and name not in NOT_LOADABLE]
# The library's classes are older than class 2L, or were never filled in.
OLD_CLASS = {"R32": "A2", "R143a": "A2", "R717": "B2"}
UNFILLED = ("UNKNOWN", "", "?")


def _library_class(name):
    return CoolProp.get_fluid_param_string(SPELT.get(name, name), "ASHRAE34")


@pytest.mark.parametrize("name", SINGLES)
def test_molar_mass_and_cas(name):
    """Molar mass agrees to the three printed decimals of g/mol, and the CAS number is the library's."""
    fluid = SPELT.get(name, name)

    assert find(name).molar_mass_kg_per_mol.value == pytest.approx(CoolProp.PropsSI("M", fluid), abs=0.51e-6)
    assert find(name).cas == CoolProp.get_fluid_param_string(fluid, "CAS")


@pytest.mark.parametrize("name", MIXTURES)
def test_composition_of_predefined_mixture(name):
    """Mass fractions agree with the library's predefined mixture within half of the 0.1 mass % printed."""
    state = CoolProp.AbstractState("HEOS", f"{name}.mix")
    names = state.fluid_names()
    theirs = {
        CoolProp.get_fluid_param_string(fluid, "CAS"): share
        for fluid, share in zip(names, state.get_mass_fractions(), strict=True)
    }

    assert len(theirs) == len(find(name).composition)
    for part, fraction in find(name).composition:
        assert fraction == pytest.approx(theirs[find(part).cas], abs=5e-4)


@pytest.mark.parametrize("name", [name for name in SINGLES if _library_class(name) not in UNFILLED])
def test_class_where_the_library_has_one(name):
    """The class is the library's wherever it has one and it is not older than class 2L."""
    assert OLD_CLASS.get(name, find(name).safety_class.value) == _library_class(name)

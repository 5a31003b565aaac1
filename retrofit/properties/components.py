"""From a designation to the property library's components: names, mole fractions and pair models."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import Any

from retrofit.errors import NoModelError
from retrofit.refrigerants import Refrigerant, find

# Spelled differently in the property library than in the designation standard.
LIBRARY_NAMES = {"R1224yd(Z)": "R1224YDZ"}
# Refrigerants the property library (CoolProp 8.0.0) has no equation of state for.
NOT_IN_LIBRARY = {"R1132a", "R13B1"}


@dataclass(frozen=True)
class Mixture:
    """A refrigerant as the property library sees it.

    Attributes:
        designation: Catalogue designation.
        components: Catalogue designations of the components.
        mass_fractions: Mass fraction of each component, adding up to 1.
    """

    designation: str
    components: tuple[str, ...]
    mass_fractions: tuple[float, ...]

    @property
    def is_pure(self) -> bool:
        """Return whether there is one component only."""
        return len(self.components) == 1

    @property
    def library_names(self) -> tuple[str, ...]:
        """Return the names the property library knows the components by."""
        return tuple(LIBRARY_NAMES.get(name, name) for name in self.components)


def mixture_of(refrigerant: Refrigerant | str) -> Mixture:
    """Return the composition of a catalogue refrigerant for the property library.

    Args:
        refrigerant: Catalogue entry or designation.
    Returns: The mixture; a pure fluid has one component.
    Raises: NoModelError if a component is not in the property library; UnknownRefrigerantError.
    """
    entry = find(refrigerant) if isinstance(refrigerant, str) else refrigerant
    missing = [name for name, _ in entry.composition if name in NOT_IN_LIBRARY]
    if missing:
        raise NoModelError(
            f"{entry.designation} cannot be modelled: the property library has no equation of state for "
            f"{' and '.join(missing)}; only its catalogue values are shown"
        )
    total = sum(fraction for _, fraction in entry.composition)
    return Mixture(
        entry.designation,
        tuple(name for name, _ in entry.composition),
        tuple(fraction / total for _, fraction in entry.composition),
    )


@cache
def is_pair_in_library(first: str, second: str) -> bool:
    """Return whether the library holds a fitted model for two components (library names).

    The answer is kept: estimating a pair changes the library for the whole process, and a pair once
    estimated would afterwards look like a fitted one.
    """
    from CoolProp.CoolProp import AbstractState

    try:
        AbstractState("HEOS", f"{first}&{second}")
    except ValueError as error:
        if "binary pair" not in str(error):
            raise
        return False
    return True


@cache
def _estimate_pair(first: str, second: str) -> None:
    """Give the library ideal combining rules (Lorentz-Berthelot) for a pair it has no fit for."""
    from CoolProp import CoolProp

    library: Any = CoolProp
    numbers = [library.get_fluid_param_string(name, "CAS") for name in (first, second)]
    library.apply_simple_mixing_rule(*numbers, "Lorentz-Berthelot")


def provide_pairs(mixture: Mixture) -> tuple[tuple[str, str], ...]:
    """Make every pair of a mixture available and return those that had to be estimated.

    Args:
        mixture: The mixture to be modelled.
    Returns: Estimated pairs as catalogue designations, in the order of the composition.
    """
    names = mixture.library_names
    estimated = []
    for j in range(len(names)):
        for i in range(j):
            first, second = sorted((names[i], names[j]))
            if not is_pair_in_library(first, second):
                _estimate_pair(first, second)
                estimated.append((mixture.components[i], mixture.components[j]))
    return tuple(estimated)

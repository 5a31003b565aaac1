"""Numbers of a study against the same cycle written out with the property library's own flashes."""

import pytest
from CoolProp.CoolProp import PT_INPUTS, QT_INPUTS, AbstractState, iphase_gas, iphase_liquid
from scipy.optimize import brentq

from retrofit.study import compare

KELVIN = 273.15
RELATIVE = 1e-4  # stated accuracy of the tables in pressures, COP and volumetric capacity
DISCHARGE_K = 0.05  # and in the discharge temperature
# Condensing at 35 degC, since near 42 degC the library's own flash of R410A at the bubble point fails.
USEFUL_K, LINE_K, SUBCOOLING_K, ISENTROPIC, T_EVAP_K, T_COND_K = 7.0, 8.0, 3.0, 0.68, -8 + KELVIN, 35 + KELVIN
# Mass fractions of the designation standard, as its published table prints them.
LIBRARY = {
    "R134a": ("R134a", (1.0,)),
    "R410A": ("R32&R125", (0.5, 0.5)),
    "R407C": ("R32&R125&R134a", (0.23, 0.25, 0.52)),
}


class Library:
    """States of one refrigerant straight from the property library, the phase imposed."""

    def __init__(self, name):
        names, shares = LIBRARY[name]
        self.state = AbstractState("HEOS", names)
        if len(shares) > 1:
            self.state.set_mass_fractions(list(shares))

    def saturated(self, quality, T_K):
        """Return the state on a saturation line, or between them, at a temperature."""
        self.state.unspecify_phase()
        self.state.update(QT_INPUTS, quality, T_K)
        return self.state

    def at_pressure(self, quality, p_Pa, T_dew_K):
        """Return the state of a quality at a pressure, by its temperature: flashes from pressure are less sound."""
        T = brentq(lambda T: self.saturated(quality, T).p() - p_Pa, T_dew_K - 8.0, T_dew_K, xtol=1e-9)
        return self.saturated(quality, T)

    def single(self, phase, p_Pa, T_K):
        """Return the state at pressure and temperature in a phase."""
        self.state.specify_phase(phase)
        self.state.update(PT_INPUTS, p_Pa, T_K)
        return self.state

    def gas_temperature(self, p_Pa, quantity, wanted, lowest_K):
        """Return the temperature of the gas at a pressure where a quantity has a value. [K]"""
        return brentq(lambda T: getattr(self.single(iphase_gas, p_Pa, T), quantity)() - wanted, lowest_K, 450.0)


def cycle_by_hand(name):
    """Return the numbers of the cycle between equal dew temperatures, each step written out."""
    library = Library(name)
    p_evap = library.saturated(1.0, T_EVAP_K).p()
    p_cond = library.saturated(1.0, T_COND_K).p()
    T_bubble = library.at_pressure(0.0, p_cond, T_COND_K).T()
    h_liquid = library.single(iphase_liquid, p_cond, T_bubble - SUBCOOLING_K).hmass()
    h_outlet = library.single(iphase_gas, p_evap, T_EVAP_K + USEFUL_K).hmass()
    suction = library.single(iphase_gas, p_evap, T_EVAP_K + USEFUL_K + LINE_K)
    h_suction, s_suction, density = suction.hmass(), suction.smass(), suction.rhomass()
    T_isentropic = library.gas_temperature(p_cond, "smass", s_suction, T_COND_K + 0.5)
    work = (library.single(iphase_gas, p_cond, T_isentropic).hmass() - h_suction) / ISENTROPIC
    T_discharge = library.gas_temperature(p_cond, "hmass", h_suction + work, T_COND_K + 0.5)
    effect = h_outlet - h_liquid

    def excess(share):
        return library.at_pressure(share, p_evap, T_EVAP_K).hmass() - h_liquid

    T_inlet = library.at_pressure(brentq(excess, 0.01, 0.9), p_evap, T_EVAP_K).T()
    return {
        "p_evap_Pa": p_evap,
        "p_cond_Pa": p_cond,
        "cop": effect / work,
        "volumetric_capacity_J_per_m3": effect * density,
        "refrigerating_effect_J_per_kg": effect,
        "T_discharge_K": T_discharge,
        "T_discharge_isentropic_K": T_isentropic,
        "T_cond_bubble_K": T_bubble,
        "T_evap_inlet_K": T_inlet,
    }


@pytest.mark.parametrize("name", LIBRARY)
def test_study_is_the_cycle_written_out(case_of, name):
    """A pure fluid, a blend with hardly any glide and one with 6 K agree with the property library's own flashes."""
    duty = {"condensing": "35 degC", "useful_superheat": "7 K", "line_superheat": "8 K", "subcooling": "3 K"}
    found = compare(case_of(name, ["R290"], duty=duty, compressor={"isentropic_efficiency": ISENTROPIC})).existing.duty
    expected = cycle_by_hand(name)

    for quantity, value in expected.items():
        tolerance = {"abs": DISCHARGE_K, "rel": 0} if quantity.startswith("T_") else {"rel": RELATIVE}
        assert getattr(found, quantity) == pytest.approx(value, **tolerance), quantity

"""The plant as installed: today's point is where it stands, and every candidate is held to the same machine."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI

from retrofit.case import Case, read_case
from retrofit.cycle import Settings, solve_cycle
from retrofit.properties import fluid
from retrofit.study import Comparison, Entry, Installed, compare, installed
from retrofit.study.efficiencies import CompressorModel, efficiency_model
from retrofit.study.installed import ExistingPlant, existing_plant, machine_at

CORE = """
[plant]
refrigerant = "{existing}"
[duty]
cooling = "{cooling}"
evaporating = "-8 degC"
condensing = "42 degC"
useful_superheat = "6 K"
line_superheat = "8 K"
subcooling = "3 K"
[compressor]
{compressor}
[evaporator]
medium = "air"
inlet = "2 degC"
outlet = "-3 degC"
arrangement = "{arrangement}"
{evaporator}
[condenser]
medium = "air"
inlet = "32 degC"
outlet = "38 degC"
arrangement = "crossflow"
{condenser}
[compare]
candidates = [{candidates}]
"""
USUAL = 'isentropic_efficiency = 0.68\nvolumetric_efficiency = 0.88\nswept_volume = "201 m3/h"'


def case_of(tmp_path: Path, **parts: str) -> Case:
    """Return a case from its text, with parts replaced."""
    usual = {
        "existing": "R404A",
        "cooling": "110 kW",
        "compressor": USUAL,
        "arrangement": "crossflow",
        "evaporator": "",
        "condenser": "",
        "candidates": '"R448A", "R452A", "R134a"',
    }
    path = tmp_path / "case.toml"
    path.write_text(CORE.format(**(usual | parts)), encoding="utf-8")
    return read_case(path)


def plant_of(entry: Entry) -> Installed:
    """Return the plant basis of an entry that has one."""
    assert entry.plant is not None, entry.plant_reason or entry.reason
    return entry.plant


@pytest.fixture
def usual(tmp_path: Path) -> Comparison:
    """Return the comparison of the usual case."""
    return compare(case_of(tmp_path))


def test_superheat_gives_way_in_an_evaporator_hardly_loaded(tmp_path: Path) -> None:
    """Where the air is hardly warmer than the refrigerant, superheat takes its share of the difference and no more.

    By hand: today 6 K of 10 K, a share of 0.6; the usual 0.65 is larger. R1233zd(E) cools so little that it would
    settle within a few kelvin of the air.
    """
    full = plant_of(compare(case_of(tmp_path, candidates='"R1233zd(E)"')).candidates[0]).full
    useful = full.T_suction_K - 8.0 - full.T_evap_dew_K

    assert useful < 6.0
    assert useful == pytest.approx(0.65 * (275.15 - full.T_evap_dew_K), rel=1e-6)


@pytest.mark.parametrize("arrangement", ["crossflow", "counterflow"])
def test_today_stands_where_the_case_says(tmp_path: Path, arrangement: str) -> None:
    """The existing refrigerant settles at the case's temperatures, with the cooling of the same-compressor basis."""
    existing = compare(case_of(tmp_path, arrangement=arrangement)).existing
    full = plant_of(existing).full

    assert full.T_evap_dew_K == pytest.approx(265.15, abs=1e-4)
    assert full.T_cond_dew_K == pytest.approx(315.15, abs=1e-4)
    assert existing.compressor is not None
    assert full.cooling_W == pytest.approx(existing.compressor.cooling_W, rel=1e-6)


def test_existing_refrigerant_against_itself_is_exactly_one(usual: Comparison) -> None:
    """All plant ratios of the existing refrigerant are 1, to the last bit."""
    ratios = {name: value for name, value in usual.existing.relative.items() if name.startswith("plant_")}

    assert len(ratios) == 6
    assert set(ratios.values()) == {1.0}


def test_same_cooling_is_the_cooling_needed(usual: Comparison) -> None:
    """On the basis of same cooling every refrigerant delivers today's; needed is the smaller of that and the duty."""
    today = plant_of(usual.existing).full.cooling_W

    for entry in usual.entries:
        assert plant_of(entry).same_cooling.cooling_W == pytest.approx(today, rel=1e-6)
        assert plant_of(entry).operation.cooling_needed_W == pytest.approx(min(110e3, today), rel=1e-6)


def test_smaller_capacity_is_no_cop_gain_by_itself(usual: Comparison) -> None:
    """R134a cools much less and so loads the exchangers less: most of its COP gain at full is gone at equal cooling."""
    small = usual.candidates[2]

    assert small.relative["plant_capacity"] < 0.75
    assert small.relative["plant_cop"] > 1.25
    assert small.relative["plant_cop_same_cooling"] < 1.0 + 0.6 * (small.relative["plant_cop"] - 1.0)
    assert plant_of(small).operation.unmet_W > 0.0


def test_fixed_speed_runs_part_of_the_time(tmp_path: Path) -> None:
    """A machine larger than its duty runs part of the time; by hand: run time = cooling needed / cooling at full."""
    entry = compare(case_of(tmp_path, cooling="60 kW")).candidates[0]
    found = plant_of(entry)

    assert found.operation.run_time_fraction == pytest.approx(60e3 / found.full.cooling_W, rel=1e-9)
    assert found.operation.mean_power_W == pytest.approx(60e3 / found.full.cop, rel=1e-9)
    assert found.operation.unmet_W == 0.0


def test_variable_speed_takes_less_power_than_running_part_of_the_time(tmp_path: Path) -> None:
    """Slowed down, the exchangers are larger for the load: less mean power than on and off."""
    fixed = compare(case_of(tmp_path, cooling="60 kW")).candidates[0]
    slowed = compare(
        case_of(tmp_path, cooling="60 kW", compressor=USUAL + '\nspeed = "variable"\nlowest_speed = "30 %"')
    ).candidates[0]

    assert plant_of(slowed).operation.speed_fraction < 1.0
    assert plant_of(slowed).operation.run_time_fraction == pytest.approx(1.0)
    assert plant_of(slowed).operation.mean_power_W < plant_of(fixed).operation.mean_power_W


def test_ua_factor_of_the_case_is_counted_and_its_effect_shown(tmp_path: Path) -> None:
    """A poorer exchanger with one candidate costs it cooling, and the cooling without it stands beside it."""
    case = case_of(tmp_path, evaporator="ua_factor = {R448A = 0.8, R452A = 1.0}", condenser="ua_factor = 1.0")
    entry, other, _ = compare(case).candidates
    found = plant_of(entry)

    assert [one.factor for one in found.ua_factors] == [0.8, 1.0]
    assert {one.origin for one in found.ua_factors} == {"given"}
    assert found.full.cooling_W < found.cooling_with_equal_ua_W
    assert [one.factor for one in plant_of(other).ua_factors] == [1.0, 1.0]
    assert plant_of(other).full.cooling_W == plant_of(other).cooling_with_equal_ua_W


def test_case_without_exchangers_says_what_is_missing(tmp_path: Path) -> None:
    """Without a condenser table there is no plant basis, with the reason; the other bases stand."""
    case = case_of(tmp_path)
    text = case.text[: case.text.index("[condenser]")] + case.text[case.text.index("[compare]") :]
    path = tmp_path / "without.toml"
    path.write_text(text, encoding="utf-8")

    entry = compare(read_case(path)).candidates[0]

    assert entry.plant is None
    assert "[condenser]" in str(entry.plant_reason)
    assert entry.status == "ok"


def test_plant_without_balance_leaves_other_bases_standing(tmp_path: Path) -> None:
    """A refrigerant that would condense near its critical point has no plant basis but keeps its duty."""
    entry = compare(case_of(tmp_path, condenser="ua_factor = {R448A = 0.15}")).candidates[0]

    assert entry.plant is None
    assert "R448A in the plant as installed" in str(entry.plant_reason)
    assert entry.duty is not None


def test_points_of_efficiency_hold_at_each_refrigerants_own_ratio(tmp_path: Path) -> None:
    """With points, a candidate of higher pressure ratio runs at the efficiency of that ratio, its gas heated less.

    By hand: a straight line between the two points, apart from the rounded ends; for another refrigerant times
    H_a / H_b, with H = 1 + 0.5 (T2s - T1) / T1 at the same dew temperatures.
    """
    points = 'efficiency_points = [[2, 0.70, 0.95], [10, 0.50, 0.65]]\nswept_volume = "201 m3/h"'
    found = compare(case_of(tmp_path, compressor=points, candidates='"R134a"]\nmatch = "dew" #'))
    existing, other = found.existing.duty, found.candidates[0].duty

    assert existing is not None
    assert other is not None
    assert other.pressure_ratio > existing.pressure_ratio
    heating = [1.0 + 0.5 * (d.T_discharge_isentropic_K - d.T_suction_K) / d.T_suction_K for d in (existing, other)]
    for duty, factor, tolerance in ((existing, 1.0, 1e-9), (other, heating[0] / heating[1], 1e-5)):
        volumetric = duty.suction_volume_flow_m3_per_s / duty.swept_volume_m3_per_s
        line = 0.95 - 0.30 * (duty.pressure_ratio - 2.0) / 8.0
        assert volumetric == pytest.approx(line * factor, rel=tolerance)


def test_polynomial_reaches_the_cooling_it_states(tmp_path: Path) -> None:
    """At today's point the compressor cools what its own polynomial says there.

    By hand: the coefficients are a plane, capacity = 150 000 + 4000 S - 1000 D in W and power = 20 000 + 200 S +
    700 D; at S = -8 and D = 42 degC: 150 000 - 32 000 - 42 000 = 76 000 W and 20 000 - 1600 + 29 400 = 47 800 W.
    The rating's superheat and subcooling are those of the case, all superheat counted as cooling.
    """
    rating = (
        'swept_volume = "201 m3/h"\n[compressor.polynomial]\nunits = "SI"\n'
        "capacity = [150000, 4000, -1000, 0, 0, 0, 0, 0, 0, 0]\n"
        "power = [20000, 200, 700, 0, 0, 0, 0, 0, 0, 0]\n"
        'superheat = "14 K"\nsubcooling = "3 K"\n'
        'evaporating = ["-15 degC", "0 degC"]\ncondensing = ["30 degC", "50 degC"]\n'
    )
    found = compare(case_of(tmp_path, cooling="70 kW", compressor=rating))
    duty = found.existing.compressor

    assert duty is not None
    all_superheat = duty.cooling_W + duty.line_heat_W
    assert all_superheat == pytest.approx(76_000.0, rel=2e-3)
    assert duty.power_W == pytest.approx(47_800.0, rel=2e-3)
    assert plant_of(found.existing).is_covered


def test_candidate_outside_the_compressors_data_is_marked(tmp_path: Path) -> None:
    """A refrigerant whose pressure ratio the points do not reach is marked as not covered."""
    narrow = 'efficiency_points = [[4.1, 0.68, 0.88], [4.3, 0.68, 0.87]]\nswept_volume = "201 m3/h"'
    # Exchangers alike, so that the ratio at which the plant settles is the refrigerant's own.
    alike = "ua_factor = 1.0"
    found = compare(case_of(tmp_path, compressor=narrow, evaporator=alike, condenser=alike))

    assert plant_of(found.existing).is_covered
    assert not plant_of(found.candidates[2]).is_covered


def test_residuals_are_below_a_millionth_on_every_shipped_case() -> None:
    """Every plant basis of the shipped cases satisfies both exchangers to 1e-6."""
    for path in sorted((Path(__file__).resolve().parents[2] / "cases").glob("*.toml")):
        residuals = [entry.plant.residual for entry in compare(read_case(path)).entries if entry.plant]
        assert max(residuals, default=0.0) < 1e-6


def test_second_law_between_the_media(usual: Comparison) -> None:
    """COP stays below Carnot between the temperatures of the media that the exchangers stand in."""
    carnot = 270.15 / (305.15 - 270.15)  # coldest air leaving the evaporator, air entering the condenser

    for entry in usual.entries:
        assert plant_of(entry).full.cop < carnot


MACHINE = {"swept": 201.0 / 3600.0, "isentropic": 0.68, "volumetric": 0.88}


def installed_of(case: Case, existing: str = "R134a") -> ExistingPlant:
    """Return the plant of a case at -8 / 42 degC dew, solved for itself."""
    refrigerant, duty = fluid(existing), case.duty
    cycle = solve_cycle(
        refrigerant,
        refrigerant.p_dew(265.15),
        refrigerant.p_dew(315.15),
        Settings(
            useful_superheat_K=duty.useful_superheat_K,
            line_superheat_K=duty.line_superheat_K,
            subcooling_K=duty.subcooling_K,
            isentropic_efficiency=MACHINE["isentropic"],
            volumetric_efficiency=MACHINE["volumetric"],
        ),
    )
    return existing_plant(
        case,
        refrigerant,
        cycle,
        CompressorModel(case, refrigerant, efficiency_model(case, refrigerant)),
        MACHINE["swept"],
    )


def one_fluid(tmp_path: Path, superheat: str = "6 K", subcooling: str = "3 K", **parts: str) -> Case:
    """Return the case with R134a, whose dew and bubble points are one, and other superheat and subcooling."""
    text = case_of(tmp_path, existing="R134a", cooling="900 kW", candidates='"R1234yf"', **parts).text
    text = text.replace('useful_superheat = "6 K"', f'useful_superheat = "{superheat}"')
    path = tmp_path / "one.toml"
    path.write_text(text.replace('subcooling = "3 K"', f'subcooling = "{subcooling}"'), encoding="utf-8")
    return read_case(path)


@pytest.mark.parametrize(
    ("superheat", "subcooling", "shares"),
    [
        ("6 K", "3 K", (0.65, 0.7)),  # 6/10 and 3/10: the usual shares are larger
        ("8 K", "9 K", (0.8, 0.9)),  # 8/10 and 9/10
        ("6.5 K", "7 K", (0.65, 0.7)),  # just the usual ones
        ("9.5 K", "7.5 K", (0.95, 0.75)),
    ],
)
def test_shares_of_superheat_and_subcooling_are_todays_where_these_are_larger(
    superheat: str, subcooling: str, shares: tuple[float, float], tmp_path: Path
) -> None:
    """By hand: air enters at 2 degC, 10 K above the -8 degC of the evaporator; at 32 degC, 10 K below the 42 degC."""
    machine = installed_of(one_fluid(tmp_path, superheat, subcooling)).machine

    assert float(machine.superheat_share) == pytest.approx(shares[0], rel=1e-6)
    assert float(machine.subcooling_share) == pytest.approx(shares[1], rel=1e-6)


def test_a_flooded_evaporator_has_no_share_of_superheat(tmp_path: Path) -> None:
    """Its superheat is picked up behind the pool, so that no difference bounds it."""
    machine = installed_of(one_fluid(tmp_path, "9.5 K", arrangement="flooded")).machine

    assert float(machine.superheat_share) == np.inf


def test_todays_flows_of_heat_come_from_the_swept_volume(tmp_path: Path) -> None:
    """By hand from the definitions: mass flow = swept volume x volumetric efficiency x density at the inlet.

    Cooling = mass flow x (outlet - inlet of the evaporator). Air takes 5 K and 6 K over it: its capacity rates are
    cooling / 5 K and heat / 6 K. Crossflow: every part meets air as it enters, so 1 - exp(-UA/C) =
    sum(heat / difference) / C. The refrigerant's states come from CoolProp.
    """
    plant = installed_of(one_fluid(tmp_path))
    p = [PropsSI("P", "T", T, "Q", 1, "R134a") for T in (265.15, 315.15)]
    h_suction, rho = (PropsSI(name, "T", 265.15 + 14.0, "P", p[0], "R134a") for name in "HD")
    h_out = PropsSI("H", "T", 265.15 + 6.0, "P", p[0], "R134a")
    h_liquid = PropsSI("H", "T", 315.15 - 3.0, "P", p[1], "R134a")
    s_suction = PropsSI("S", "T", 265.15 + 14.0, "P", p[0], "R134a")
    h_discharge = h_suction + (PropsSI("H", "S", s_suction, "P", p[1], "R134a") - h_suction) / MACHINE["isentropic"]
    flow = MACHINE["swept"] * MACHINE["volumetric"] * rho
    cooling, heat = flow * (h_out - h_liquid), flow * (h_discharge - h_liquid)
    evaporator, condenser = plant.machine.evaporator, plant.machine.condenser
    effect = {
        "evaporator": 1.0 - np.exp(-float(evaporator.conductance_W_per_K) * 5.0 / cooling),
        "condenser": 1.0 - np.exp(-float(condenser.conductance_W_per_K) * 6.0 / heat),
    }

    assert float(plant.today_W) == pytest.approx(cooling, rel=1e-4)
    assert float(plant.needed_W) == pytest.approx(cooling, rel=1e-4)  # less than the 900 kW of the case
    assert float(evaporator.secondary.capacity_rate_W_per_K) == pytest.approx(cooling / 5.0, rel=1e-4)
    assert float(condenser.secondary.capacity_rate_W_per_K) == pytest.approx(heat / 6.0, rel=1e-4)
    # Evaporator: 10 K while it boils; superheat from 10 K down to 4 K, a logarithmic mean of 6 / ln(10 / 4) K.
    boiling = (PropsSI("H", "P", p[0], "Q", 1, "R134a") - h_liquid) / (h_out - h_liquid)
    mean = boiling / 10.0 + (1.0 - boiling) * np.log(10.0 / 4.0) / 6.0
    assert effect["evaporator"] == pytest.approx(5.0 * mean, rel=1e-3)
    # Condenser: between the discharge temperature less 32 degC at its beginning and 7 K at the end of subcooling.
    T_discharge = PropsSI("T", "H", h_discharge, "P", p[1], "R134a")
    assert 6.0 / (T_discharge - 305.15) < effect["condenser"] < 6.0 / 7.0


def test_a_flow_with_its_specific_heat_is_a_capacity_rate(tmp_path: Path) -> None:
    """By hand: 20 kg/s of water at 4200 J/(kg K) are 84 kW/K."""
    text = one_fluid(tmp_path).text.replace('outlet = "38 degC"', 'flow = "20 kg/s"\nspecific_heat = "4.2 kJ/kgK"')
    path = tmp_path / "flow.toml"
    path.write_text(text, encoding="utf-8")

    assert float(installed_of(read_case(path)).machine.condenser.secondary.capacity_rate_W_per_K) == 84_000.0


def test_a_search_at_other_media_begins_where_they_moved_to(tmp_path: Path) -> None:
    """By hand: air 3 K warmer at the evaporator and 5 K colder at the condenser moves -8 / 42 degC to -5 / 37 degC."""
    plant = installed_of(one_fluid(tmp_path))
    machine, starts = machine_at(plant, fluid("R134a"), 278.15, 300.15)

    assert float(starts[0]) == pytest.approx(268.15, abs=1e-6)
    assert float(starts[1]) == pytest.approx(310.15, abs=1e-6)
    assert (machine.evaporator.secondary.T_in_K, machine.condenser.secondary.T_in_K) == (278.15, 300.15)
    assert machine.evaporator.conductance_W_per_K == plant.machine.evaporator.conductance_W_per_K


@pytest.mark.parametrize("errors", [(1e-8, 3e-8), (3e-8, 1e-8)])
def test_the_residual_told_is_the_larger_one(
    errors: tuple[float, float], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Of full speed and same cooling; what shows the effect of the UA factors does not count."""
    solve = installed.balance

    def told(*arguments: object) -> object:
        found = solve(*arguments)  # type: ignore[arg-type]
        if found.residual.shape != (3,):
            return found
        return replace(found, residual=np.array([*errors, 5e-7]))

    monkeypatch.setattr(installed, "balance", told)

    assert plant_of(compare(case_of(tmp_path)).existing).residual == 3e-8

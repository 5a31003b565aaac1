"""The case file a user starts from."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator

from retrofit.case.model import field_of
from retrofit.case.schema import SCHEMA_FILE

REMARKS_AT, WIDEST = 32, 118  # columns
_HEADING = re.compile(r"(?:# |#\| )?\[([\w.]+)\]")
_KEY = re.compile(r"(?:# |#\| )?(\w+) = [^#]*")
_TEXT = """\
#:schema ./{schema}
# A case: one plant, its duty, and the refrigerants to compare. Change every value to your plant's.
# Values are text with a unit. A line that begins with # is a remark; take the # away to use it.
# What nobody knows is left out: it is then "not stated", and never taken as good.
# A remark that begins with #| is another way to say what stands above it: use one of the two.

title = "My plant"
# about = "A sentence on whose plant it is and where it stands."

[plant]
refrigerant = "R404A"            # in the plant today, by its ASHRAE number
# charge = "100 kg"              # whole plant; leave it out if nobody knows
# oil = "polyol ester"           # mineral, alkylbenzene, polyol ester, ..., mixed or unknown
# oil_changes = 2                # planned before the new refrigerant goes in
# oil_left = "30 %"              # share of the old oil that each change leaves behind
# high_side_limit = "28 bar g"   # maximum pressure on the nameplate of the high side
# low_side_limit = "19 bar g"    # and of the low side
# relief_setting = "28 bar g"    # stamped on the relief valve of the high side; "none" if there is none
# sight_glass = "fitted"         # in the liquid line; or none
# altitude = "0 m"               # above sea level; it sets what a gauge counts from
# highest_ambient = "38 degC"    # hottest air around plant and vessels, also at standstill
# evaporator = "direct expansion"   # or flooded, or pumped
# metals = ["copper", "steel"]   # that the refrigerant touches: copper, brass, steel, stainless, aluminium, zinc
# controller = "selectable"      # refrigerant in the software: fixed to refrigerant, selectable or none

[duty]
cooling = "50 kW"
evaporating = "-10 degC"
condensing = "40 degC"
reading = "dew"                  # what these two temperatures are: dew (as read from a gauge) or mean
useful_superheat = "5 K"         # picked up inside the evaporator
line_superheat = "5 K"           # picked up after it: it cools nothing, but the suction gas is warmer
subcooling = "3 K"               # below the bubble point, at the expansion valve

[compressor]
# kind = "piston"                # piston, scroll, screw, rotary, centrifugal or unknown: see README
isentropic_efficiency = 0.70
volumetric_efficiency = 0.90
#| efficiency_points = [[2, 0.62, 0.92], [4, 0.70, 0.86], [8, 0.66, 0.74]]   # pressure ratio, both efficiencies
# swept_volume = "100 m3/h"      # all compressors at the speed they run
# motor_efficiency = 0.92        # shaft over electrical power
# drive_efficiency = 0.96        # of a frequency converter
#| power_at = "terminals"        # of a polynomial: terminals (hermetic: motor in it) or shaft
# heat_loss = "5 %"              # share of the compressor power that leaves through the shell
# speed = "variable"             # fixed, steps or variable
# lowest_speed = "30 %"          # with variable
#| steps = 4                     # with speed = "steps"
#| own_condensers = true         # likewise: each step has its own part of the condenser, whose fans stop with it
# rated_current = "50 A"         # nameplates of all motors
# rated_power = "25 kW"
# highest_suction = "0 degC"     # highest evaporating temperature, at pull-down

# The maker's polynomials (AHRI 540, EN 12900) for the refrigerant of today, instead of the efficiencies:
#| [compressor.polynomial]
#| units = "SI"                  # degC, W, kg/h and A; or IP: degF, Btu/h, lb/h, W and A
#| capacity = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10]   # ten coefficients in the order of the standard
#| mass_flow = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10]   # or this, instead of the capacity
#| power = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10]
#| current = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10]   # or this, with the next three, instead of the power
#| voltage = "400 V"
#| phases = 3
#| power_factor = 0.85
#| superheat = "11.1 K"          # of the rating
#| return_gas = "18.3 degC"      # or this, instead of the superheat
#| subcooling = "0 K"            # of the capacity rating
#| evaporating = ["-40 degC", "-5 degC"]   # range covered, dew temperatures
#| condensing = ["25 degC", "55 degC"]

[compare]
candidates = ["R448A", "R449A", "R452A", "R454C"]
match = "mean"                   # refrigerants are compared at equal mean (or dew) temperatures

# [evaporator]                   # what it cools, at the duty above
# medium = "air"                 # air, water or brine
# inlet = "2 degC"
# outlet = "-3 degC"
#| flow = "8 kg/s"               # or the flow instead of the outlet,
#| specific_heat = "1.006 kJ/(kg K)"   # with its specific heat
# arrangement = "crossflow"      # counterflow, crossflow, or flooded (the refrigerant has one temperature)
# ua_factor = "calculated"       # conductance with a candidate over today's; or a number, or {{R448A = 0.97}}
# pressure_drop = "1 K"          # as a fall of the saturation temperature

# [condenser]                    # what it warms, at the duty above; keys as for the evaporator
# medium = "air"
# inlet = "30 degC"
# outlet = "36 degC"
#| flow = "10 kg/s"
#| specific_heat = "1.006 kJ/(kg K)"
# arrangement = "crossflow"
# highest_inlet = "38 degC"      # while the plant runs; of water or brine nothing else says it
# ua_factor = "calculated"
# pressure_drop = "0.5 K"

# [readings]                     # what was measured on the running plant
# date = "1 June 2026"
# ambient = "25 degC"
# load = "80 %"
# suction_pressure = "3.3 bar g"
# discharge_pressure = "17.2 bar g"
# liquid_pressure = "17.0 bar g"
# evaporator_outlet_temperature = "-5 degC"
# suction_temperature = "0 degC"
# discharge_temperature = "70 degC"
# liquid_temperature = "35 degC"
# power = "22 kW"
# current = "37 A"               # with the next three it gives the power
# voltage = "400 V"
# phases = 3
# power_factor = 0.85
# calibrate = true               # take power read over modelled power as losses of motor and drive, for every option
# evaporator_in = "2 degC"       # air, water or brine
# evaporator_out = "-3 degC"
# evaporator_flow = "8 kg/s"
# evaporator_specific_heat = "1.006 kJ/(kg K)"
# condenser_in = "25 degC"
# condenser_out = "31 degC"
# condenser_flow = "10 kg/s"
# condenser_specific_heat = "1.006 kJ/(kg K)"
# hours_per_day = 16

# [lines.suction]
# diameter = "54 mm"             # inside
# length = "40 m"
# riser = "5 m"                  # height of the part that goes up
# fittings = "10 m"              # straight pipe that bends and valves amount to
# roughness = "1.5 um"           # drawn copper
# lowest_load = "30 %"           # of the duty

# [lines.discharge]
# diameter = "35 mm"
# length = "20 m"
# riser = "3 m"
# fittings = "5 m"
# roughness = "1.5 um"
# lowest_load = "30 %"

# [lines.liquid]
# diameter = "28 mm"
# length = "40 m"
# riser = "3 m"
# fittings = "5 m"
# roughness = "1.5 um"

# [valve]
# kind = "thermostatic"          # thermostatic, electronic, capillary or fixed orifice
# liquid_line_loss = "0.3 bar"
# distributor_loss = "1.5 bar"

# [receiver]
# volume = "120 l"               # "none" if the plant has no receiver

# [controls]                     # settings today; "none" for a control that the plant does not have
# low_pressure_cut_out = "1.0 bar g"
# low_pressure_cut_in = "2.0 bar g"
# high_pressure_cut_out = "25 bar g"
# rack_set_point = "3.3 bar g"
# evaporator_regulator = "3.8 bar g"
# crankcase_regulator = "4.5 bar g"
# head_pressure = "12 bar g"
# fan_steps = ["12 bar g", "14 bar g"]

# [approvals]                    # answers of makers and engineers in writing, by refrigerant
# compressor = {{R448A = "approved", R452A = "not approved"}}   # with refrigerant and oil, in the maker's envelope
# oil = {{R448A = "approved"}}
# expansion_valve = {{R448A = "approved"}}
# relief_capacity = {{R448A = "approved"}}   # flow by the standard with this refrigerant
# receiver = {{R448A = "approved"}}
# lines = {{R448A = "approved"}}   # by calculation
# seals = {{R448A = "approved"}}
# metals = {{R448A = "approved"}}
# standstill = {{R448A = "approved"}}
# room = {{R448A = "approved"}}   # by the authority, where the rules held here do not decide
# law = {{R448A = "approved"}}   # by the authority, where the tables held here leave it open

# [room]                         # the smallest occupied room that a leak can fill
# name = "sales floor"
# volume = "6000 m3"             # with what is permanently open to it
# area = "1500 m2"
# mounting = "wall"              # of the indoor unit: floor, window, wall or ceiling
#| mounting_height = "2.5 m"     # or its height above the floor
# access = "a"                   # a (general), b (supervised) or c (authorised)
# occupancy = "other"            # institutional: people who cannot leave by themselves; or other
# location = "II"                # I occupied space, II compressor outside it, III machinery room or open air,
#                                  IV ventilated enclosure
# below_ground = false
# emergency_exits = true         # whether the room has emergency exits
# people = 4                     # most people in it at one time
# refrigerated = false           # whether it only processes or stores goods under refrigeration
# comfort = false                # whether the plant is for human comfort
# ventilation = "natural"        # none, natural or mechanical
# largest_circuit = "80 kg"      # charge of the largest independent circuit today
# sealed = false                 # whether the system is sealed in the factory

# [machinery_room]
# volume = "200 m3"
# area = "60 m2"
# detector = true
# ventilation = "1.5 m3/s"       # air flow of the emergency ventilation

# [law]                          # tables of law are data, not advice: check the current text
# jurisdiction = "EU"            # EU or a member such as DE, GB, NI, US, US-CA; else other
# date_of_change = "2027-04-01"
# remaining_life = "8 years"     # that the plant runs after the change
#| end = "2035-03-31"            # or the day it stops, instead of the remaining life
# equipment = "supermarket"      # kind of equipment, as the tables name it
# arrangement = "multipack"      # self-contained, movable plug-in, single split, multi split, double duct,
#                                  multipack (compressors in parallel) or built on site
# rated_capacity = "120 kW"      # of new equipment; if left out the duty is taken
# cascade_primary = false        # whether it is the primary circuit of a cascade
# safety_exception = false       # whether safety at the site rules out what the limit leaves, with evidence
# hermetically_sealed = false    # and labelled so
# leak_detection_system = true
# annual_leak_rate = "15 %"      # of the charge
# product_below_minus_50 = false   # whether a product is cooled below -50 degC
# code = "EN 378"                # charge rules for the room: ASHRAE 15, EN 378, ISO 5149 or both

# [report]                       # what stands on the report besides results
# client = "Client to be named"
# site = "Where the plant stands"
# system_id = "Plant 1"          # as the client's lists call it
# company = "Company to be named"
# logo = "logo.svg"              # PNG, JPEG or SVG; its path is counted from this file
# prepared = "Engineer to be named"
# checked = "Second engineer to be named"
# approved = "Head of office to be named"
# decide_by = "2027-01-31"
# revisions = [["A", "2026-12-01", "first issue", "engineer"]]   # revision, day, what changed, by whom
# recommended = "R448A"          # your recommendation: a candidate, or the refrigerant of today to keep
# fallback = "R449A"
# conditions = ["The cases are cleaned before the change."]   # your own, after those that were found

# [year]                         # it needs [evaporator] and [condenser]: the plant as installed runs through it
# bins = [["2 degC", 4000], ["12 degC", 4000], ["24 degC", 760]]   # outdoor air and its hours, 8760 in all
#                                or by day and by night, as in [["2 degC", 1800, 2200], ...]
#| weather = "hours.csv"         # or a file beside this one with 8760 rows below the heading
#|                                 hour,dry_bulb [degC] and, if needed, wet_bulb [degC] or water [degC]
# condenser_follows = "dry bulb"   # what its inlet follows: constant, dry bulb, wet bulb or water
# condenser_approach = "0 K"     # inlet above that
# evaporator_follows = "constant"
# evaporator_approach = "0 K"
# serves = "cooling"             # the load is cooling, or heating: heat from the condenser
# peak_load = "50 kW"            # from peak_at on; the duty if left out
# peak_at = "30 degC"            # outdoor air; between the two the load runs on a straight line
# base_load = "25 kW"
# base_at = "5 degC"
# day_from = 7                   # hours of the day with the whole load
# day_to = 21
# night_load = "70 %"            # share of it at other hours
# defrost_power = "2 kW"         # mean over the year
# defrost_to_load = "100 %"      # share of that heat to be cooled away again
# evaporator_fans = "1.5 kW"     # or pumps; all hours
# condenser_fans = "2 kW"        # or pumps; with the compressors
# pumps = "0.5 kW"               # and other auxiliaries; all hours
# lowest_condensing = "25 degC"   # mean temperature that the head-pressure control keeps
# metered = "140000 kWh"         # electricity of a year, to set beside the computed one

# An invented climate, instead of bins or a file:
#| [year.climate]
#| mean = "11 degC"              # of the year
#| yearly_swing = "8 K"          # warmest day's mean above that
#| daily_swing = "4 K"           # warmest hour above the mean of its day
#| warmest_day = 200             # of the year; 20 in the south

# [emissions]
# gwp_edition = "AR5"            # AR4, AR5 or AR6: whose GWP over 100 years counts
# leak_log = [["2025-03-02", "18 kg"], ["2026-03-01", "20 kg"]]   # top-ups; the first begins the count
#| leak_rate = "15 %"            # or the share of the charge lost in a year
# leak_rate_after = "10 %"       # with any candidate; as today if left out
# recovery_at_end = "85 %"       # of the charge, when the plant is taken out of use
# lost_at_change = "5 %"         # of the old charge
# old_charge = "recovered"       # or released
# grid_factor = "0.35 kg/kWh"    # CO2 equivalent of electricity
# grid_years = [[2027, "0.30 kg/kWh"], [2032, "0.20 kg/kWh"]]   # from each year on
# grid_source = "where the factor comes from"

# [money]                        # one number, or [low, base, high]; nothing is converted
# currency = "EUR"               # as it is to be printed
# tariff = 0.18                  # a kWh
# demand_charge = 60             # a year, for each kW of peak power
# discount_rate = "6 %"
# new_plant_life = "15 years"    # for the residual value of a new plant, by straight line
# refrigerant_price = {{R448A = [25, 30, 45], R404A = 90}}   # a kilogram
# leak_check = 250               # one check
# levy = 0                       # for each tonne of CO2 equivalent of refrigerant bought
# yearly_service = 2000          # the same for every option

# [money.change]                 # first cost of any change; write 0 for what costs nothing
# recovery = 1500                # of the old charge, weighing and disposal
# refrigerant = 3000             # or left out: charge times price
# reclaim_credit = 0             # what the old charge brings
# oil = 800
# driers = 400
# valves = [1000, 1500, 3000]
# seals = 500
# relief = 300
# controls = 600
# labour = [4000, 6000, 9000]
# downtime = 1000
# safety_works = 0
# new_plant = 0
# contingency = "10 %"

# [options.R454C]                # where one option differs: keys of [money.change] and these
# leak_rate = "2 %"
# charge = "40 kg"
# largest_circuit = "20 kg"      # of a new plant: what one leak can release
# seasonal_cop = 3.1             # of a new plant, fans and pumps included
# peak_power = "40 kW"           # beside seasonal_cop, for the demand charge
# plant_life = "20 years"        # of this new plant
#| residual_value = 40000        # at the end of the remaining life, in place of the straight line

# [plus_minus]                   # how far inputs may be off, each under its full key
# duty.evaporating = "1 K"
# duty.cooling = "10 %"          # of its value
# compressor.isentropic_efficiency = 0.05   # of a fraction: points of its own, here 0.65 to 0.75

# [thresholds]                   # your own, instead of those that the checks come with
# capacity = {{work = 1.0, stop = 0.9}}
# discharge_temperature = {{work = "105 degC", stop = "115 degC"}}
"""


def new_case_text() -> str:
    """Return a commented case file that `read_case` accepts as it stands.

    Its first line points editors at the schema, which belongs beside it as `case.schema.json`.
    Returns: The text of the file. [-]
    """
    return "\n".join(_explained(_TEXT.format(schema=SCHEMA_FILE).split("\n")))


def _explained(lines: Iterable[str]) -> Iterator[str]:
    """Yield the lines of the file; a key without a remark of its own has the meaning that the model gives it."""
    table = ""
    for line in lines:
        if heading := _HEADING.match(line):
            table = heading[1]
        key = _KEY.fullmatch(line)
        found = field_of(f"{table}.{key[1]}") if key else None
        meaning = (found[1].description or "").rstrip(".") if found else ""
        remark = meaning[:1].lower() + meaning[1:] if meaning[1:2].islower() else meaning
        told = f"{line:<{REMARKS_AT}} # {remark}"
        yield told if remark and len(told) <= WIDEST else line


def is_untouched(text: str) -> bool:
    """Return whether a case file is the one that `new_case_text` makes, so that its values are placeholders.

    Args:
        text: The text of the file. [-]
    """
    return _bare(text) == _bare(new_case_text())


def _bare(text: str) -> list[str]:
    """Return the lines of a file that say something, without remarks and blanks."""
    return [line.split("#")[0].strip() for line in text.splitlines() if line.split("#")[0].strip()]

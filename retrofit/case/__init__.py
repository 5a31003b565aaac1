"""The case file: a plant as found, its duty, and the refrigerants to compare.

Read one with `read_case`; every complaint arrives at once in a `CaseFileError`. In Python a case is SI.
"""

from retrofit.case.approvals import Approvals
from retrofit.case.compressor import Compressor, Polynomial
from retrofit.case.emissions import EDITIONS, Emissions, GridYear, TopUp
from retrofit.case.exchangers import Condenser, Evaporator, Exchanger
from retrofit.case.jurisdictions import EU_MEMBERS, JURISDICTIONS, areas
from retrofit.case.keys import KeyFacts, facts_of, meaning, quantity, sum_of_money
from retrofit.case.laid import as_key, as_text, as_toml, as_value, laid_over
from retrofit.case.law import ARRANGEMENTS, EQUIPMENT, Law
from retrofit.case.logo import Logo
from retrofit.case.model import Case, Default
from retrofit.case.money import Items, Money, Option, Options, Range
from retrofit.case.numbers import EfficiencyPoint, UAFactors
from retrofit.case.paper import Report, Revision
from retrofit.case.pipework import FIXED, GasLine, Lines, LiquidLine, Receiver, Valve
from retrofit.case.plant import Compare, Duty, Plant
from retrofit.case.plus_minus import PlusMinus
from retrofit.case.reader import case_from_data, read_case
from retrofit.case.readings import Controls, Readings
from retrofit.case.room import MachineryRoom, Room
from retrofit.case.schema import SCHEMA_FILE, case_schema
from retrofit.case.template import is_untouched, new_case_text
from retrofit.case.thresholds import Threshold, Thresholds
from retrofit.case.values import ABSENT, Absent, present
from retrofit.case.year import Bin, Climate, Year

__all__ = [
    "ABSENT",
    "ARRANGEMENTS",
    "EDITIONS",
    "EQUIPMENT",
    "EU_MEMBERS",
    "FIXED",
    "JURISDICTIONS",
    "SCHEMA_FILE",
    "Absent",
    "Approvals",
    "Bin",
    "Case",
    "Climate",
    "Compare",
    "Compressor",
    "Condenser",
    "Controls",
    "Default",
    "Duty",
    "EfficiencyPoint",
    "Emissions",
    "Evaporator",
    "Exchanger",
    "GasLine",
    "GridYear",
    "Items",
    "KeyFacts",
    "Law",
    "Lines",
    "LiquidLine",
    "Logo",
    "MachineryRoom",
    "Money",
    "Option",
    "Options",
    "Plant",
    "PlusMinus",
    "Polynomial",
    "Range",
    "Readings",
    "Receiver",
    "Report",
    "Revision",
    "Room",
    "Threshold",
    "Thresholds",
    "TopUp",
    "UAFactors",
    "Valve",
    "Year",
    "areas",
    "as_key",
    "as_text",
    "as_toml",
    "as_value",
    "case_from_data",
    "case_schema",
    "facts_of",
    "is_untouched",
    "laid_over",
    "meaning",
    "new_case_text",
    "present",
    "quantity",
    "read_case",
    "sum_of_money",
]

"""The case file: a plant as found, its duty, and the refrigerants to compare.

Read one with `read_case`; every complaint arrives at once in a `CaseFileError`. In Python a case is SI.
"""

from retrofit.case.compressor import Compressor, Polynomial
from retrofit.case.exchangers import Condenser, Evaporator, Exchanger
from retrofit.case.keys import meaning, quantity
from retrofit.case.law import EQUIPMENT, Law
from retrofit.case.model import Case, Default
from retrofit.case.numbers import EfficiencyPoint, FilmFactors
from retrofit.case.pipework import GasLine, Lines, LiquidLine, Receiver, Valve
from retrofit.case.plant import Compare, Duty, Plant
from retrofit.case.reader import read_case
from retrofit.case.readings import Controls, Readings
from retrofit.case.room import MachineryRoom, Room
from retrofit.case.schema import SCHEMA_FILE, case_schema
from retrofit.case.template import new_case_text
from retrofit.case.thresholds import Threshold, Thresholds

__all__ = [
    "EQUIPMENT",
    "SCHEMA_FILE",
    "Case",
    "Compare",
    "Compressor",
    "Condenser",
    "Controls",
    "Default",
    "Duty",
    "EfficiencyPoint",
    "Evaporator",
    "Exchanger",
    "FilmFactors",
    "GasLine",
    "Law",
    "Lines",
    "LiquidLine",
    "MachineryRoom",
    "Plant",
    "Polynomial",
    "Readings",
    "Receiver",
    "Room",
    "Threshold",
    "Thresholds",
    "Valve",
    "case_schema",
    "meaning",
    "new_case_text",
    "quantity",
    "read_case",
]

"""The case file a user starts from."""

from __future__ import annotations

from retrofit.case.schema import SCHEMA_FILE

_TEXT = """\
#:schema ./{schema}
# A case: one plant, its duty, and the refrigerants to compare. Change every value to your plant's.
# Values are text with a unit. A line that begins with # is a remark; take the # away to use it.

title = "My plant"
# about = "A sentence on whose plant it is and where it stands."

[plant]
refrigerant = "R404A"            # in the plant today, by its ASHRAE number
# charge = "100 kg"              # whole plant; leave it out if nobody knows
# oil = "polyol ester"           # mineral, alkylbenzene, polyol ester, ..., mixed or unknown
# high_side_limit = "28 bar g"   # maximum pressure on the nameplate of the high side
# altitude = "0 m"               # above sea level; it sets what a gauge counts from
# evaporator = "direct expansion"   # or flooded, or pumped

[duty]
cooling = "50 kW"
evaporating = "-10 degC"
condensing = "40 degC"
reading = "dew"                  # what these two temperatures are: dew (as read from a gauge) or mean
useful_superheat = "5 K"         # picked up inside the evaporator
line_superheat = "5 K"           # picked up after it: it cools nothing, but the suction gas is warmer
subcooling = "3 K"               # below the bubble point, at the expansion valve

[compressor]
isentropic_efficiency = 0.70
volumetric_efficiency = 0.90
# swept_volume = "100 m3/h"      # all compressors at the speed they run

[compare]
candidates = ["R448A", "R449A", "R452A", "R454C"]
match = "mean"                   # refrigerants are compared at equal mean (or dew) temperatures
"""


def new_case_text() -> str:
    """Return a commented case file that `read_case` accepts as it stands.

    Its first line points editors at the schema, which belongs beside it as `case.schema.json`.
    Returns: The text of the file. [-]
    """
    return _TEXT.format(schema=SCHEMA_FILE)

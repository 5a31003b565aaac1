"""What a refrigerant is: composition, safety class, limits, GWP by edition, each value with its source.

Nothing here knows how a refrigerant behaves. There is no GWP without a name: GWP_BASES lists the five.
"""

from retrofit.refrigerants.blends import GWP_BASES
from retrofit.refrigerants.catalogue import designations, find, source
from retrofit.refrigerants.cautions import Caution, cautions_for, change_cautions
from retrofit.refrigerants.limits import kg_per_m3_to_vol_pct, ppm_to_kg_per_m3
from retrofit.refrigerants.records import STATUSES, Dispute, Refrigerant, Source, Value
from retrofit.refrigerants.safety import SafetyClass, is_flammable, parse_safety_class
from retrofit.refrigerants.spelling import with_hyphens

__all__ = [
    "GWP_BASES",
    "STATUSES",
    "Caution",
    "Dispute",
    "Refrigerant",
    "SafetyClass",
    "Source",
    "Value",
    "cautions_for",
    "change_cautions",
    "designations",
    "find",
    "is_flammable",
    "kg_per_m3_to_vol_pct",
    "parse_safety_class",
    "ppm_to_kg_per_m3",
    "source",
    "with_hyphens",
]

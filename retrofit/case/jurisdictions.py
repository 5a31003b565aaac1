"""Whose law: the codes that a case and the tables of law use, and what people write instead."""

from __future__ import annotations

EU_MEMBERS = {
    "AT": "Austria",
    "BE": "Belgium",
    "BG": "Bulgaria",
    "CY": "Cyprus",
    "CZ": "Czechia",
    "DE": "Germany",
    "DK": "Denmark",
    "EE": "Estonia",
    "ES": "Spain",
    "FI": "Finland",
    "FR": "France",
    "GR": "Greece",
    "HR": "Croatia",
    "HU": "Hungary",
    "IE": "Ireland",
    "IT": "Italy",
    "LT": "Lithuania",
    "LU": "Luxembourg",
    "LV": "Latvia",
    "MT": "Malta",
    "NL": "Netherlands",
    "PL": "Poland",
    "PT": "Portugal",
    "RO": "Romania",
    "SE": "Sweden",
    "SI": "Slovenia",
    "SK": "Slovakia",
}
OTHER = "other"
JURISDICTIONS = ("EU", "GB", "NI", "US", "US-CA", *EU_MEMBERS, OTHER)
"""EU, Great Britain, Northern Ireland, the US, California, the members of the EU by ISO 3166-1, and any other place."""

_STATES = (
    "Alabama, Alaska, Arizona, Arkansas, Colorado, Connecticut, Delaware, Florida, Georgia, Hawaii, Idaho, Illinois, "
    "Indiana, Iowa, Kansas, Kentucky, Louisiana, Maine, Maryland, Massachusetts, Michigan, Minnesota, Mississippi, "
    "Missouri, Montana, Nebraska, Nevada, New Hampshire, New Jersey, New Mexico, New York, North Carolina, "
    "North Dakota, Ohio, Oklahoma, Oregon, Pennsylvania, Rhode Island, South Carolina, South Dakota, Tennessee, "
    "Texas, Utah, Vermont, Virginia, Washington, West Virginia, Wisconsin, Wyoming, United States, USA, U.S., America"
)
_OTHERS = "Norway, Iceland, Switzerland, Canada, Australia, Japan, China, India, NO, IS, CH, CA, AU, JP, CN, IN"
_WRITTEN = {
    "EU": "Europe, European Union, Union, EEA",
    "GB": "UK, United Kingdom, Great Britain, Britain, England, Scotland, Wales",
    "NI": "Northern Ireland, UK-NI, GB-NIR",
    "US": _STATES,
    "US-CA": "California",
    "GR": "EL",
    "CZ": "Czech Republic",
    "NL": "Holland, The Netherlands",
    OTHER: _OTHERS,
}
HINTS = (
    *((code.upper(), code) for code in JURISDICTIONS),
    *((name.upper(), code) for code, name in EU_MEMBERS.items()),
    *((name.upper(), code) for code, names in _WRITTEN.items() for name in names.split(", ")),
)
"""What people write, in capitals, and the code for it."""


def areas(jurisdiction: str) -> tuple[str, ...]:
    """Return whose law holds in a jurisdiction: its own code, then those it is part of.

    Args:
        jurisdiction: A code of `JURISDICTIONS`. [-]
    Returns: Codes; for a member of the EU and for Northern Ireland the EU too, for California the US too.
    Source: Regulation (EU) 2024/573 for its members; Northern Ireland by the Windsor Framework, annex 2.
    """
    wider = "EU" if jurisdiction in EU_MEMBERS or jurisdiction == "NI" else jurisdiction.partition("-")[0]
    return (jurisdiction,) if wider == jurisdiction else (jurisdiction, wider)

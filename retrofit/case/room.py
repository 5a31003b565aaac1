"""The room that a leak would fill, and the machinery room."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated

from retrofit.case.dates import YesNo
from retrofit.case.numbers import Number
from retrofit.case.table import Table, key
from retrofit.case.values import Choice, Quantity, Text

ACCESS: Mapping[str, str] = {"a": "general", "b": "supervised", "c": "authorised"}
"""Access categories of EN 378 and ISO 5149, and what each is called in words."""

LOCATIONS: Mapping[str, str] = {
    "I": "occupied space",
    "II": "compressor outside the occupied space",
    "III": "machinery room or open air",
    "IV": "ventilated enclosure",
}
"""Location classes of EN 378 and ISO 5149: where the parts that hold refrigerant stand, in words."""

MOUNTINGS = ("floor", "window", "wall", "ceiling")
OCCUPANCIES = ("institutional", "other")
VENTILATIONS = ("none", "natural", "mechanical")
_VOLUME = Quantity("volume", "1 m3", "10000000 m3", "rooms lie within it", example="6000 m3", shown="room volume")
_AREA = Quantity("area", "0.5 m2", "1000000 m2", "rooms lie within it")
_PEOPLE = Number(0, 100_000, "no room of a plant holds more", whole=True, example="4")
_FLAG = Annotated[bool | None, YesNo()]


class Room(Table):
    """The smallest occupied room that a leak can fill; whatever is not known is left out."""

    name: Annotated[str | None, Text(100)] = key("name", "What the room is.", None)
    volume_m3: Annotated[float | None, _VOLUME] = key(
        "volume", "Volume of the room, with what is permanently open to it.", None, where="drawings, or measured"
    )
    area_m2: Annotated[float | None, _AREA] = key(
        "area", "Floor area of the room.", None, where="drawings, or measured"
    )
    mounting: Annotated[str | None, Choice(MOUNTINGS)] = key(
        "mounting", "Where the indoor unit is mounted.", None, where="in the room"
    )
    mounting_height_m: Annotated[
        float | None, Quantity("length", "0 m", "50 m", "rooms lie within it", example="2.2 m")
    ] = key(
        "mounting_height",
        "Height of the indoor unit above the floor.",
        None,
        where="in the room, to the lowest opening of the unit",
    )
    access: Annotated[str | None, Choice((*ACCESS, *ACCESS.values()))] = key(
        "access", "Access category: a (general), b (supervised) or c (authorised).", None, where="owner: who may enter"
    )
    occupancy: Annotated[str | None, Choice(OCCUPANCIES)] = key(
        "occupancy",
        "Institutional (people who cannot leave by themselves) or other.",
        None,
        where="owner: who is in the building",
    )
    location: Annotated[str | None, Choice((*LOCATIONS, *LOCATIONS.values()))] = key(
        "location",
        "Location class I to IV: where the parts that hold refrigerant stand.",
        None,
        where="walk along the plant",
    )
    below_ground: _FLAG = key("below_ground", "Whether the room lies below ground.", None, where="on site")
    comfort: _FLAG = key("comfort", "Whether the plant is for human comfort.", None, where="what the plant is for")
    ventilation: Annotated[str | None, Choice(VENTILATIONS)] = key(
        "ventilation", "How the room is ventilated.", None, where="on site: none, openings, or a fan"
    )
    emergency_exits: _FLAG = key("emergency_exits", "Whether the room has emergency exits.", None, where="on site")
    people: Annotated[int | None, _PEOPLE] = key(
        "people", "Most people in the room at one time.", None, where="owner: most people at one time"
    )
    refrigerated: _FLAG = key(
        "refrigerated",
        "Whether the room is used only to process or store goods under refrigeration.",
        None,
        where="what the room is for",
    )
    largest_circuit_kg: Annotated[
        float | None,
        Quantity("mass", "0 kg", "1000000 kg", "a plant that runs has one", above_low=True, example="120 kg"),
    ] = key(
        "largest_circuit",
        "Charge of the largest independent circuit today.",
        None,
        where="labels of the circuits; what one leak can release",
    )
    sealed: _FLAG = key("sealed", "Whether the system is sealed in the factory.", None, where="nameplate")

    @property
    def access_category(self) -> str | None:
        """The access category as a letter, None if not stated."""
        return next((letter for letter, word in ACCESS.items() if self.access in (letter, word)), None)

    @property
    def location_class(self) -> str | None:
        """The location class as a Roman number, None if not stated."""
        return next((number for number, words in LOCATIONS.items() if self.location in (number, words)), None)


class MachineryRoom(Table):
    """The machinery room; whatever is not known is left out."""

    volume_m3: Annotated[float | None, _VOLUME] = key(
        "volume", "Volume of the machinery room.", None, where="drawings, or measured"
    )
    area_m2: Annotated[float | None, _AREA] = key(
        "area", "Floor area of the machinery room.", None, where="drawings, or measured"
    )
    detector: _FLAG = key("detector", "Whether a refrigerant detector is fitted.", None, where="in the machinery room")
    ventilation_m3_per_s: Annotated[
        float | None,
        Quantity("volume flow", "0 m3/s", "1000 m3/s", "fans of plants lie within it", example="3 m3/s"),
    ] = key("ventilation", "Air flow of its emergency ventilation.", None, where="nameplate of the fan, or measured")

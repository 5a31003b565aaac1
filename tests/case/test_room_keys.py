"""The keys on the room and the machinery room: what each is worth in SI, and how each is refused."""

import pytest

from retrofit.case.room import ACCESS, LOCATIONS

START = """\
[plant]
refrigerant = "R404A"
charge = "100 kg"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compare]
candidates = ["R448A"]
"""
FULL = """\
[room]
name = "sales floor"
volume = "6000 m3"
area = "1500 m²"
mounting = "ceiling"
access = "general"
occupancy = "other"
location = "compressor outside the occupied space"
below_ground = false
comfort = false
ventilation = "natural"
largest_circuit = "80 kg"
sealed = true
[machinery_room]
volume = "7062.933 ft3"
area = "645.8346 ft2"
detector = true
ventilation = "3178.32 cfm"
"""


def test_room_and_machinery_room_are_read(case):
    """Volumes, areas and flow arrive in SI, yes and no as such, and nothing is assumed."""
    read = case(START + FULL)
    room, machinery = read.room, read.machinery_room

    assert (room.name, room.volume_m3, room.area_m2, room.mounting) == ("sales floor", 6000.0, 1500.0, "ceiling")
    assert (room.access_category, room.location_class, room.occupancy) == ("a", "II", "other")
    assert (room.below_ground, room.comfort, room.sealed, room.ventilation) == (False, False, True, "natural")
    assert (room.largest_circuit_kg, room.mounting_height_m) == (80.0, None)
    # NIST SP 811, B.8: 1 ft³ = 2.831685e-2 m³, 1 ft² = 9.290304e-2 m², 1 cfm = 4.719474e-4 m³/s
    assert machinery.volume_m3 == pytest.approx(200.0, rel=1e-6)
    assert machinery.area_m2 == pytest.approx(60.0, rel=1e-6)
    assert machinery.ventilation_m3_per_s == pytest.approx(1.5, rel=1e-6)
    assert machinery.detector is True
    assert not [default.key for default in read.defaults if "room" in default.key]


def test_what_is_left_out_is_not_stated(case):
    """An empty table holds nothing but None, and a file without the tables has none."""
    read = case(START + "[room]\n[machinery_room]\n")

    assert set(read.room.model_dump().values()) == {None}
    assert (read.room.access_category, read.room.location_class) == (None, None)
    assert set(read.machinery_room.model_dump().values()) == {None}
    assert (case(START).room, case(START).machinery_room) == (None, None)


@pytest.mark.parametrize(("letter", "word"), ACCESS.items())
def test_an_access_category_is_written_as_letter_or_word(case, letter, word):
    """Both mean the same category."""
    rooms = [case(f'{START}[room]\naccess = "{text}"\n').room for text in (letter, word)]

    assert [room.access_category for room in rooms] == [letter, letter]


@pytest.mark.parametrize(("number", "words"), LOCATIONS.items())
def test_a_location_class_is_written_as_number_or_in_words(case, number, words):
    """Both mean the same class."""
    rooms = [case(f'{START}[room]\nlocation = "{text}"\n').room for text in (number, words)]

    assert [room.location_class for room in rooms] == [number, number]


@pytest.mark.parametrize(
    ("table", "key", "part"),
    [
        ("[room]\nvolume = '6000'", "room.volume", "has no unit"),
        ("[room]\nvolume = '0 m3'", "room.volume", "1 m3 to"),
        ("[room]\nvolume = '6000 m2'", "room.volume", "is an area, but a volume is needed"),
        ("[room]\narea = '1500 m3'", "room.area", "is a volume, but an area is needed"),
        ("[room]\narea = 1500", "room.area", 'such as "1500 m2"'),
        ("[room]\nmounting = 'roof'", "room.mounting", 'write "floor", "window", "wall" or "ceiling"'),
        ("[room]\nmounting_height = '60 m'", "room.mounting_height", "0 m to 50 m"),
        ("[room]\naccess = 'd'", "room.access", '"supervised"'),
        ("[room]\naccess = 'generel'", "room.access", 'did you mean "general"'),
        ("[room]\noccupancy = 'hospital'", "room.occupancy", '"institutional" or "other"'),
        ("[room]\nlocation = 'V'", "room.location", '"ventilated enclosure"'),
        ("[room]\nlocation = 2", "room.location", "a number stands where a word is needed"),
        ("[room]\nbelow_ground = 'no'", "room.below_ground", "true or false is needed"),
        ("[room]\ncomfort = 1", "room.comfort", "true or false is needed"),
        ("[room]\nventilation = 'fan'", "room.ventilation", '"mechanical"'),
        ("[room]\nlargest_circuit = '101 kg'", "room.largest_circuit", "no circuit holds more than the whole plant"),
        ("[room]\nlargest_circuit = '0 kg'", "room.largest_circuit", "above 0 kg"),
        ("[room]\nmounting = 'wall'\nmounting_height = '2 m'", "room.mounting", "leave one of the two out"),
        ("[room]\nvolume = '100 m3'\narea = '100 m2'", "room.volume", "makes a room 1 m high"),
        ("[machinery_room]\nvolume = '100 m3'\narea = '0.9 m2'", "machinery_room.volume", "makes a room 111 m high"),
        ("[machinery_room]\nventilation = '3 m3'", "machinery_room.ventilation", "but a volume flow is needed"),
        ("[machinery_room]\ndetector = 'yes'", "machinery_room.detector", "true or false is needed"),
        ("[room]\nvolumen = '1 m3'", "room.volumen", 'did you mean "volume"'),
        ("[rooms]\nvolume = '1 m3'", "rooms", 'did you mean "room"'),
    ],
)
def test_each_fault_of_a_key_is_named(complaints, table, key, part):
    """A fault names its key and says what is allowed."""
    found = complaints(START + table + "\n")

    assert any(name == key and part in text for _, name, text in found), found


def test_a_circuit_as_large_as_the_plant_is_allowed(case):
    """A plant may be one circuit."""
    assert case(START + "[room]\nlargest_circuit = '100 kg'\n").room.largest_circuit_kg == 100.0

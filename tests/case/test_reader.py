"""Reading case files: what a good one gives, and every complaint about a bad one."""

import os
import pickle
import subprocess
import sys
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from retrofit.case import read_case
from retrofit.case.source import LARGEST_FILE_BYTES
from retrofit.errors import CaseFileError

SHORT = """\
[plant]
refrigerant = "R404A"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compare]
candidates = ["R448A", "R449A"]
"""


def test_the_shortest_case_takes_every_default_and_says_so(case):
    """Only refrigerant, duty and candidates are needed; each default taken is on the list."""
    read = case(SHORT)

    assert read.title == "plant"
    assert (read.duty.reading, read.compare.match) == ("dew", "mean")
    assert (read.duty.useful_superheat_K, read.duty.line_superheat_K, read.duty.subcooling_K) == (
        5.0,
        0.0,
        0.0,
    )
    assert read.compressor.isentropic_efficiency == 0.70
    assert read.compressor.volumetric_efficiency == 0.90
    assert read.compressor.swept_volume_m3_per_s is None
    assert (read.plant.charge_kg, read.plant.oil, read.plant.high_side_limit_Pa) == (None, None, None)
    assert read.plant.ambient_pressure_Pa == 101_325.0  # ICAO standard atmosphere at sea level
    assert [(default.key, default.shown_text) for default in read.defaults] == [
        ("plant.altitude", "0 m"),
        ("duty.reading", "dew"),
        ("duty.useful_superheat", "5 K"),
        ("duty.line_superheat", "0 K"),
        ("duty.subcooling", "0 K"),
        ("compressor.kind", "unknown"),
        ("compressor.isentropic_efficiency", "0.70"),
        ("compressor.volumetric_efficiency", "0.90"),
        ("compare.match", "mean"),
    ]
    assert all(default.why for default in read.defaults)


def test_a_full_case_is_read_into_si(case):
    """Every key arrives in SI; the gauge limit counts from the air pressure at the plant's altitude."""
    read = case(
        'title = "A  plant"\nabout = """Ours,\n  invented."""\n'
        + SHORT.replace(
            "[duty]",
            'charge = "573.2 lb"\noil = "polyol ester"\naltitude = "2000 m"\n'
            'high_side_limit = "28 bar g"\nevaporator = "flooded"\n[duty]\nreading = "mean"\n'
            'useful_superheat = "9 R"\nline_superheat = "8 K"\nsubcooling = "3 K"',
        )
        + 'match = "dew"\n[compressor]\nkind = "piston"\nisentropic_efficiency = "68 %"\nvolumetric_efficiency = 1\n'
        'swept_volume = "201 m3/h"\n'
    )

    assert (read.title, read.about) == ("A plant", "Ours, invented.")
    assert read.plant.charge_kg == pytest.approx(573.2 * 0.453_592_37)  # pound: NIST SP 811
    assert (read.plant.oil, read.plant.evaporator) == ("polyol ester", "flooded")
    # 794.952 hPa is the ICAO standard pressure at 2000 m
    assert read.plant.high_side_limit_Pa == pytest.approx(2_800_000.0 + 79_495.2, abs=0.1)
    assert (read.duty.cooling_W, read.duty.T_evap_K, read.duty.T_cond_K) == (120_000.0, 265.15, 315.15)
    assert (read.duty.reading, read.compare.match) == ("mean", "dew")
    assert read.duty.useful_superheat_K == pytest.approx(5.0)
    assert read.compressor.isentropic_efficiency == pytest.approx(0.68)
    assert read.compressor.swept_volume_m3_per_s == pytest.approx(201.0 / 3600.0)
    assert read.defaults == ()
    assert read.given["duty.cooling"] == "120 kW"
    assert read.given["compare.candidates"] == "R448A, R449A"


def test_designations_come_in_their_normal_spelling(case):
    """A refrigerant may be written as people write it."""
    read = case(SHORT.replace("R404A", "r-404a").replace("R448A", "R-448a"))

    assert read.plant.refrigerant == "R404A"
    assert read.compare.candidates == ("R448A", "R449A")
    assert read.given["plant.refrigerant"] == "r-404a"


def test_a_case_cannot_be_changed_and_can_be_sent(case):
    """A case is frozen, and a worker process can receive it."""
    read = case(SHORT)

    with pytest.raises(ValueError, match="frozen"):
        read.duty.cooling_W = 1.0
    with pytest.raises(AttributeError):
        read.title = "other"
    assert pickle.loads(pickle.dumps(read)) == read


@pytest.mark.parametrize("change", [lambda t: "\ufeff" + t, lambda t: t.replace("\n", "\r\n")])
def test_files_from_windows_editors_are_read(case, change):
    """A byte order mark and CRLF make no difference."""
    assert case(change(SHORT)).duty == case(SHORT).duty


def test_all_problems_come_at_once_sorted_by_line(complaints):
    """One run names every fault with its line and key."""
    found = complaints(
        'titel = "x"\n[plant]\nrefrigerant = "R404"\ncharge = 260\n[duty]\ncooling = "120 degC"\n'
        'evaporating = "50 degC"\ncondensing = "42 degC"\nsubcooling = "8 degC"\n[compare]\n'
        'candidates = ["R448A",\n  "R-448A", 5]\n'
    )

    assert [(line, key) for line, key, _ in found] == [
        (1, "titel"),
        (3, "plant.refrigerant"),
        (4, "plant.charge"),
        (6, "duty.cooling"),
        (7, "duty.evaporating"),
        (9, "duty.subcooling"),
        (12, "compare.candidates[2]"),
        (12, "compare.candidates[3]"),
    ]


def test_the_message_has_file_line_key_and_text(case, tmp_path):
    """A complaint reads file:line: key: text."""
    with pytest.raises(CaseFileError) as refusal:
        case(SHORT.replace('"120 kW"', "120"))

    start = f"{tmp_path}/plant.toml:4: duty.cooling: 120 is a bare number; "
    assert str(refusal.value).startswith(start)


@pytest.mark.parametrize(
    ("old", "new", "line", "key", "part"),
    [
        ('"R404A"', '"R404"', 2, "plant.refrigerant", 'did you mean "R404A"'),
        ('"R404A"', '"R4004A"', 2, "plant.refrigerant", "did you mean"),
        ('"R404A"', "404", 2, "plant.refrigerant", "a number stands where a refrigerant is needed"),
        ('"R404A"', '"' + "R" * 5000 + '"', 2, "plant.refrigerant", "is no designation"),
        ('"R404A"', '"R404A\\u001b[2J"', 2, "plant.refrigerant", "\\x1b[2J"),
        ('"R448A"', '"R404A"', 8, "compare.candidates[1]", "R-404A is the refrigerant in the plant"),
        ('"R448A"', '"r449a"', 8, "compare.candidates[2]", "R-449A is in the list twice"),
        ('"R448A"', '["R448A"]', 8, "compare.candidates[1]", "a list stands where a refrigerant"),
        ('["R448A", "R449A"]', '"R448A"', 8, "compare.candidates", "a text stands where a list is needed"),
        ('["R448A", "R449A"]', "[]", 8, "compare.candidates", "the list has 0 items"),
        ('["R448A", "R449A"]', str(["R32"] * 41), 8, "compare.candidates", "the list has 41 items"),
        ("cooling =", "coolin =", 4, "duty.coolin", 'did you mean "cooling"'),
        (
            "cooling =",
            "x = 1 #",
            3,
            "duty.cooling",
            'is missing; add cooling to [duty], as in cooling = "120 kW"',
        ),
        ("candidates =", "x = 1 #", 7, "compare.candidates", 'as in candidates = ["R448A", "R449A"]'),
        ("refrigerant =", "x = 1 #", 1, "plant.refrigerant", 'as in refrigerant = "R404A"'),
        ("[compare]", "[compair]", 7, "compair", 'did you mean "compare"'),
        ("[compare]", "[compair]", 0, "compare", "the table [compare] is missing; add it with candidates"),
        ("[duty]", "", 0, "duty", "add it with cooling, evaporating and condensing"),
        ("[duty]", "", 4, "plant.cooling", "cooling belongs in [duty], not in [plant]"),
        ("[duty]", "title = 'x'\n[duty]", 3, "plant.title", "belongs at the top of the file"),
        ("[duty]", "[plant.duty]", 3, "plant.duty", "belongs in a table of its own, [duty]"),
        ("[duty]", "[[duty]]", 3, "duty", "a list stands where a table is needed; begin it with [duty]"),
        ("[plant]", "compressor = 'big'\n[plant]", 1, "compressor", "a text stands where a table is needed"),
        (
            "[plant]",
            "charge = '1 kg'\n[plant]",
            1,
            "charge",
            "belongs in [plant], not at the top of the file",
        ),
        ("[plant]", "title = 5\n[plant]", 1, "title", "a number stands where a text is needed"),
        ("[plant]", "title = ''\n[plant]", 1, "title", "allowed are 1 to 200"),
        ("[plant]", f"title = '{'x' * 201}'\n[plant]", 1, "title", "it has 201 characters"),
        ("[plant]", 'title = "\\u001b[31m"\n[plant]', 1, "title", "hidden character \\x1b"),
        ("[plant]", 'about = "a\\u202eb"\n[plant]', 1, "about", "hidden character \\u202e"),
        ("[duty]", "charge = '0 kg'\n[duty]", 3, "plant.charge", "above 0 kg"),
        ("[duty]", "oil = 'POE'\n[duty]", 3, "plant.oil", 'did you mean "polyol ester"'),
        ("[duty]", "oil = 'minerall'\n[duty]", 3, "plant.oil", 'did you mean "mineral"'),
        ("[duty]", "oil = 5\n[duty]", 3, "plant.oil", "a number stands where a word is needed"),
        ("[duty]", "altitude = '9 ft deg'\n[duty]", 3, "plant.altitude", "not a unit of length"),
        ("[duty]", "altitude = '20000 ft'\n[duty]", 3, "plant.altitude", "outside what is allowed"),
        ("[duty]", "high_side_limit = '28 bar'\n[duty]", 3, "plant.high_side_limit", "absolute or gauge"),
        ("[duty]", "high_side_limit = '31 MPa g'\n[duty]", 3, "plant.high_side_limit", "200 bar g"),
        ("[duty]", "evaporator = 'floded'\n[duty]", 3, "plant.evaporator", 'did you mean "flooded"'),
        ('"120 kW"', "120", 4, "duty.cooling", 'such as "120 kW"'),
        ('"120 kW"', '"0 kW"', 4, "duty.cooling", "above 0 W"),
        ('"120 kW"', '"-1 kW"', 4, "duty.cooling", "above 0 W"),
        ('"120 kW"', "nan", 4, "duty.cooling", "write it with kW"),
        ('"120 kW"', "1e400", 4, "duty.cooling", "write it with kW"),
        ('"120 kW"', '"1e400 kW"', 4, "duty.cooling", "too large a number"),
        ('"120 kW"', "0x" + "f" * 5000, 4, "duty.cooling", "sensible size"),
        ('"120 kW"', "2026-12-01", 4, "duty.cooling", "a date or a time stands where a power is needed"),
        ('"120 kW"', "true", 4, "duty.cooling", "true or false stands where a power is needed"),
        ('"120 kW"', "{value = 120}", 4, "duty.cooling", "a table stands where a power is needed"),
        ('"-8 degC"', '"42 degC"', 5, "duty.evaporating", "not below condensing"),
        ('"-8 degC"', '"-121 degC"', 5, "duty.evaporating", "-120 degC to 150 degC"),
        ('"42 degC"', '"151 degC"', 6, "duty.condensing", "-120 degC to 150 degC"),
        ('"42 degC"', '"42"', 6, "duty.condensing", 'as in "42 degC"'),
        ("[compare]", "useful_superheat = '81 K'\n[compare]", 7, "duty.useful_superheat", "0 K to 80 K"),
        ("[compare]", "line_superheat = '-1 K'\n[compare]", 7, "duty.line_superheat", "0 K to 80 K"),
        ("[compare]", "superheat = '5 K'\n[compare]", 7, "duty.superheat", "write useful_superheat ("),
        ("[compare]", "subcooling = '51 K'\n[compare]", 7, "duty.subcooling", "0 K to 50 K"),
        ("[compare]", "subcooling = '3 degC'\n[compare]", 7, "duty.subcooling", 'write "3 K"'),
        ("[compare]", "reading = 'due'\n[compare]", 7, "duty.reading", 'did you mean "dew"'),
        ("[compare]", "reading = 'bubble'\n[compare]", 7, "duty.reading", 'write "dew" or "mean"'),
        (
            "[compare]",
            "[compressor]\nisentropic_efficiency = 0\n[compare]",
            8,
            "compressor.isentropic_efficiency",
            "10 % to 100 %",
        ),
        (
            "[compare]",
            "[compressor]\nvolumetric_efficiency = 1.01\n[compare]",
            8,
            "compressor.volumetric_efficiency",
            "10 % to 100 %",
        ),
        (
            "[compare]",
            "[compressor]\nvolumetric_efficiency = nan\n[compare]",
            8,
            "compressor.volumetric_efficiency",
            "sensible size",
        ),
        (
            "[compare]",
            "[compressor]\nswept_volume = '201 m3'\n[compare]",
            8,
            "compressor.swept_volume",
            "is a volume, but a volume flow is needed",
        ),
    ],
)
def test_each_fault_is_named_at_its_line(complaints, old, new, line, key, part):
    """A fault has the line and key it stands at, what is wrong, and what is allowed."""
    found = complaints(SHORT.replace(old, new, 1))

    assert any((at, name) == (line, key) and part in text for at, name, text in found), found


@pytest.mark.parametrize(
    ("text", "line", "part"),
    [
        ("title = harbour", 1, "text stands in double quotes"),
        ("title", 1, "an equals sign is missing"),
        ("title = 'x' 'y'", 1, "something is left over"),
        ("title = 'x'\ntitle = 'y'", 2, "the same key is given twice"),
        ("[duty]\n[duty]", 2, "the same table is given twice"),
        ("[duty\n", 1, "name in brackets"),
        ("\n\ntitle = 'x", 3, "ends with the quotation mark"),
        ('title = "x\n', 1, "a text ends on its line"),
        ('title = """x\n', 2, "ends with the quotation mark"),
        ('title = "C:\\plant"', 1, "a backslash"),
        ("a = {b = 1, b = 2}", 1, "the same key is given twice"),
        ("a = {b = 1", 1, "is not closed"),
        ("[[duty]", 1, "name in brackets"),
        ("[plant]\n= 5", 2, 'a line reads key = "value"'),
        ("a = [1,\n2", 2, "a list is not closed"),
        ("a = 2026-02-30", 1, "text stands in double quotes"),
        ("a = 'x\x1b[2J'", 1, "not allowed here"),
        ("a = " + "9" * 5000, 0, "too many digits"),
        ("a = " + "[" * 100_000, 0, "nested too deeply"),
        ("a = " + "[" * 50 + "]" * 50, 1, 'no key "a"'),
        ("a = " + "{a=" * 50_000, 0, "nested too deeply"),
    ],
)
def test_what_is_no_toml_is_refused_in_plain_words(complaints, text, line, part):
    """A fault of syntax has its line and says what to write instead."""
    found = complaints(text)

    assert any(at == line and part in words for at, _, words in found), found


def test_an_empty_file_misses_its_tables(complaints):
    """Nothing written is three tables missing, not a crash."""
    assert [(line, key) for line, key, _ in complaints("")] == [(0, "plant"), (0, "duty"), (0, "compare")]


@pytest.mark.parametrize(
    "data", [b"\xff\xfe[\x00", SHORT.encode("utf-16"), b"a = 1\nb = '\xe9'\n", bytes(range(255, 0, -1))]
)
def test_what_is_no_utf8_is_refused_with_its_line(complaints, data):
    """Binary files and other encodings get one plain message."""
    ((line, _, text),) = complaints(data)

    assert "UTF-8" in text
    assert line == (2 if data.startswith(b"a") else 1)


def test_a_huge_file_is_refused(tmp_path):
    """A file above the limit is refused, and never read as a whole."""
    path = tmp_path / "huge.toml"
    with path.open("wb") as file:
        file.truncate(50_000_000)

    with pytest.raises(CaseFileError, match="larger than 1 MB"):
        read_case(path)


def test_a_file_of_the_largest_size_is_read(case):
    """The limit itself is allowed."""
    filler = "#" * (LARGEST_FILE_BYTES - len(SHORT) - 1)

    assert case(SHORT + filler + "\n").plant.refrigerant == "R404A"


def test_missing_files_and_folders_are_refused(tmp_path):
    """A path that is no file says what it is."""
    with pytest.raises(CaseFileError, match="no such file"):
        read_case(tmp_path / "absent.toml")
    with pytest.raises(CaseFileError, match="folder"):
        read_case(tmp_path)
    with pytest.raises(CaseFileError, match="not an ordinary file"):
        read_case(os.devnull)
    with pytest.raises(CaseFileError, match="cannot be read"):
        read_case("a\0b.toml")
    with pytest.raises(CaseFileError, match="cannot be read"):
        read_case("x" * 5000)


def test_a_file_that_may_not_be_read_is_refused(tmp_path, monkeypatch):
    """Missing permission is said as such."""

    def refuse(*_arguments, **_options):
        raise PermissionError(13, "Permission denied")

    path = tmp_path / "secret.toml"
    path.write_text(SHORT)
    monkeypatch.setattr("builtins.open", refuse)

    with pytest.raises(CaseFileError, match="permissions"):
        read_case(path)


def test_a_path_with_terminal_commands_is_escaped(tmp_path):
    """The name of a file cannot command the terminal either."""
    with pytest.raises(CaseFileError) as refusal:
        read_case(tmp_path / "\x1b[2J.toml")

    assert "\\x1b[2J.toml" in str(refusal.value)
    assert str(refusal.value).isprintable()


@settings(deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(data=st.binary(max_size=200) | st.text(max_size=200).map(lambda text: text.encode("utf-8", "replace")))
def test_any_bytes_are_read_or_refused(case, data):
    """No content of a file ends in anything but a case or a CaseFileError."""
    for content in (data, SHORT.encode() + data, SHORT.encode().replace(b"120 kW", data)):
        try:
            outcome = case(content).duty.cooling_W > 0
        except CaseFileError as refusal:
            outcome = bool(refusal.problems) and str(refusal).replace("\n", "").isprintable()

        assert outcome


@pytest.mark.parametrize(("name", "loaded"), [("trailer", "[]"), ("harbour-market", "['numpy']")])
def test_reading_a_case_needs_no_heavy_library(name, loaded):
    """The property library is never imported, and numpy only for a year, so that checking a case is quick."""
    code = (
        f"import sys; from retrofit.case import read_case; read_case('cases/{name}.toml'); "
        "print(sorted({'CoolProp', 'numpy', 'matplotlib', 'scipy', 'jinja2'} & set(sys.modules)))"
    )
    top = Path(__file__).resolve().parents[2]

    done = subprocess.run([sys.executable, "-c", code], cwd=top, capture_output=True, text=True, check=True)

    assert done.stdout.strip() == loaded

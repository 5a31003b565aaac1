"""The weather of a year: hours of a file with every fault named by its line, bins, and an invented climate."""

import datetime
import os

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from retrofit.case import read_case
from retrofit.case.hourly import MOST_LISTED, weather_of_file
from retrofit.case.weather import hours_of_year
from retrofit.errors import CaseFileError

CASE = """\
[plant]
refrigerant = "R404A"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compare]
candidates = ["R448A"]
[evaporator]
inlet = "2 degC"
outlet = "-3 degC"
arrangement = "crossflow"
[condenser]
inlet = "32 degC"
outlet = "38 degC"
arrangement = "crossflow"
[year]
weather = "coast.csv"
"""
KEY_LINE = 18
HEADING = "hour,dry_bulb [degC]"
ROWS = [f"{hour},{hour % 24}.5" for hour in range(1, 8761)]


def moments(start="2025-01-01T00:00", count=8760, minutes=60):
    """Return times of a clock that is never put forward or back."""
    first = datetime.datetime.fromisoformat(start)
    return [(first + datetime.timedelta(minutes=minutes * n)).isoformat(timespec="minutes") for n in range(count)]


@pytest.fixture
def read(tmp_path):
    """Return a function that writes a file of hours beside a case and reads both."""
    (tmp_path / "plant.toml").write_text(CASE, "utf-8")

    def write_and_read(text, follows=""):
        path = tmp_path / "coast.csv"
        path.write_bytes(text if isinstance(text, bytes) else text.encode())
        (tmp_path / "plant.toml").write_text(CASE + follows, "utf-8")
        return read_case(tmp_path / "plant.toml").weather

    return write_and_read


@pytest.fixture
def faults(read):
    """Return a function that gives the problems of a file of hours as (line, column, text)."""

    def found(text):
        with pytest.raises(CaseFileError) as refusal:
            read(text)
        assert all(os.path.basename(problem.path) == "coast.csv" for problem in refusal.value.problems)
        return [(problem.line, problem.key, problem.text) for problem in refusal.value.problems]

    return found


def csv(rows, heading=HEADING):
    return "\n".join([heading, *rows]) + "\n"


def test_hours_are_read_in_kelvin_with_their_clock(read):
    """8760 rows give as many temperatures; hour 1 is 0:00 on 1 January, hour 8760 is 23:00 on 31 December."""
    text = csv(ROWS)
    weather = read(text)

    assert weather.T_dry_bulb_K[:2] == pytest.approx([274.65, 275.65])  # 1.5 and 2.5 degC
    assert weather.T_dry_bulb_K.shape == weather.hours.shape == weather.month.shape == (8760,)
    assert weather.hours.sum() == 8760.0
    assert (weather.T_wet_bulb_K, weather.T_water_K) == (None, None)
    assert (weather.hour_of_day[0], weather.hour_of_day[-1], weather.month[0], weather.month[-1]) == (0.0, 23.0, 1, 12)
    assert weather.text == text
    assert weather.source.endswith("coast.csv")


def test_hour_and_month_are_those_of_the_calendar():
    """The clock of the standard library counts the hours of a year of 365 days alike."""
    hour, month = hours_of_year()
    clock = [datetime.datetime.fromisoformat(moment) for moment in moments()]

    assert hour.tolist() == [moment.hour for moment in clock]
    assert month.tolist() == [moment.month for moment in clock]


def test_all_columns_units_and_forms_are_read(read):
    """Times instead of hours, three temperatures in three units, remarks, quotes, blanks, a mark and CRLF."""
    rows = [f'{moment}, "50.0" ,280,8.5' for moment in moments()]
    heading = 'time,dry_bulb [°F],"wet_bulb [K]",water [deg C]'
    weather = read(("# made by a formula\n\n" + csv(rows, heading) + "\n\n").replace("\n", "\r\n").encode("utf-8-sig"))

    assert weather.T_dry_bulb_K == pytest.approx(np.full(8760, 283.15))  # 50 degF is 10 degC
    assert weather.T_wet_bulb_K == pytest.approx(np.full(8760, 280.0))
    assert weather.T_water_K == pytest.approx(np.full(8760, 281.65))


def test_a_leap_year_without_its_day_is_a_year(read):
    """The year of the times is no matter, only that each of 8760 hours is there."""
    leap = [moment for moment in moments("2024-01-01T00:00", 8784) if "-02-29" not in moment]

    assert read(csv([f"{moment.replace('T', ' ')}:00,4" for moment in leap], "time,dry_bulb [degC]")).hours.size == 8760


@pytest.mark.parametrize(
    ("change", "line", "column", "words"),
    [
        (lambda r: r[:99] + r[100:], 101, "hour", "hour 100 is missing before this line; add every hour"),
        (lambda r: r[:99] + r[103:], 101, "hour", "hours 100 to 103 are missing before this line"),
        (lambda r: r[1:], 2, "hour", "hour 1 is missing"),
        (lambda r: r[:-1], 8760, "hour", "the file ends here and hour 8760 is missing; a year has 8760 rows"),
        (lambda r: r[:4000], 4001, "hour", "the file ends here and hours 4001 to 8760 are missing"),
        (lambda r: [*r, "8761,4"], 8762, "hour", "hour 8761 is not in a year; allowed are 1 to 8760"),
        (lambda r: [*r[:50], r[49], *r[50:]], 52, "hour", "hour 50 is there twice; keep one row"),
        (lambda r: [*r[:49], r[50], r[49], *r[51:]], 52, "hour", "hour 50 stands after hour 51; put rows in order"),
        (lambda r: [f"{n},4" for n in range(8760)], 2, "hour", "hours count from 1"),
        (lambda r: r[2160:] + r[:2160], 2, "hour", "the year begins elsewhere, at hour 2161; begin with 1 January"),
        (lambda r: [*r[:9], "ten,4", *r[10:]], 11, "hour", '"ten" is no hour'),
        (lambda r: [*r[:9], ",4", *r[10:]], 11, "hour", "the cell is empty; write the hour"),
        (lambda r: [*r[:9], "9.5,4", *r[10:]], 11, "hour", '"9.5" is not a whole hour; write hourly means'),
        (lambda r: [*r[:9], "10,", *r[10:]], 11, "dry_bulb", "the cell is empty; write the temperature"),
        (lambda r: [*r[:9], "10,warm", *r[10:]], 11, "dry_bulb", '"warm" is no number'),
        (lambda r: [*r[:9], "10,4 degC", *r[10:]], 11, "dry_bulb", "without a unit, as in 4.2"),
        (lambda r: [*r[:9], "10,nan", *r[10:]], 11, "dry_bulb", '"nan" is not a finite number'),
        (lambda r: [*r[:9], "10,-inf", *r[10:]], 11, "dry_bulb", '"-inf" is not a finite number'),
        (lambda r: [*r[:9], "10,1e999", *r[10:]], 11, "dry_bulb", "-60 degC to 60 degC"),
        (lambda r: [*r[:9], "10,-999", *r[10:]], 11, "dry_bulb", '"-999 degC" is outside what is allowed'),
        (lambda r: [*r[:9], "10,٤", *r[10:]], 11, "dry_bulb", "is no number"),
        (lambda r: [*r[:9], "10,4,2", *r[10:]], 11, "", "3 cells, the heading 2; a decimal comma makes two"),
        (lambda r: [*r[:9], "10", *r[10:]], 11, "", "the row has 1 cell, the heading 2"),
        (lambda r: [f"{1 + n // 4},4" for n in range(35_040)], 35_041, "hour", "look like 15-minute data"),
        (lambda r: [f"{1 + n // 2},4" for n in range(17_520)], 17_521, "hour", "look like half-hour data"),
        (lambda r: [f"{1 + 24 * n},4" for n in range(365)], 366, "hour", "look like daily data"),
        (lambda r: [f"{n},4" for n in range(1, 8785)], 8785, "hour", "8784 rows are a leap year's; leave out 29 Feb"),
        (lambda r: [], 1, "hour", "there are no rows below the heading"),
    ],
)
def test_a_fault_of_the_rows_is_named_once_at_its_line(faults, change, line, column, words):
    """Missing, repeated, moved, unreadable or impossible: one complaint, at the line of the fault."""
    ((at, where, text),) = faults(csv(change(ROWS)))

    assert (at, where) == (line, column)
    assert words in text


@pytest.mark.parametrize(
    ("times", "line", "words"),
    [
        (
            moments(minutes=15, count=8760),
            3,
            "not a full hour; write hourly means, each at the hour it begins (in 6570",
        ),
        (moments("2024-01-01T00:00", 8784), 1418, "29 February is there; leave out its 24 hours"),
        (moments("2025-04-01T00:00"), 2, "the year begins elsewhere, at 1 April, 0:00; begin"),
        ([m + "Z" for m in moments()], 2, "carries a time zone; write local standard time"),
        ([m.replace("-", "/") for m in moments()], 2, "is no time; write local standard time, as in 2025-01-01T00:00"),
        ([*moments()[:2090], moments()[2089], *moments()[2091:]], 2092, "use standard time all year"),
        (["2025-02-30T00:00", *moments()[1:]], 2, "is on no calendar"),
        (["2025-01-01T24:00", *moments()[1:]], 2, "is on no clock"),
    ],
)
def test_a_fault_of_the_times_is_named_at_its_line(faults, times, line, words):
    """Another step, another year, a zone or a clock put forward and back: named where it begins."""
    found = faults(csv([f"{moment},4" for moment in times], "time,dry_bulb [degC]"))

    assert any(at == line and column == "time" and words in text for at, column, text in found), found
    assert len(found) <= MOST_LISTED + 1


@pytest.mark.parametrize(
    ("heading", "column", "words"),
    [
        ("hour,dry_bulb", "dry_bulb", "it has no unit; write it in brackets, as in dry_bulb [degC]"),
        ("hour,dry_bulb (degC)", "dry_bulb", "it has no unit; write it in brackets"),
        ("hour,dry_bulb []", "dry_bulb", "it has no unit"),
        ("hour,dry_bulb [bar]", "dry_bulb", '"bar" is not a unit of temperature'),
        ("hour,drybulb [degC]", "drybulb", 'there is no column "drybulb [degC]", did you mean "dry_bulb"?'),
        ("hour,water [degC]", "dry_bulb", "the column is missing; add it with its unit, as in dry_bulb [degC]"),
        ("water [degC],dry_bulb [degC]", "hour", "no column says when; add hour, from 1 to 8760, or time"),
        ("hour,dry_bulb [degC],rh", "rh", "known are hour, time, dry_bulb, wet_bulb and water"),
        ("hour,dry_bulb [degC],dry_bulb [K]", "dry_bulb", "the column dry_bulb is there twice"),
        ("hour,time,dry_bulb [degC]", "time", "hour and time both say when; keep one"),
        ("hour;dry_bulb [degC]", "", "columns are parted by semicolons; part them by commas"),
        ("hour\tdry_bulb [degC]", "", "columns are parted by tabs"),
        ("1,4.2", "", "there is no heading; name the columns on the first line"),
        (",".join("abcdefghijklmnopqrstuvw"), "", "the heading has 23 columns"),
    ],
)
def test_a_fault_of_the_heading_is_named(faults, heading, column, words):
    """What is missing, unknown or without a unit is said with what to write; the rows are not blamed for it."""
    width = heading.count(",")
    found = faults(csv([f"{n}" + ",4" * width for n in range(1, 8761)], heading))

    assert any((at, where) == (1, column) and words in text for at, where, text in found), found


def test_a_wet_bulb_above_the_dry_bulb_is_refused(faults):
    """No air is wetter than saturated; saturated air itself is allowed."""
    rows = [f"{n},4.0,{'4.1' if n == 7 else '4.0'}" for n in range(1, 8761)]
    ((line, column, text),) = faults(csv(rows, "hour,dry_bulb [degC],wet_bulb [degC]"))

    assert (line, column) == (8, "wet_bulb")
    assert "0.1 K above the dry bulb" in text


def test_many_faults_come_at_once_and_the_rest_is_counted(faults):
    """The first ones are listed in the order of lines, and the others counted."""
    found = faults(csv(["1,x", *(f"{n},{'y' if n % 2 else '4'}" for n in range(2, 8761))]))

    assert len(found) == MOST_LISTED + 1
    assert [line for line, _, _ in found] == sorted(line for line, _, _ in found)
    assert f"{4380 - MOST_LISTED} more problems from here on" in found[-1][2]


def test_problems_of_both_files_come_together(tmp_path):
    """A fault of the case and one of its file of hours are told in one go, each with the name of its file."""
    (tmp_path / "plant.toml").write_text(CASE.replace('"120 kW"', "120"), "utf-8")
    (tmp_path / "coast.csv").write_text(csv(ROWS[1:]), "utf-8")
    with pytest.raises(CaseFileError) as refusal:
        read_case(tmp_path / "plant.toml")

    first, second = str(refusal.value).splitlines()
    assert first.startswith(f"{tmp_path}/plant.toml:4: duty.cooling: 120 is a bare number")
    assert second.startswith(f"{tmp_path}/coast.csv:2: hour: hour 1 is missing")


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("absent.csv", "there is no such file; put it beside the case file, or give bins or climate instead"),
        ("/etc/passwd", "leads out of the folder of the case; name a file beside the case"),
        ("../plant.csv", "leads out of the folder"),
        ("a/../../plant.csv", "leads out of the folder"),
        ("C:/hours.csv", "leads out of the folder"),
        ("a\\\\hours.csv", "has a backslash"),
        ("link.csv", "is a link out of the folder"),
        ("folder", "this is a folder; name a CSV file with 8760 hours"),
        ("huge.csv", "larger than 5 MB; 8760 hours take less than 1 MB"),
    ],
)
def test_a_file_that_cannot_be_had_is_a_fault_of_its_key(tmp_path, name, words):
    """No file, none of the case's folder, none of a sensible size: said at the line of the key."""
    folder = tmp_path / "cases"
    (folder / "folder").mkdir(parents=True)
    (tmp_path / "secret.csv").write_text(csv(ROWS), "utf-8")
    (folder / "link.csv").symlink_to(tmp_path / "secret.csv")
    with (folder / "huge.csv").open("wb") as file:
        file.truncate(50_000_000)
    (folder / "plant.toml").write_text(CASE.replace("coast.csv", name), "utf-8")
    with pytest.raises(CaseFileError) as refusal:
        read_case(folder / "plant.toml")

    (problem,) = refusal.value.problems
    assert (problem.line, problem.key, problem.path) == (KEY_LINE, "year.weather", "")
    assert words in problem.text


def test_a_file_in_a_folder_beside_the_case_is_read(tmp_path):
    """A folder below that of the case is beside it too."""
    (tmp_path / "hours").mkdir()
    (tmp_path / "hours" / "coast.csv").write_text(csv(ROWS), "utf-8")
    (tmp_path / "plant.toml").write_text(CASE.replace("coast.csv", "hours/coast.csv"), "utf-8")

    assert read_case(tmp_path / "plant.toml").weather.hours.size == 8760


def test_what_is_no_text_is_refused_at_its_line(faults):
    """A spreadsheet saved in another encoding is told where it stops being UTF-8."""
    ((line, _, text),) = faults(b"hour,dry_bulb [degC]\n1,4\n2,\xb0\n")

    assert line == 3
    assert "UTF-8" in text


@pytest.mark.parametrize("way", ["condenser", "evaporator"])
def test_what_an_exchanger_follows_needs_its_column(read, way):
    """A wet bulb that no column gives is asked for at the key; with the column it is read."""
    follows = f'{way}_follows = "wet bulb"\n'
    with pytest.raises(CaseFileError, match=r"has no column wet_bulb; add it"):
        read(csv(ROWS), follows)

    assert read(csv([f"{row},0" for row in ROWS], f"{HEADING},wet_bulb [degC]"), follows).T_wet_bulb_K is not None


def test_an_invented_climate_has_the_mean_and_the_warmest_hour_it_says(case):
    """Both sines vanish in the mean; the warmest hour is at 15 h of the warmest day."""
    weather = case(
        CASE.replace(
            'weather = "coast.csv"',
            'climate = {mean = "11 degC", yearly_swing = "8 K", daily_swing = "4 K", warmest_day = 200}',
        )
    ).weather

    assert weather.T_dry_bulb_K.mean() == pytest.approx(284.15, abs=1e-9)
    assert weather.T_dry_bulb_K.max() == pytest.approx(284.15 + 12.0, abs=0.05)
    assert divmod(int(weather.T_dry_bulb_K.argmax()), 24) in [(199, 14), (199, 15)]  # day 200, on both sides of 15 h
    assert weather.T_dry_bulb_K.min() == pytest.approx(284.15 - 12.0, abs=0.05)


def test_bins_are_conditions_with_their_hours(case):
    """A bin has no hour of the day and no month."""
    bins = '[["2 degC", 4000], ["12 degC", 4000], ["24 degC", 760.2]]'
    weather = case(CASE.replace('weather = "coast.csv"', f"bins = {bins}")).weather

    assert weather.T_dry_bulb_K == pytest.approx([275.15, 285.15, 297.15])
    assert weather.hours.tolist() == [4000.0, 4000.0, 760.2]
    assert (weather.hour_of_day, weather.month) == (None, None)


@settings(deadline=None, max_examples=60, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(data=st.data())
def test_a_broken_file_is_refused_with_its_lines(tmp_path, data):
    """Whatever is put in place of some bytes, the file is read or refused line by line, fit for a terminal."""
    good = csv([f"{row},0" for row in ROWS], f"{HEADING},wet_bulb [degC]").encode()
    place = data.draw(st.integers(0, 60) | st.integers(0, len(good)))
    odd = data.draw(st.binary(max_size=20) | st.text("0123456789,;.\n\r\t -+eE[]\"#naif'", max_size=20).map(str.encode))
    path = tmp_path / "coast.csv"
    path.write_bytes(good[:place] + odd + good[place + data.draw(st.integers(0, 40)) :])
    try:
        hours, said = weather_of_file(str(path), "coast.csv").hours.sum(), []
    except CaseFileError as refusal:
        hours, said = 8760.0, refusal.problems

    assert hours == 8760.0
    assert all(problem.line for problem in said)
    assert all(problem.located("coast.csv").isprintable() for problem in said)

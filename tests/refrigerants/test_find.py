"""Finding a refrigerant by name, and the cost of importing the room."""

import subprocess
import sys

import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.errors import UnknownRefrigerantError
from retrofit.refrigerants import designations, find, source


@pytest.mark.parametrize("spelling", ["R404A", "r404a", "R-404A", "404A", "404a", " R 404A ", "r-404-a", "R_404A"])
def test_common_spellings_find_the_same(spelling):
    """Case, hyphen, blanks and the leading R do not matter."""
    assert find(spelling).designation == "R404A"


@pytest.mark.parametrize("spelling", ["R1234ze(E)", "1234ze(e)", "R-1234ze(E)", "r1234zee"])
def test_isomer_spellings(spelling):
    """The isomer letter is needed, its brackets are not."""
    assert find(spelling).designation == "R1234ze(E)"


@pytest.mark.parametrize("name", designations())
def test_every_designation_finds_itself(name):
    """Each designation, and its form for readers, finds its own refrigerant."""
    assert find(name).designation == name
    assert find(find(name).display_name).designation == name


@pytest.mark.parametrize(("name", "shown"), [("R404A", "R-404A"), ("RE170", "R-E170"), ("R1234yf", "R-1234yf")])
def test_form_for_readers(name, shown):
    """The form for readers has a hyphen after the R."""
    assert find(name).display_name == shown


@pytest.mark.parametrize(
    ("wrong", "offered"),
    [
        ("R404B", "R404A"),
        ("R1234ze", "R1234ze(E)"),
        ("R1233zd", "R1233zd(E)"),
        ("ammonia", "R717"),
        ("propane", "R290"),
    ],
)
def test_misspelt_name_is_refused_with_close_matches(wrong, offered):
    """An unknown name is refused with the nearest designations; a plain chemical name offers its number."""
    with pytest.raises(UnknownRefrigerantError, match="did you mean") as caught:
        find(wrong)

    assert offered in caught.value.close
    assert offered in str(caught.value)


def _found(text):
    try:
        return find(text).designation
    except UnknownRefrigerantError:
        return None


@given(st.text(max_size=12))
def test_any_text_is_found_or_refused(text):
    """Whatever is typed, the answer is a refrigerant of the catalogue or our own refusal."""
    assert _found(text) in (None, *designations())


def test_lubricants_part_into_families():
    """Lubricants come one by one, and none where none is stated."""
    assert find("R22").lubricant_list == ("MO", "AB")
    assert find("R115").lubricant_list == ()


def test_unknown_source_key_is_refused():
    """A key that the bibliography does not hold raises KeyError."""
    with pytest.raises(KeyError, match="Nobody1900"):
        source("Nobody1900")


def test_import_brings_no_heavy_library_and_reads_no_table():
    """Importing the room loads neither numpy nor the property library, and opens no data file."""
    code = (
        "import sys, retrofit.refrigerants as room\n"
        "from retrofit.refrigerants import tables\n"
        "print('numpy' in sys.modules, 'CoolProp' in sys.modules, tables.read_table.cache_info().currsize)"
    )
    printed = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout

    assert printed.split() == ["False", "False", "0"]

"""The keys of [money]: sums as one number or three, prices by refrigerant, and a currency that is only named."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.case.money import SIGNS, Range, RangeValue, _is_letter
from retrofit.errors import QuantityError

START = """\
[plant]
refrigerant = "R404A"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compare]
candidates = ["R448A"]
[money]
"""
EURO = 'currency = "EUR"\n'


def test_money_as_written(case):
    """A single sum is three times the same; prices are found by the normal spelling of the refrigerant."""
    money = case(
        START + EURO + 'tariff = [0.15, 0.18, 0.25]\nleak_check = 250\ndiscount_rate = "6 %"\n'
        'refrigerant_price = {r-448a = [25, 30, 45], R404A = 90}\n[money.change]\nlabour = 6000\ncontingency = "10 %"\n'
    ).money

    assert money.currency == "EUR"
    assert money.tariff == Range(0.15, 0.18, 0.25)
    assert money.leak_check == Range(250.0, 250.0, 250.0)
    assert dict(money.refrigerant_price) == {"R448A": Range(25.0, 30.0, 45.0), "R404A": Range(90.0, 90.0, 90.0)}
    assert (money.change.labour.base, money.change.oil) == (6000.0, None)
    assert money.change.contingency == pytest.approx(0.10)
    assert money.discount_rate == pytest.approx(0.06)


def test_money_assumes_no_price(case):
    """No price has a default: what is left out is not counted. Without a rate nothing is discounted, and it says so."""
    read = case(START + EURO)

    assert [(d.key, d.shown_text) for d in read.defaults if d.key.startswith("money.")] == [
        ("money.discount_rate", "0 %")
    ]
    assert read.money.tariff is None


@pytest.mark.parametrize(
    ("money", "option", "is_assumed"),
    [
        ("", "new_plant = 9000", True),
        ("", "leak_rate = '2 %'", False),
        ("", "new_plant = 9000\nplant_life = '20 years'", False),
        ("", "new_plant = 9000\nresidual_value = 2000", False),
        ("new_plant_life = '20 years'\n", "new_plant = 9000", False),
        ("[money.change]\nnew_plant = 9000\n", "leak_rate = '2 %'", True),
    ],
)
def test_the_life_of_a_new_plant_is_assumed_where_a_residual_value_rests_on_it(case, money, option, is_assumed):
    """15 years stand among the assumptions only if a new plant is priced and nothing better is given."""
    read = case(START + EURO + money + f"[options.R448A]\n{option}\n")

    assert [d.shown_text for d in read.defaults if d.key == "money.new_plant_life"] == ["15 years"] * is_assumed


@pytest.mark.parametrize(
    ("line", "key", "words"),
    [
        ("tariff = 0.18", "money.currency", "is missing; add currency to [money]"),
        (EURO + 'tariff = "0.18 EUR"', "money.tariff", "is a text; write a number without quotes"),
        (EURO + "tariff = -1", "money.tariff", "outside what is allowed"),
        (EURO + "tariff = nan", "money.tariff", "sensible size"),
        (EURO + "tariff = [1, 2]", "money.tariff", "low, base and high are needed"),
        (EURO + "tariff = [3, 2, 1]", "money.tariff", "do not rise"),
        (EURO + 'discount_rate = "60 %"', "money.discount_rate", "0 % to 50 %"),
        (EURO + "refrigerant_price = 30", "money.refrigerant_price", "a table of prices is needed"),
        (EURO + "refrigerant_price = {R448 = 30}", "money.refrigerant_price", "did you mean"),
        (EURO + "refrigerant_price = {R448A = 30, r448a = 31}", "money.refrigerant_price", "in the table twice"),
        (EURO + 'refrigerant_price = {R448A = "dear"}', "money.refrigerant_price", '"R448A": "dear" is a text'),
        (EURO + "change = 5", "money.change", "begin it with [money.change]"),
        (EURO + "labour = 5", "money.labour", "belongs in [money.change]"),
        (EURO + "[money.change]\nlabur = 5", "money.change.labur", 'did you mean "labour"'),
        ('currency = "a very long currency"', "money.currency", "1 to 12"),
    ],
)
def test_a_wrong_line_of_money_is_refused(complaints, line, key, words):
    """Each is named with its key and says what is allowed."""
    found = [text for _, where, text in complaints(START + line + "\n") if where == key]

    assert len(found) == 1, found
    assert words in found[0]


@given(st.lists(st.floats(0.0, 1e12), min_size=3, max_size=3))
def test_three_numbers_are_a_range_if_they_rise(numbers):
    """Sorted numbers are held as they are; others are refused."""
    low, base, high = sorted(numbers)

    assert RangeValue().read([low, base, high]) == (low, base, high)
    if numbers != sorted(numbers):
        with pytest.raises(QuantityError, match="do not rise"):
            RangeValue().read(numbers)


@pytest.mark.parametrize("currency", ["EUR", "€", "US$", "£", "zł", "Kč", "руб.", "₹", "CHF", "kr"])
def test_a_currency_is_printed_as_it_is_written(case, currency):
    """Codes, signs and short words of many countries."""
    assert case(START + f'currency = "{currency}"\n').money.currency == currency


@pytest.mark.parametrize("currency", ["=1+2", "+EUR", "-1", "@SUM", "₿", "元", "E|R", "E=R", "1", "\U0001f4b0"])
def test_a_currency_that_some_page_cannot_print_is_refused(complaints, currency):
    """A formula in a spreadsheet, or a sign that the letters of the charts lack."""
    ((_, key, text),) = complaints(START + f'currency = "{currency}"\n')

    assert key == "money.currency"
    assert "ISO 4217" in text


def test_every_letter_of_a_currency_is_in_the_letters_of_the_charts():
    """The characters that the font's own table has, as the drawing library reads it."""
    from matplotlib.font_manager import FontProperties, findfont
    from matplotlib.ft2font import FT2Font

    has = set(FT2Font(findfont(FontProperties(family="DejaVu Sans"))).get_charmap())
    allowed = {ord(sign) for sign in SIGNS} | {place for place in range(0x3000) if _is_letter(chr(place))}

    assert allowed <= has

"""What a change costs, what a year costs, and how one option differs from another."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated, Any, NamedTuple

from pydantic import ConfigDict

from retrofit.case.numbers import Number
from retrofit.case.table import Table, WhyDefault, key
from retrofit.case.values import FileValue, Quantity, Text, designation_of
from retrofit.errors import QuantityError
from retrofit.refrigerants import with_hyphens
from retrofit.units import described, quoted

LARGEST_SUM = 1e12
# Signs of currencies in the letters that the charts are drawn with (DejaVu Sans).
SIGNS = "$¢£¤¥฿₠₡₢₣₤₥₦₧₨₩₪₫€₭₮₯₰₱₲₳₴₵₸₹₺₽"


class Range(NamedTuple):
    """A sum of money: lowest, base and highest; three times the same if only one is given. [currency]"""

    low: float
    base: float
    high: float


@dataclass(frozen=True)
class RangeValue(FileValue):
    """A bare number, in the currency of the case, or three of them: low, base, high."""

    number = Number(0, LARGEST_SUM, "sums lie within it")

    def sample(self) -> str:
        """Return a sum, as text."""
        return "[900, 1200, 1800]"

    def form(self) -> str:
        """Return how a sum is written."""
        return f"1200, or low, base and high: {self.sample()}"

    def read(self, value: object, p_ambient_Pa: float | None = None) -> Range:
        """Return the range."""
        if not isinstance(value, list):
            single = float(self.number.read(value))
            return Range(single, single, single)
        if len(value) != 3:
            raise QuantityError(f"{described(value)} stands where low, base and high are needed, as in {self.sample()}")
        low, base, high = (float(self.number.read(item)) for item in value)
        if not low <= base <= high:
            raise QuantityError(
                f"{low:g}, {base:g}, {high:g} do not rise; write low, base and high, as in {self.sample()}"
            )
        return Range(low, base, high)

    def json_schema(self) -> dict[str, Any]:
        """Return a number, or a list of three."""
        number = self.number.json_schema()
        return {"anyOf": [number, {"type": "array", "items": number, "minItems": 3, "maxItems": 3}]}


@dataclass(frozen=True)
class PricesValue(FileValue):
    """A table of designation and price."""

    price = RangeValue()

    def sample(self) -> str:
        """Return a table, as text."""
        return "{R448A = [25, 30, 45]}"

    def form(self) -> str:
        """Return a table, as text."""
        return self.sample()

    def read(self, value: object, p_ambient_Pa: float | None = None) -> tuple[tuple[str, Range], ...]:
        """Return the prices."""
        if not isinstance(value, Mapping):
            raise QuantityError(f"{described(value)} stands where a table of prices is needed, as in {self.sample()}")
        found: dict[str, Range] = {}
        for name, price in value.items():
            designation = designation_of(name)
            if designation in found:
                raise QuantityError(f"{with_hyphens(designation)} is in the table twice; leave one out")
            try:
                found[designation] = self.price.read(price)
            except QuantityError as error:
                raise QuantityError(f"{quoted(name)}: {error}") from None
        return tuple(found.items())

    def json_schema(self) -> dict[str, Any]:
        """Return a table of prices."""
        return {"type": "object", "additionalProperties": self.price.json_schema()}


PLANT_LIFE = Quantity("years", "0 years", "60 years", "plants last within it", above_low=True, example="15 years")
PLANT_LIFE_WHY = (
    "lower end of the 15 to 20 years that EN 15459-1 lists for refrigeration and air-conditioning units (from memory): "
    "a shorter life grants less residual value"
)
_SUM = Annotated[Range | None, RangeValue()]
_SHARE = Quantity("fraction", "0 %", "100 %", "a share of the first cost", example="10 %")


class Items(Table):
    """First cost, item by item; whatever is left out is not counted and said so."""

    recovery: _SUM = key("recovery", "Recovery of the old charge, weighing and disposal.", None)
    refrigerant: _SUM = key("refrigerant", "New charge; charge times price if left out and the price is given.", None)
    reclaim_credit: _SUM = key("reclaim_credit", "What the old charge brings, taken off the first cost.", None)
    oil: _SUM = key("oil", "Oil and oil changes.", None)
    driers: _SUM = key("driers", "Filter driers.", None)
    valves: _SUM = key("valves", "Expansion valves, nozzles and solenoids.", None)
    seals: _SUM = key("seals", "Seals and gaskets.", None)
    relief: _SUM = key("relief", "Relief valves and vent lines.", None)
    controls: _SUM = key("controls", "Controls, software and sensors.", None)
    labour: _SUM = key("labour", "Labour of the change, commissioning and drawings.", None)
    downtime: _SUM = key("downtime", "Product moved, hired cooling and lost trade.", None)
    safety_works: _SUM = key("safety_works", "Detection, ventilation, electrical and other safety works.", None)
    new_plant: _SUM = key("new_plant", "The new plant, for an option that replaces it.", None)
    contingency: Annotated[float | None, _SHARE] = key("contingency", "Added for what nobody foresaw.", None)


class Option(Items):
    """What one option costs and how it differs; laid over `[money.change]` item by item."""

    leak_rate: Annotated[
        float | None, Quantity("fraction", "0 %", "100 %", "a share of the full charge", example="5 %")
    ] = key("leak_rate", "Share of the charge lost in a year with this option.", None)
    charge_kg: Annotated[
        float | None, Quantity("mass", "0 kg", "1000000 kg", "a plant that runs has one", above_low=True)
    ] = key(
        "charge",
        "Charge of the plant with this option.",
        None,
        where="maker of the new plant, or an estimate by volume",
    )
    largest_circuit_kg: Annotated[
        float | None, Quantity("mass", "0 kg", "1000000 kg", "a plant that runs has one", above_low=True)
    ] = key(
        "largest_circuit",
        "Charge of the largest circuit of a new plant: what one leak can release.",
        None,
        where="maker of the new plant",
    )
    seasonal_cop: Annotated[
        float | None, Number(0.2, 30, "seasonal figures of plants lie within it", example="3.1")
    ] = key("seasonal_cop", "Seasonal COP of a new plant, fans and pumps included, from its maker.", None)
    peak_power_W: Annotated[
        float | None, Quantity("power", "0 kW", "100 MW", "plants lie within it", above_low=True, example="40 kW")
    ] = key("peak_power", "Highest electrical power of a new plant, beside its maker's seasonal COP.", None)
    plant_life_years: Annotated[float | None, PLANT_LIFE] = key(
        "plant_life", "Years that this new plant lasts, for its residual value; that of [money] if left out.", None
    )
    residual_value: _SUM = key(
        "residual_value",
        "What this new plant is worth at the end of the remaining life; by straight line over its life if left out.",
        None,
    )


class Options(Table):
    """Options by refrigerant: candidates, or today's for keeping the plant with its repairs."""

    model_config = ConfigDict(frozen=True, extra="allow", defer_build=True)
    __pydantic_extra__: dict[str, Option]

    @property
    def by_refrigerant(self) -> Mapping[str, Option]:
        """The options given, by designation."""
        return {designation_of(name): option for name, option in self.__pydantic_extra__.items()}

    def named(self, name: str) -> Option | None:
        """Return the option of a refrigerant, however it is spelled; None if it has none.

        Args:
            name: Its designation, or another spelling of it. [-]
        Raises: QuantityError if the catalogue has no such refrigerant.
        """
        return self.by_refrigerant.get(designation_of(name))


@dataclass(frozen=True)
class CurrencyValue(FileValue):
    """How a currency is to be printed: letters and signs that charts have, and nothing that a spreadsheet reckons."""

    def sample(self) -> str:
        """Return a currency, as text."""
        return "EUR"

    def read(self, value: object, p_ambient_Pa: float | None = None) -> str:
        """Return the currency."""
        text = Text(12).read(value)
        strange = next((sign for sign in text if not (sign in " ." or sign in SIGNS or _is_letter(sign))), None)
        if strange is not None or not (text[0] in SIGNS or _is_letter(text[0])):
            raise QuantityError(
                f"{quoted(text)} cannot be printed everywhere: {quoted(strange or text[0])} is not a letter, or not a "
                f'sign of {SIGNS}; write its code of three letters (ISO 4217), as in "{self.sample()}"'
            )
        return text

    def json_schema(self) -> dict[str, Any]:
        """Return the least length."""
        return {"type": "string", "minLength": 1}


def _is_letter(sign: str) -> bool:
    """Say whether a sign is a letter of the alphabets that charts have: Latin, Greek, Cyrillic."""
    return sign.isalpha() and (ord(sign) < 0x250 or 0x386 <= ord(sign) <= 0x3CE or 0x400 <= ord(sign) <= 0x45F)


class Money(Table):
    """Prices, in a currency that the user names; nothing is converted."""

    currency: Annotated[str, CurrencyValue()] = key("currency", "Currency, as it is to be printed.")
    tariff: _SUM = key("tariff", "Price of a kWh.", None)
    demand_charge: _SUM = key("demand_charge", "Yearly charge for each kW of peak power.", None)
    discount_rate: Annotated[
        float,
        Quantity("fraction", "0 %", "50 %", "rates lie within it", example="6 %"),
        WhyDefault("nothing is discounted unless the case gives a rate"),
    ] = key("discount_rate", "Discount rate of a year, for life cost and net present value.", "0 %")
    new_plant_life_years: Annotated[float, PLANT_LIFE] = key(
        "new_plant_life", "Years that a new plant lasts, for its residual value by straight line.", "15 years"
    )
    refrigerant_price: Annotated[tuple[tuple[str, Range], ...] | None, PricesValue()] = key(
        "refrigerant_price", "Price of a kilogram, by refrigerant.", None
    )
    leak_check: _SUM = key("leak_check", "Cost of one leak check.", None)
    levy: _SUM = key("levy", "Levy or tax for each tonne of CO2 equivalent of refrigerant bought.", None)
    yearly_service: _SUM = key("yearly_service", "Other yearly service, the same for every option.", None)
    change: Items | None = key("change", "First cost of any change; an option's own items go before it.", None)

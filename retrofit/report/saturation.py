"""A pressure-temperature table as text and as the JSON contract `retrofit.saturation/1`."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import asdict, dataclass
from typing import Any

from retrofit.errors import QuantityError
from retrofit.refrigerants import Caution, cautions_for
from retrofit.report.text_table import Column, paragraph, text_table
from retrofit.study.saturation import SaturationRow, SaturationTable
from retrofit.units import STANDARD_ATMOSPHERE_PA, UnitSystem, parse_quantity, quoted, standard_atmosphere_Pa

MOST_ROWS = 5000


def temperature_steps(start: str, stop: str, step: str) -> list[float]:
    """Return the temperatures from start to stop, both included where the step meets them. [K]

    Args:
        start: First temperature, as text with its unit.
        stop: Last temperature, as text with its unit.
        step: Temperature difference, as text with its unit.
    Raises: QuantityError if a text is no such quantity, the step is not above 0 K, the temperatures fall or
        lie below absolute zero, or there would be more than `MOST_ROWS` rows.
    """
    first, last = (parse_quantity(text, "temperature") for text in (start, stop))
    width = parse_quantity(step, "temperature difference")
    if width <= 0.0:
        raise QuantityError(f'step {quoted(step)} is not above 0 K; give for example "1 K"')
    if last < first:
        raise QuantityError(f"{quoted(stop)} is below {quoted(start)}; give the lower temperature with --from")
    if first <= 0.0:
        raise QuantityError(f"{quoted(start)} is not above absolute zero; give a temperature of a plant with --from")
    if (last - first) / width >= MOST_ROWS:
        raise QuantityError(f"these make more than the {MOST_ROWS} rows that are printed; give a larger --step")
    count = int((last - first) / width + 1e-9) + 1
    return [first + i * width for i in range(count)]


@dataclass(frozen=True)
class Air:
    """The air that gauge pressures are counted from.

    Attributes:
        altitude_m: Height above sea level.
        p_Pa: Pressure of the standard atmosphere there.
    """

    altitude_m: float = 0.0
    p_Pa: float = STANDARD_ATMOSPHERE_PA


def air_at(altitude: str) -> Air:
    """Return the air at an altitude.

    Args:
        altitude: Height above sea level, as text with its unit.
    Raises: QuantityError if the text is no length, or outside the standard atmosphere.
    """
    altitude_m = parse_quantity(altitude, "length")
    return Air(altitude_m, standard_atmosphere_Pa(altitude_m))


def saturation_json(table: SaturationTable, air: Air = Air()) -> dict[str, Any]:
    """Return a table as the JSON object of the contract; what is not known is None.

    Args:
        table: The table; its pressures are absolute.
        air: The air that a reader's gauge counts from.
    """
    return {
        "schema": "retrofit.saturation/1",
        "refrigerant": table.refrigerant.designation,
        "model": {"grade": table.grade.word, "text": table.grade.text},
        "p_ambient_Pa": air.p_Pa,
        "rows": [asdict(row) for row in table.rows],
        "cautions": [asdict(caution) for caution in cautions_for(table.refrigerant)],
    }


def saturation_text(
    table: SaturationTable, units: UnitSystem, columns: int, strong: Callable[[str], str], air: Air = Air()
) -> str:
    """Return a table as text, with the columns named for what they are used for.

    Args:
        table: The table.
        units: The reader's units.
        columns: Width to wrap prose to. [characters]
        strong: How a heading is set off.
        air: The air that gauge pressures are counted from.
    """
    heading = strong(f"{table.refrigerant.display_name}: saturation pressure over temperature")
    where = "at sea level"
    if air.altitude_m:
        height, pressure = units.text("length", air.altitude_m), units.text("pressure", air.p_Pa)
        where = f"at {height} {units.label('length')}, in air of {pressure} {units.label('pressure')}"
    use = f"Superheat is counted from the dew column, subcooling from the bubble column; gauge pressures {where}."
    grade = f"Grade of the model: {table.grade.text}."
    cautions = [_caution(item, columns) for item in cautions_for(table.refrigerant)]
    prose = [paragraph(use, columns), paragraph(grade, columns)]
    return "\n".join(
        [heading, *cautions, *prose, "", _table(table.rows, units, air.p_Pa), *_reasons(table.rows, units)]
    )


def _caution(caution: Caution, columns: int) -> str:
    return paragraph(f"{caution.level.upper()}  {caution.title}. {caution.text}", columns, indent="  ", first="")


def _table(rows: tuple[SaturationRow, ...], units: UnitSystem, air_Pa: float) -> str:
    kinds = (
        ("Bubble", "pressure", lambda row: row.p_bubble_Pa),
        ("Bubble", "gauge pressure", lambda row: _gauge(row.p_bubble_Pa, air_Pa)),
        ("Dew", "pressure", lambda row: row.p_dew_Pa),
        ("Dew", "gauge pressure", lambda row: _gauge(row.p_dew_Pa, air_Pa)),
        ("Liquid", "density", lambda row: row.density_bubble_kg_per_m3),
        ("Vapour", "density", lambda row: row.density_dew_kg_per_m3),
    )
    heads = [Column("Temp.", units.label("temperature"))]
    heads += [Column(title, units.label(kind)) for title, kind, _ in kinds]
    cells = [units.column("temperature", [row.T_K for row in rows])]
    cells += [units.column(kind, [value(row) for row in rows]) for _, kind, value in kinds]
    return text_table(heads, list(zip(*cells, strict=True)))


def _gauge(p_Pa: float | None, air_Pa: float) -> float | None:
    return None if p_Pa is None else p_Pa - air_Pa


def _reasons(rows: tuple[SaturationRow, ...], units: UnitSystem) -> list[str]:
    missing = [row for row in rows if row.reason]
    if not missing:
        return []
    return ["", f"{len(missing)} of {len(rows)} rows outside the model's range: {missing[0].reason}."]

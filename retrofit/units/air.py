"""The pressure of the air around a plant, from which its gauges count."""

from __future__ import annotations

from retrofit.errors import QuantityError
from retrofit.units.table import STANDARD_GRAVITY_M_PER_S2

STANDARD_ATMOSPHERE_PA = 101_325.0


def standard_atmosphere_Pa(altitude_m: float) -> float:
    """Return the air pressure of the standard atmosphere at an altitude.

    Args:
        altitude_m: Height above mean sea level, -1000 to 11 000 m. [m]
    Returns: Absolute pressure; the weather moves the true one by a few percent. [Pa]
    Raises: QuantityError outside that range.
    Source: ICAO Doc 7488 (standard atmosphere), troposphere: T = 288.15 K - 0.0065 K/m h,
        p = 101 325 Pa (T/288.15 K)^(g M / (R L)); g = 9.806 65 m/s², R/M = 287.052 87 J/(kg K).
        The altitude is taken as geopotential; the difference is below 0.1 % of the height.
    >>> round(standard_atmosphere_Pa(0.0))
    101325
    """
    if not -1000.0 <= altitude_m <= 11_000.0:
        raise QuantityError(f"an altitude of {altitude_m:g} m is outside -1000 to 11 000 m")
    lapse_K_per_m = 0.0065
    exponent = STANDARD_GRAVITY_M_PER_S2 / (287.052_87 * lapse_K_per_m)
    ratio: float = (1.0 - lapse_K_per_m * altitude_m / 288.15) ** exponent
    return STANDARD_ATMOSPHERE_PA * ratio

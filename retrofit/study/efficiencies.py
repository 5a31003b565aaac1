"""Efficiencies of the existing compressor with each refrigerant: the one place where they are decided.

With the existing refrigerant they are what the case gives: constants, points or a polynomial. They are carried over to
another one by the three factors of `equipment.refrigerant_change` once the case says what kind of machine it is, or
gives the machine's own curve by points or a polynomial; else the constants hold for every refrigerant.
"""

from __future__ import annotations

from collections.abc import MutableMapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.case import Case
from retrofit.case.compressor import Compressor, Polynomial
from retrofit.equipment.compressor import EfficiencyCurve
from retrofit.equipment.polynomial import CompressorRating, efficiencies_of
from retrofit.equipment.refrigerant_change import DISPLACEMENT_KINDS, Efficiencies, Pair, changed, shape_of
from retrofit.errors import NoSolutionError
from retrofit.properties import Fluid

# Temperatures that a compressor may be asked at, from those of the case: a year's, pull-down, the hottest day.
COLDER_K, WARMER_K, HOTTER_K = 35.0, 35.0, 40.0


def efficiency_model(case: Case, existing: Fluid) -> Efficiencies:
    """Return the efficiencies of the existing compressor from the case: constants, points or a polynomial.

    Args:
        case: The case.
        existing: The refrigerant in the plant, that a polynomial is for.
    Raises: QuantityError if points or coefficients are impossible; NoSolutionError if a polynomial comes
        without a swept volume.
    """
    compressor = case.compressor
    if compressor.polynomial is not None:
        if compressor.swept_volume_m3_per_s is None:
            raise NoSolutionError(
                "a compressor's polynomial says nothing on volumetric efficiency without its swept volume; give "
                "`swept_volume` in [compressor]"
            )
        return efficiencies_of(_rating(compressor.polynomial), existing, compressor.swept_volume_m3_per_s)
    if compressor.efficiency_points is not None:
        return EfficiencyCurve.through([tuple(point) for point in compressor.efficiency_points])
    return EfficiencyCurve.constant(compressor.isentropic_efficiency, compressor.volumetric_efficiency)


def _rating(table: Polynomial) -> CompressorRating:
    return CompressorRating(
        units=table.units,
        T_evap_range_K=(table.T_evap_range_K[0], table.T_evap_range_K[1]),
        T_cond_range_K=(table.T_cond_range_K[0], table.T_cond_range_K[1]),
        capacity=table.capacity,
        mass_flow=table.mass_flow,
        power=table.power,
        current=table.current,
        superheat_K=table.superheat_K,
        return_gas_K=table.return_gas_K,
        subcooling_K=table.subcooling_K or 0.0,
        voltage_V=table.voltage_V,
        phases=table.phases,
        power_factor=table.power_factor,
    )


def follows_refrigerant(compressor: Compressor) -> bool:
    """Return whether the efficiencies of a compressor differ between refrigerants: see the head of this module.

    Args:
        compressor: What the case says of it.
    """
    return compressor.kind in DISPLACEMENT_KINDS or (has_curve(compressor) and compressor.kind != "centrifugal")


def has_curve(compressor: Compressor) -> bool:
    """Return whether the case gives a compressor's own curve over the pressure ratio.

    Args:
        compressor: What the case says of it.
    """
    return compressor.efficiency_points is not None or compressor.polynomial is not None


@dataclass(frozen=True)
class _Scaled:
    """Efficiencies of a compressor times factors, at most 1."""

    model: Efficiencies
    factors: tuple[ArrayLike, ArrayLike]

    def at(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> Pair:
        found = self.model.at(pressure_ratio, p_suction_Pa)
        isentropic, volumetric = (
            np.minimum(value * np.asarray(factor), 1.0) for value, factor in zip(found, self.factors, strict=True)
        )
        return isentropic, volumetric

    def covers(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> NDArray[np.bool_]:
        return self.model.covers(pressure_ratio, p_suction_Pa)


@dataclass(frozen=True, eq=False)
class CompressorModel:
    """Efficiencies of the existing compressor with any refrigerant.

    Attributes:
        case: The case; where its numbers are arrays, the first of them says over what range efficiencies carry over.
        existing: The refrigerant in the plant.
        own: Efficiencies with it.
        factors: Factors on the isentropic and the volumetric efficiency; None for none.
    """

    case: Case
    existing: Fluid
    own: Efficiencies
    factors: tuple[ArrayLike, ArrayLike] | None = None
    _known: MutableMapping[str, Efficiencies] = field(default_factory=dict, repr=False)

    def of(self, behaviour: Fluid) -> Efficiencies:
        """Return the efficiencies with a refrigerant; with the existing one exactly those of the case.

        Args:
            behaviour: The refrigerant.
        """
        name = behaviour.designation
        if name not in self._known:
            found = self.own if name == self.existing.designation else self._with(behaviour)
            self._known[name] = found if self.factors is None else _Scaled(found, self.factors)
        return self._known[name]

    def _with(self, behaviour: Fluid) -> Efficiencies:
        compressor, duty = self.case.compressor, self.case.duty
        if not follows_refrigerant(compressor):
            return self.own
        T_evap, T_cond = _first(duty.T_evap_K), _first(duty.T_cond_K)
        drop_K = self.case.evaporator.pressure_drop_K if self.case.evaporator else 0.0
        superheat = _first(duty.useful_superheat_K) + _first(duty.line_superheat_K) + _first(drop_K)
        return changed(
            self.own,
            shape_of(compressor.kind, self.own),
            self.existing,
            behaviour,
            superheat,
            (T_evap - COLDER_K, T_evap + WARMER_K),
            T_cond + HOTTER_K,
        )


def _first(value: ArrayLike) -> float:
    return float(np.asarray(value, dtype=float).flat[0])

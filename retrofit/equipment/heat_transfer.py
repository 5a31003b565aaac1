"""How another refrigerant changes the conductance of an existing exchanger, as a ratio to today's refrigerant.

The film of the refrigerant is computed for both by the same correlations and geometry: a mean over the quality, two
correlations each, their geometric mean. What the film is of the whole resistance is a share estimated for the kind of
exchanger. So a ratio carries what differs between refrigerants, not what an exchanger does; it is calculated, not
measured. Oil, dry walls, microfins, pressure drop and uneven distribution are not in it.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.properties import Fluid

FloatArray = NDArray[np.float64]

GRAVITY = 9.80665
QUALITIES = np.linspace(0.2, 0.9, 15)  # equal steps of quality are equal steps of heat
SUPERHEAT_FOR_CP_K = 2.0  # over which the specific heats of saturated states are taken
HYDROCARBONS = ("R290", "R600", "R600a", "R1270", "R601", "R170")  # whose border of annular flow lies lower


@dataclass(frozen=True)
class Saturated:
    """Saturated liquid and vapour of a refrigerant at a pressure; arrays of one shape.

    Attributes:
        p_reduced: Pressure over the critical one.
        density_l, density_g, viscosity_l, viscosity_g, conductivity_l, conductivity_g, heat_l, heat_g: Of liquid and
            vapour: kg/m3, Pa s, W/(m K), J/(kg K).
        tension: Surface tension. [N/m]
        latent: Enthalpy from bubble to dew point. [J/kg]
        glide_K: Dew less bubble temperature.
        molar_mass: In kg/kmol.
        is_hydrocarbon: Whether it is a pure hydrocarbon.
    """

    p_reduced: FloatArray
    density_l: FloatArray
    density_g: FloatArray
    viscosity_l: FloatArray
    viscosity_g: FloatArray
    conductivity_l: FloatArray
    conductivity_g: FloatArray
    heat_l: FloatArray
    heat_g: FloatArray
    tension: FloatArray
    latent: FloatArray
    glide_K: FloatArray
    molar_mass: float
    is_hydrocarbon: bool

    @property
    def prandtl_l(self) -> FloatArray:
        """Return the Prandtl number of the liquid. [-]"""
        return self.heat_l * self.viscosity_l / self.conductivity_l

    @property
    def prandtl_g(self) -> FloatArray:
        """Return the Prandtl number of the vapour. [-]"""
        return self.heat_g * self.viscosity_g / self.conductivity_g


def saturated(fluid: Fluid, p_Pa: ArrayLike) -> Saturated:
    """Return what the correlations need of a refrigerant at a pressure; NaN where it is not known.

    Args:
        fluid: The refrigerant.
        p_Pa: Pressure. [Pa]
    """
    inside = fluid.as_lenient()
    bubble, dew = inside.bubble(p_Pa), inside.dew(p_Pa)
    step = SUPERHEAT_FOR_CP_K
    cooled, warmed = inside.liquid(p_Pa, step), inside.vapour(p_Pa, step)
    return Saturated(
        p_reduced=bubble.p_Pa / fluid.p_critical_Pa,
        density_l=bubble.density_kg_per_m3,
        density_g=dew.density_kg_per_m3,
        viscosity_l=inside.viscosity_liquid(p_Pa),
        viscosity_g=inside.viscosity_vapour(p_Pa, dew.T_K),
        conductivity_l=inside.conductivity_liquid(p_Pa),
        conductivity_g=inside.conductivity_vapour(p_Pa),
        heat_l=(bubble.h_J_per_kg - cooled.h_J_per_kg) / step,
        heat_g=(warmed.h_J_per_kg - dew.h_J_per_kg) / step,
        tension=inside.surface_tension(p_Pa),
        latent=dew.h_J_per_kg - bubble.h_J_per_kg,
        glide_K=np.maximum(dew.T_K - bubble.T_K, 0.0),
        molar_mass=fluid.molar_mass_kg_per_mol * 1000.0,
        is_hydrocarbon=fluid.designation in HYDROCARBONS,
    )


@dataclass(frozen=True)
class Channel:
    """A tube, or the gap between two plates.

    Attributes:
        bore_m: Bore of the tube, or hydraulic diameter of the gap.
        length_ratio: Heated length over bore: heat flux = mass flux x latent heat / (4 x this).
        single_phase: Factor, exponent of Reynolds and of Prandtl number for vapour alone in it.
    """

    bore_m: float
    length_ratio: float
    single_phase: tuple[float, float, float]


@dataclass(frozen=True)
class Stream:
    """Refrigerant that boils or condenses in a channel.

    Attributes:
        fluid: Its saturated states.
        mass_flux: In kg/(m2 s).
        channel: Where it flows.
        quality: Vapour mass fraction, along a new first axis.
    """

    fluid: Saturated
    mass_flux: FloatArray
    channel: Channel
    quality: FloatArray

    @property
    def heat_flux(self) -> FloatArray:
        """Return the heat flux that evaporates or condenses all of it over the length. [W/m2]"""
        return self.mass_flux * self.fluid.latent / (4.0 * self.channel.length_ratio)

    @property
    def boiling_number(self) -> FloatArray:
        """Return heat flux over mass flux and latent heat. [-]"""
        return self.heat_flux / (self.mass_flux * self.fluid.latent)

    @property
    def equivalent_reynolds(self) -> FloatArray:
        """Return the Reynolds number of the equivalent mass flux of liquid (W. W. Akers et al. 1959). [-]"""
        x, fluid = self.quality, self.fluid
        flux = self.mass_flux * (1.0 - x + x * np.sqrt(fluid.density_l / fluid.density_g))
        return flux * self.channel.bore_m / fluid.viscosity_l


Correlation = Callable[[Stream], FloatArray]


def liquid_film(stream: Stream, mass_flux: FloatArray) -> FloatArray:
    """Return the coefficient of a mass flux of liquid that fills the tube. [W/(m2 K)]

    Args:
        stream: The stream.
        mass_flux: Of the liquid. [kg/(m2 s)]
    Source: Dittus and Boelter in the form of McAdams, 0.023 Re^0.8 Pr^0.4.
    """
    fluid, bore = stream.fluid, stream.channel.bore_m
    reynolds = mass_flux * bore / fluid.viscosity_l
    return np.asarray(0.023 * reynolds**0.8 * fluid.prandtl_l**0.4 * fluid.conductivity_l / bore)


def vapour_film(stream: Stream) -> FloatArray:
    """Return the coefficient of the vapour as if it flowed alone. [W/(m2 K)]

    Args:
        stream: The stream.
    Source: as `liquid_film` in a tube; H. Kumar (1984) for chevrons of 45 degrees between plates.
    """
    fluid, bore = stream.fluid, stream.channel.bore_m
    factor, power, prandtl_power = stream.channel.single_phase
    reynolds = stream.mass_flux * stream.quality * bore / fluid.viscosity_g
    return np.asarray(factor * reynolds**power * fluid.prandtl_g**prandtl_power * fluid.conductivity_g / bore)


def with_glide(stream: Stream, ideal: FloatArray) -> FloatArray:
    """Return a coefficient less what the vapour of a blend takes to change its temperature. [W/(m2 K)]

    Args:
        stream: The stream.
        ideal: Coefficient of a pure fluid with the properties of the blend. [W/(m2 K)]
    Source: L. Silver (1947), K. J. Bell and M. A. Ghaly (1973): 1/h + x cp_g (glide / latent heat) / h_g. Without
        glide it is the ideal one.
    """
    fluid = stream.fluid
    sensible = stream.quality * fluid.heat_g * fluid.glide_K / fluid.latent
    return np.asarray(1.0 / (1.0 / ideal + sensible / vapour_film(stream)))


# Boiling in tubes


def _froude(stream: Stream) -> FloatArray:
    return np.asarray(stream.mass_flux**2 / (stream.fluid.density_l**2 * GRAVITY * stream.channel.bore_m))


def _stratified(stream: Stream) -> tuple[FloatArray, FloatArray]:
    """Return the factors on convection and on nucleation in a horizontal tube that is only part wetted."""
    froude = np.minimum(_froude(stream), 0.05)
    is_low = _froude(stream) < 0.05
    return np.where(is_low, froude ** (0.1 - 2.0 * froude), 1.0), np.where(is_low, np.sqrt(froude), 1.0)


def gungor_winterton(stream: Stream) -> FloatArray:
    """Return the coefficient of boiling in a tube. [W/(m2 K)]

    Args:
        stream: The stream.
    Source: K. E. Gungor and R. H. S. Winterton, Chemical Engineering Research and Design 65 (1987) 148; from memory.
    """
    fluid, x = stream.fluid, stream.quality
    convection = 1.12 * (x / (1.0 - x)) ** 0.75 * (fluid.density_l / fluid.density_g) ** 0.41
    rise = 1.0 + 3000.0 * stream.boiling_number**0.86 + convection
    ideal = liquid_film(stream, stream.mass_flux * (1.0 - x)) * rise * _stratified(stream)[0]
    return with_glide(stream, ideal)


def pool_boiling(fluid: Saturated, heat_flux: FloatArray) -> FloatArray:
    """Return the coefficient of nucleate pool boiling. [W/(m2 K)]

    Args:
        fluid: Saturated states.
        heat_flux: Heat flux. [W/m2]
    Source: M. G. Cooper (1984) with a roughness of 1 um.
    """
    p = fluid.p_reduced
    rise = 55.0 * p**0.12 * (-np.log10(p)) ** -0.55 * fluid.molar_mass**-0.5
    return np.asarray(rise * heat_flux**0.67)


NUCLEATE_TRANSFER_M_PER_S = 3e-4  # mass transfer coefficient of the liquid at the bubble


def liu_winterton(stream: Stream) -> FloatArray:
    """Return the coefficient of boiling in a tube. [W/(m2 K)]

    Args:
        stream: The stream.
    Source: Z. Liu and R. H. S. Winterton, International Journal of Heat and Mass Transfer 34 (1991) 2759. In a blend
        its nucleate part by J. R. Thome and S. Shakir (1987), its convective part as in `with_glide`.
    """
    fluid, x, flux = stream.fluid, stream.quality, stream.heat_flux
    reynolds = stream.mass_flux * stream.channel.bore_m / fluid.viscosity_l
    enhanced = (1.0 + x * fluid.prandtl_l * (fluid.density_l / fluid.density_g - 1.0)) ** 0.35
    suppressed = 1.0 / (1.0 + 0.055 * enhanced**0.1 * reynolds**0.16)
    on_convection, on_nucleation = _stratified(stream)
    pool = pool_boiling(fluid, flux)
    reach = 1.0 - np.exp(-flux / (fluid.density_l * fluid.latent * NUCLEATE_TRANSFER_M_PER_S))
    nucleate = suppressed * on_nucleation * pool / (1.0 + pool / flux * fluid.glide_K * reach)
    convective = with_glide(stream, enhanced * on_convection * liquid_film(stream, stream.mass_flux))
    return np.asarray(np.hypot(convective, nucleate))


# Condensing in tubes


def shah(stream: Stream) -> FloatArray:
    """Return the coefficient of annular condensation in a tube. [W/(m2 K)]

    Args:
        stream: The stream.
    Source: M. M. Shah, International Journal of Heat and Mass Transfer 22 (1979) 547.
    """
    x, p = stream.quality, stream.fluid.p_reduced
    rise = (1.0 - x) ** 0.8 + 3.8 * x**0.76 * (1.0 - x) ** 0.04 / p**0.38
    return with_glide(stream, liquid_film(stream, stream.mass_flux) * rise)


def cavallini(stream: Stream) -> FloatArray:
    """Return the coefficient of condensation in a tube, annular or part stratified. [W/(m2 K)]

    Args:
        stream: The stream.
    Source: A. Cavallini et al., HVAC&R Research 12 (2006) 299; from memory. The difference to the wall is the heat
        flux over the annular coefficient.
    """
    fluid, x, bore = stream.fluid, stream.quality, stream.channel.bore_m
    density, viscosity = fluid.density_l / fluid.density_g, fluid.viscosity_l / fluid.viscosity_g
    lift = GRAVITY * bore * fluid.density_g * (fluid.density_l - fluid.density_g)
    velocity = x * stream.mass_flux / np.sqrt(lift)
    martinelli = viscosity**0.1 * density**-0.5 * ((1.0 - x) / x) ** 0.9
    most = 1.6 if fluid.is_hydrocarbon else 2.6
    border = ((7.5 / (4.3 * martinelli**1.111 + 1.0)) ** -3.0 + most**-3.0) ** (-1.0 / 3.0)
    film = liquid_film(stream, stream.mass_flux)
    rise = 1.128 * x**0.817 * density**0.3685 * viscosity**0.2363 * (1.0 - 1.0 / viscosity) ** 2.144
    annular = film * (1.0 + rise * fluid.prandtl_l**-0.1)
    driven = fluid.conductivity_l**3 * fluid.density_l * (fluid.density_l - fluid.density_g) * GRAVITY * fluid.latent
    falling = (driven / (fluid.viscosity_l * bore * stream.heat_flux / annular)) ** 0.25
    stratified = 0.725 * falling / (1.0 + 0.741 * ((1.0 - x) / x) ** 0.3321) + (1.0 - x**0.087) * film
    between = (annular * (border / velocity) ** 0.8 - stratified) * velocity / border + stratified
    return with_glide(stream, np.where(velocity > border, annular, between))


# Plates: chevron of 45 degrees; what is the same for every refrigerant drops out of a ratio


def amalfi(stream: Stream) -> FloatArray:
    """Return the coefficient of boiling between plates. [W/(m2 K)]

    Args:
        stream: The stream.
    Source: R. L. Amalfi, F. Vakili-Farahani and J. R. Thome, International Journal of Refrigeration 61 (2016) 185.
    """
    fluid, x, bore, flux = stream.fluid, stream.quality, stream.channel.bore_m, stream.mass_flux
    density = fluid.density_l / fluid.density_g
    bond = GRAVITY * (fluid.density_l - fluid.density_g) * bore**2 / fluid.tension
    mean = 1.0 / (x / fluid.density_g + (1.0 - x) / fluid.density_l)
    weber = flux**2 * bore / (fluid.tension * mean)
    boiling = stream.boiling_number
    small = 982.0 * weber**0.315 * boiling**0.32 * density**-0.224
    vapour, liquid = flux * x * bore / fluid.viscosity_g, flux * bore / fluid.viscosity_l
    large = 18.495 * vapour**0.135 * liquid**0.351 * bond**0.235 * boiling**0.198 * density**-0.223
    return with_glide(stream, np.where(bond < 4.0, small, large) * fluid.conductivity_l / bore)


def han_lee_kim(stream: Stream) -> FloatArray:
    """Return the coefficient of boiling between plates. [W/(m2 K)]

    Args:
        stream: The stream.
    Source: D.-H. Han, K.-J. Lee and Y.-H. Kim, Applied Thermal Engineering 23 (2003) 1209; pitch 1.4 bores.
    """
    fluid, x, angle = stream.fluid, stream.quality, np.pi / 4.0
    pitch = 1.4
    first, second = 2.81 * pitch**-0.041 * angle**-2.83, 0.746 * pitch**-0.082 * angle**0.61
    boiling = stream.boiling_number / (1.0 - x + x * np.sqrt(fluid.density_l / fluid.density_g))
    nusselt = first * stream.equivalent_reynolds**second * boiling**0.3 * fluid.prandtl_l**0.4
    return with_glide(stream, nusselt * fluid.conductivity_l / stream.channel.bore_m)


def longo(stream: Stream) -> FloatArray:
    """Return the coefficient of forced condensation between plates. [W/(m2 K)]

    Args:
        stream: The stream.
    Source: G. A. Longo, G. Righetti and C. Zilio, International Journal of Heat and Mass Transfer 82 (2015) 530, above
        an equivalent Reynolds number of 1600; from memory.
    """
    fluid = stream.fluid
    nusselt = 1.875 * stream.equivalent_reynolds**0.445 * fluid.prandtl_l ** (1.0 / 3.0)
    return with_glide(stream, nusselt * fluid.conductivity_l / stream.channel.bore_m)


def yan_lio_lin(stream: Stream) -> FloatArray:
    """Return the coefficient of condensation between plates. [W/(m2 K)]

    Args:
        stream: The stream.
    Source: Y.-Y. Yan, H.-C. Lio and T.-F. Lin, International Journal of Heat and Mass Transfer 42 (1999) 993; from
        memory.
    """
    fluid = stream.fluid
    nusselt = 4.118 * stream.equivalent_reynolds**0.4 * fluid.prandtl_l ** (1.0 / 3.0)
    return with_glide(stream, nusselt * fluid.conductivity_l / stream.channel.bore_m)


# The ratio


@dataclass(frozen=True)
class Duct:
    """Where a refrigerant flows in a kind of exchanger, and what its coefficient is computed with.

    Attributes:
        channel: The geometry taken, since a case does not give one.
        mass_flux: Of today's refrigerant. [kg/(m2 s)]
        boiling, condensing: Two correlations each.
    """

    channel: Channel
    mass_flux: float
    boiling: tuple[Correlation, Correlation]
    condensing: tuple[Correlation, Correlation]


TUBE = Duct(Channel(0.0089, 1200.0, (0.023, 0.8, 0.4)), 200.0, (gungor_winterton, liu_winterton), (shah, cavallini))
PLATE = Duct(Channel(0.004, 125.0, (0.3, 0.663, 0.33)), 30.0, (amalfi, han_lee_kim), (longo, yan_lio_lin))


@dataclass(frozen=True)
class Kind:
    """A kind of exchanger.

    Attributes:
        share: Share of the refrigerant's film in the whole resistance today. [-]
        low, high: Between which that share lies.
        plus_minus: How far the share may be off, for the band of a ratio.
        duct: Where the refrigerant flows; None where no correlation is held (a flooded shell).
    """

    share: float
    low: float
    high: float
    plus_minus: float
    duct: Duct | None


# Estimated from coefficients of 1900 to 3900 W/(m2 K) inside, 35 to 50 (dry) or 1.6 times that (wet) in air over 8 to
# 16 times the area, 6000 in water and 3000 in brine: our own, no measurement of such a share was found.
KINDS: Mapping[str, Kind] = MappingProxyType(
    {
        "dry coil": Kind(0.20, 0.10, 0.30, 0.10, TUBE),
        "wet coil": Kind(0.30, 0.20, 0.40, 0.10, TUBE),
        "frosting coil": Kind(0.15, 0.10, 0.25, 0.10, TUBE),
        "plates, water": Kind(0.60, 0.45, 0.70, 0.15, PLATE),
        "plates, brine": Kind(0.50, 0.35, 0.65, 0.15, PLATE),
        "tubes, water": Kind(0.60, 0.45, 0.70, 0.15, TUBE),
        "tubes, brine": Kind(0.50, 0.35, 0.65, 0.15, TUBE),
        "flooded, air": Kind(0.15, 0.10, 0.25, 0.10, None),
        "flooded, water": Kind(0.60, 0.45, 0.70, 0.15, None),
        "flooded, brine": Kind(0.50, 0.35, 0.65, 0.15, None),
    }
)

# 90 % band of the logarithm of a film ratio by the larger glide of the two, judged from how far such ratios lie from
# published measurements: our own. [K, -]
BANDS = ((1.5, 0.15), (4.0, 0.20), (8.0, 0.25), (np.inf, 0.30))
UNKNOWN_BAND = 0.30  # where nothing can be computed, about a ratio of 1
CHECKED = 2.0  # film ratios beyond this or its inverse lie outside the measurements: the widest band


@dataclass(frozen=True)
class ConductanceRatio:
    """Conductance of an exchanger with a refrigerant over that with today's; arrays of one shape.

    Attributes:
        ratio: The ratio, 1 where it is not known.
        plus_minus: Half its 90 % band.
        film: Ratio of the refrigerant's own coefficients; NaN where it is not known.
        flow: Mass flow over today's.
        glide_K: Glide of the refrigerant in the exchanger.
        share: Share of the film taken.
        is_known: Whether there is a formula for the kind and all properties are known.
    """

    ratio: FloatArray
    plus_minus: FloatArray
    film: FloatArray
    flow: FloatArray
    glide_K: FloatArray
    share: float
    is_known: NDArray[np.bool_]


def conductance_ratio(film: ArrayLike, share: ArrayLike) -> FloatArray:
    """Return the ratio of conductances from that of one film. [-]

    Args:
        film: Ratio of the film's coefficients. [-]
        share: Share of the film in the whole resistance today. [-]
    Source: resistances in series, 1 / (1 - s + s / r).
    """
    s = np.asarray(share, dtype=float)
    return np.asarray(1.0 / (1.0 - s + s / np.asarray(film, dtype=float)))


def film_coefficient(correlation: Correlation, fluid: Saturated, mass_flux: ArrayLike, channel: Channel) -> FloatArray:
    """Return the mean coefficient over qualities of 0.2 to 0.9, equal heat in each step. [W/(m2 K)]

    Args:
        correlation: The correlation.
        fluid: Saturated states of the refrigerant.
        mass_flux: Mass flux. [kg/(m2 s)]
        channel: Where it flows.
    """
    flux = np.asarray(mass_flux, dtype=float)
    shape = np.broadcast_shapes(flux.shape, fluid.latent.shape)
    quality = QUALITIES.reshape((-1,) + (1,) * len(shape))
    return np.asarray(1.0 / np.mean(1.0 / correlation(Stream(fluid, flux, channel, quality)), axis=0))


def film_ratio(today: Saturated, new: Saturated, flow: ArrayLike, duct: Duct, way: str) -> FloatArray:
    """Return the coefficient of a refrigerant over that of today's: the geometric mean of two correlations. [-]

    Args:
        today, new: Saturated states of today's refrigerant and of the other one.
        flow: Mass flow of the other over today's. [-]
        duct: Where they flow.
        way: "evaporator" or "condenser".
    """
    ratios = [
        film_coefficient(one, new, duct.mass_flux * np.asarray(flow, dtype=float), duct.channel)
        / film_coefficient(one, today, duct.mass_flux, duct.channel)
        for one in (duct.boiling if way == "evaporator" else duct.condensing)
    ]
    return np.asarray(np.sqrt(ratios[0] * ratios[1]))


def exchanger_ratio(today: Saturated, new: Saturated, flow: ArrayLike, kind: Kind, way: str) -> ConductanceRatio:
    """Return the ratio of conductances of an exchanger, 1 and a wide band where it cannot be computed.

    Args:
        today, new: Saturated states of today's refrigerant and of the other one.
        flow: Mass flow of the other over today's. [-]
        kind: The exchanger.
        way: "evaporator" or "condenser".
    """
    flows = np.asarray(flow, dtype=float)
    film = np.full(np.broadcast_shapes(flows.shape, new.latent.shape, today.latent.shape), np.nan)
    if kind.duct is not None:
        film = film_ratio(today, new, flows, kind.duct, way)
    is_known = np.isfinite(film)
    taken = np.where(is_known, film, 1.0)
    ratio = conductance_ratio(taken, kind.share)
    glide = np.maximum(today.glide_K, new.glide_K)
    band = np.select([glide < limit for limit, _ in BANDS], [value for _, value in BANDS], UNKNOWN_BAND)
    band = np.where(is_known & (np.abs(np.log(taken)) < np.log(CHECKED)), band, UNKNOWN_BAND)
    off = np.hypot(kind.share / taken * band, kind.plus_minus * (1.0 / taken - 1.0))
    return ConductanceRatio(ratio, np.asarray(ratio**2 * off), film, flows, new.glide_K, kind.share, is_known)

"""The balance of an existing plant: pressures at which compressor, both exchangers and the secondary flows agree.

Two unknowns for each condition, the evaporating and the condensing dew temperature; two equations, one for each
exchanger: the mean temperature difference the temperatures give equals the one its conductance asks for. They are
solved on whole arrays of conditions by Newton's method with Broyden's update of the slopes. Where a head-pressure
control holds the condensing pressure, that pressure takes the place of the condenser's equation.

At low load a gliding refrigerant comes so close to its medium that the difference there is gone within hundredths of a
kelvin: Newton's method jumps over that place. Each equation alone rises or falls all the way with its own temperature,
so what Newton's method leaves is halved in between, one temperature after the other, and finished with finer slopes.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, fields, replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.cycle import Cycle, Settings, solve_cycle
from retrofit.equipment.exchanger import Secondary, mean_difference
from retrofit.properties import Fluid
from retrofit.units import ZERO_C_K

FloatArray = NDArray[np.float64]
Efficiencies = Callable[[FloatArray, FloatArray], tuple[FloatArray, FloatArray]]

RESIDUAL_TOLERANCE = 1e-9  # aimed at, relative; a condition counts as solved below 1e-6
SOLVED_BELOW = 1e-6
MOST_STEPS = 16
FINISHING_STEPS = 10
SLOPE_STEP_K, FINE_STEP_K = 0.05, 1e-5  # for slopes, far away and where a difference closes
HALVINGS = 20  # of the whole range, to less than a thousandth of a kelvin
SMALL_LIFT_K = 15.0  # between dew temperatures: below it subcooled liquid may not boil, above it gas may be too hot
SWEEPS = 3  # over both temperatures: each moves the other's root little
LONGEST_STEP_K = 10.0
SMALLEST_LEAD_K = 0.1
STILL_OPEN = 0.7  # share of conditions below which those that are settled are put aside
FEW = 64  # conditions: as many take as long as one
CHUNK = 2048  # conditions solved together: small enough for the processor's cache
EVAPORATOR_PARTS, CONDENSER_PARTS = 4, 4
DESUPERHEATING = np.array([0.0, 0.35, 0.7])  # shares of the way from discharge to dew point


@dataclass(frozen=True)
class Exchanger:
    """An evaporator or condenser as installed.

    Attributes:
        conductance_W_per_K: Overall conductance, area times overall coefficient (UA).
        secondary: Air, water or brine through it.
        arrangement: "counterflow", "crossflow" or "flooded".
    """

    conductance_W_per_K: ArrayLike
    secondary: Secondary
    arrangement: str


@dataclass(frozen=True)
class Machine:
    """A plant as installed.

    Attributes:
        swept_volume_m3_per_s: Swept volume at the speed it runs.
        efficiencies: Function of pressure ratio and suction pressure that gives isentropic and volumetric
            efficiency.
        evaporator, condenser: The exchangers.
        settings: Superheat, subcooling, pressure drops and heat loss; its efficiencies are not used.
        superheat_share, subcooling_share: Useful superheat and subcooling take at most these shares of the
            difference between the medium's inlet and dew or bubble point: an exchanger hardly loaded cannot
            reach what is set.
        isentropic_factor, volumetric_factor: Factors on both efficiencies, which stay at most 1.
        T_cond_lowest_K: Condensing dew temperature that a head-pressure control does not go below.
    """

    swept_volume_m3_per_s: ArrayLike
    efficiencies: Efficiencies
    evaporator: Exchanger
    condenser: Exchanger
    settings: Settings
    superheat_share: ArrayLike = np.inf
    subcooling_share: ArrayLike = np.inf
    isentropic_factor: ArrayLike = 1.0
    volumetric_factor: ArrayLike = 1.0
    T_cond_lowest_K: ArrayLike = -np.inf


@dataclass(frozen=True)
class Balance:
    """A balanced plant, or an array of them; all arrays have the same shape, NaN where there is no solution.

    Attributes:
        cycle: The cycle it settles on.
        mass_flow_kg_per_s: Refrigerant flow.
        swept_volume_m3_per_s: Swept volume, given or found.
        residual: Larger relative error of the two equations, where the search came closest.
        reason: Empty where solved, else why there is no solution; `NOT_CONVERGED` where only the search failed.
    """

    cycle: Cycle
    mass_flow_kg_per_s: FloatArray
    swept_volume_m3_per_s: FloatArray
    residual: FloatArray
    reason: NDArray[np.str_]

    @property
    def is_solved(self) -> NDArray[np.bool_]:
        """Return where the plant balances."""
        return np.asarray(self.reason == "")


def evaporator_difference(fluid: Fluid, cycle: Cycle, cooling_W: FloatArray, exchanger: Exchanger) -> FloatArray:
    """Return the mean temperature difference of the evaporator in a cycle.

    Args:
        fluid: Refrigerant.
        cycle: The cycle, of any shape.
        cooling_W: Heat taken up. [W]
        exchanger: The evaporator; its conductance is not used.
    Returns: Mean difference, below zero where the temperatures cross. [K]
    Source: two-phase part divided by enthalpy, then the superheat; see `mean_difference`.
    """
    share = _column(np.linspace(0.0, 1.0, EVAPORATOR_PARTS + 1), cycle)
    h_dew = fluid.dew(cycle.p_evap_Pa).h_J_per_kg
    h = cycle.h_evap_in_J_per_kg + share * (h_dew - cycle.h_evap_in_J_per_kg)
    T = fluid.two_phase(cycle.p_evap_Pa, np.minimum(h, h_dew)).T_K
    T_out = cycle.T_evap_dew_K + np.asarray(cycle.settings.useful_superheat_K)
    T, h = np.concatenate([T, T_out[None]]), np.concatenate([h, cycle.h_evap_out_J_per_kg[None]])
    if exchanger.arrangement == "flooded":
        # The pool boils at the dew point; superheat, if any, is picked up behind it.
        T = np.broadcast_to(cycle.T_evap_dew_K, T.shape)
    return mean_difference(T, (h - h[0]) / (h[-1] - h[0]), cooling_W, exchanger.secondary, exchanger.arrangement)


def condenser_difference(fluid: Fluid, cycle: Cycle, heat_W: FloatArray, exchanger: Exchanger) -> FloatArray:
    """Return the mean temperature difference of the condenser in a cycle.

    Args:
        fluid: Refrigerant.
        cycle: The cycle, of any shape.
        heat_W: Heat given off. [W]
        exchanger: The condenser; its conductance is not used.
    Returns: Mean difference, below zero where the temperatures cross. [K]
    Source: desuperheating, condensing and subcooling divided by enthalpy; see `mean_difference`.
    """
    dew, bubble = fluid.dew(cycle.p_cond_Pa), fluid.bubble(cycle.p_cond_Pa)
    h_start = np.maximum(cycle.h_discharge_J_per_kg, dew.h_J_per_kg)
    hot = h_start + _column(DESUPERHEATING, cycle) * (dew.h_J_per_kg - h_start)
    share = _column(np.linspace(0.0, 1.0, CONDENSER_PARTS + 1), cycle)
    wet = dew.h_J_per_kg + share * (bubble.h_J_per_kg - dew.h_J_per_kg)
    T_wet = fluid.two_phase(cycle.p_cond_Pa, np.clip(wet, bubble.h_J_per_kg, dew.h_J_per_kg)).T_K
    T_out = bubble.T_K - np.asarray(cycle.settings.subcooling_K)
    T = np.concatenate([fluid.T_at_enthalpy(cycle.p_cond_Pa, hot), T_wet, T_out[None]])
    h = np.concatenate([hot, wet, cycle.h_evap_in_J_per_kg[None]])
    return mean_difference(T, (h - h[0]) / (h[-1] - h[0]), -heat_W, exchanger.secondary, exchanger.arrangement)


def _column(values: FloatArray, cycle: Cycle) -> FloatArray:
    """Return values along a new first axis, ready to broadcast with the arrays of a cycle."""
    return values.reshape((-1,) + (1,) * cycle.p_evap_Pa.ndim)


def balance(
    fluid: Fluid,
    machine: Machine,
    T_evap_start_K: ArrayLike,
    T_cond_start_K: ArrayLike,
    load_W: ArrayLike | None = None,
    serves: str = "cooling",
) -> Balance:
    """Find where a plant settles with a refrigerant.

    Args:
        fluid: Refrigerant.
        machine: The plant; every number may be an array over conditions.
        T_evap_start_K: Evaporating dew temperature to start from. [K]
        T_cond_start_K: Condensing dew temperature to start from. [K]
        load_W: If given, the plant delivers this load with whatever swept volume that takes; else, and where
            it is NaN, it runs with its own swept volume. [W]
        serves: Whether the load is "cooling", or "heating" by the condenser.
    Returns: The balance, over the broadcast shape of everything given; a condition without a solution has NaN
        and a reason, and touches no other.
    Source: Newton's method with Broyden's (1965) update of the slopes, each condition for itself.
    """
    if serves not in SERVES:
        raise ValueError(f"a plant serves one of {', '.join(SERVES)}, not {serves!r}")
    load = np.nan if load_W is None else load_W
    loads = {name: load if name == serves else np.nan for name in SERVES}
    conditions = _Conditions.of(machine, T_evap_start_K, T_cond_start_K, loads)
    inside = fluid.as_lenient()
    parts = [_solve(inside, machine, conditions.part(i, i + CHUNK)) for i in range(0, conditions.size, CHUNK)]
    return _joined(parts, conditions.shape)


SETTINGS = tuple(item.name for item in fields(Settings) if not item.name.endswith("efficiency"))
SERVES = ("cooling", "heating")
NOT_CONVERGED = "the search did not converge: a failure of the computation, not of the plant"
LIMITS = ("superheat_share", "subcooling_share", "isentropic_factor", "volumetric_factor", "T_cond_lowest_K")


@dataclass(frozen=True)
class _Conditions:
    """Everything that may differ between conditions, each as a flat array of the same length."""

    shape: tuple[int, ...]
    arrays: Mapping[str, FloatArray]

    @classmethod
    def of(
        cls, machine: Machine, T_evap_K: ArrayLike, T_cond_K: ArrayLike, loads_W: Mapping[str, ArrayLike]
    ) -> _Conditions:
        given: dict[str, ArrayLike] = {"T_evap": T_evap_K, "T_cond": T_cond_K, **loads_W}
        given["swept"] = machine.swept_volume_m3_per_s
        for name, exchanger in (("evap", machine.evaporator), ("cond", machine.condenser)):
            given[f"UA_{name}"] = exchanger.conductance_W_per_K
            given[f"T_in_{name}"] = exchanger.secondary.T_in_K
            given[f"rate_{name}"] = exchanger.secondary.capacity_rate_W_per_K
        given |= {name: getattr(machine.settings, name) for name in SETTINGS}
        given |= {name: getattr(machine, name) for name in LIMITS}
        values = {name: np.asarray(value, dtype=float) for name, value in given.items()}
        shape = np.broadcast_shapes(*(value.shape for value in values.values()))
        return cls(shape, {name: np.broadcast_to(value, shape).reshape(-1) for name, value in values.items()})

    @property
    def size(self) -> int:
        return self.arrays["T_evap"].size

    def part(self, start: int, stop: int) -> _Conditions:
        arrays = {name: array[start:stop] for name, array in self.arrays.items()}
        return _Conditions(arrays["T_evap"].shape, arrays)


@dataclass(frozen=True)
class _State:
    """A plant at trial temperatures: what it does, and what each exchanger still lacks."""

    cycle: Cycle
    mass_flow: FloatArray
    swept: FloatArray
    lack: FloatArray  # mean temperature difference there is minus the one needed, shape (2, n) [K]
    needed: FloatArray  # mean temperature difference the conductances ask for, shape (2, n) [K]


def _state(fluid: Fluid, machine: Machine, given: Mapping[str, FloatArray], T: FloatArray) -> _State:
    p_evap, p_cond = fluid.p_dew(T[0]), fluid.p_dew(T[1])
    p_suction = fluid.p_dew(T[0] - given["suction_drop_K"])
    isentropic, volumetric = machine.efficiencies(fluid.p_dew(T[1] + given["discharge_drop_K"]) / p_suction, p_suction)
    isentropic = np.minimum(isentropic * given["isentropic_factor"], 1.0)
    volumetric = np.minimum(volumetric * given["volumetric_factor"], 1.0)
    superheat, subcooling = _in_reach(fluid, given, T[0], p_cond)
    held = {name: given[name] for name in SETTINGS} | {
        "useful_superheat_K": superheat,
        "subcooling_K": subcooling,
    }
    settings = Settings(isentropic_efficiency=isentropic, volumetric_efficiency=volumetric, **held)
    cycle = solve_cycle(fluid, p_evap, p_cond, settings)
    per_swept = volumetric * cycle.density_suction_kg_per_m3
    mass_flow = given["swept"] * per_swept
    for load, effect in zip(SERVES, (cycle.refrigerating_effect_J_per_kg, cycle.heat_rejected_J_per_kg), strict=True):
        mass_flow = np.where(np.isnan(given[load]), mass_flow, given[load] / effect)
    cooling, heat = mass_flow * cycle.refrigerating_effect_J_per_kg, mass_flow * cycle.heat_rejected_J_per_kg
    evaporator = replace(machine.evaporator, secondary=Secondary(given["T_in_evap"], given["rate_evap"]))
    condenser = replace(machine.condenser, secondary=Secondary(given["T_in_cond"], given["rate_cond"]))
    needed = np.stack([cooling / given["UA_evap"], heat / given["UA_cond"]])
    there = np.stack(
        [
            evaporator_difference(fluid, cycle, cooling, evaporator),
            condenser_difference(fluid, cycle, heat, condenser),
        ]
    )
    lack = there - needed
    # A head-pressure control throttles the condenser: either it carries the heat, or condensing stays at its lowest.
    lack[1] = np.minimum(lack[1], T[1] - given["T_cond_lowest_K"])
    return _State(cycle, mass_flow, mass_flow / per_swept, lack, needed)


def _in_reach(
    fluid: Fluid, given: Mapping[str, FloatArray], T_evap: FloatArray, p_cond: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return useful superheat and subcooling as set, or as far as the media let them come."""
    leads = given["T_in_evap"] - T_evap, fluid.bubble(p_cond).T_K - given["T_in_cond"]
    shares = given["superheat_share"], given["subcooling_share"]
    reach = [np.maximum(lead, SMALLEST_LEAD_K) * share for lead, share in zip(leads, shares, strict=True)]
    return np.minimum(given["useful_superheat_K"], reach[0]), np.minimum(given["subcooling_K"], reach[1])


def _solve(fluid: Fluid, machine: Machine, conditions: _Conditions) -> Balance:
    """Solve a chunk of conditions."""
    given = conditions.arrays
    limits = fluid.T_range_K[0] + 0.5, fluid.T_range_K[1] - 0.05
    start = np.clip(np.stack([given["T_evap"], given["T_cond"]]), *limits)
    T, now = _settled(fluid, machine, given, start, limits)
    error = np.max(_error(now), axis=0)
    left = error >= SOLVED_BELOW
    if np.any(left):
        T[:, left] = _halved(fluid, machine, {name: array[left] for name, array in given.items()}, limits)
        now = _state(fluid, machine, given, T)
        error = np.minimum(error, np.max(_error(now), axis=0))
    reason = np.where(error < SOLVED_BELOW, "", _reasons(T, now, limits))
    return _balance(now, error, reason)


def _settled(
    fluid: Fluid,
    machine: Machine,
    conditions: Mapping[str, FloatArray],
    T: FloatArray,
    limits: tuple[float, float],
    most_steps: int = MOST_STEPS,
    slope_step_K: float = SLOPE_STEP_K,
) -> tuple[FloatArray, _State]:
    """Return where conditions settle, or where the search for that ended: temperatures, shape (2, n), and the state."""

    def at(T: FloatArray) -> _State:
        return _state(fluid, machine, given, T)

    given = conditions
    found, active = T.copy(), np.arange(T.shape[1])
    now, slopes = at(T), None
    for _ in range(most_steps):
        is_open = np.any(_error(now) > RESIDUAL_TOLERANCE, axis=0)
        if not np.any(is_open):
            break
        if is_open.size > FEW and np.mean(is_open) < STILL_OPEN:
            # The few that take longer, or have no solution, do not hold up the others.
            found[:, active] = T
            active, T = active[is_open], T[:, is_open]
            given = {name: array[is_open] for name, array in given.items()}
            now, slopes = at(T), None if slopes is None else slopes[:, :, is_open]
        if slopes is None:
            slopes = _slopes(fluid, machine, given, T, now.lack, slope_step_K)
        T, now, slopes = _stepped(at, T, now, slopes, _newton_step(slopes, now.lack), limits)
    if active.size == found.shape[1]:
        return T, now
    found[:, active] = T
    return found, _state(fluid, machine, conditions, found)


def _halved(
    fluid: Fluid, machine: Machine, conditions: Mapping[str, FloatArray], limits: tuple[float, float]
) -> FloatArray:
    """Return where conditions settle by halving each temperature's range in turn, or where that ended. [K]

    Source: with the other temperature held, the evaporator's difference shrinks as evaporating gets warmer and the
        condenser's grows as condensing gets hotter, so each has one root; Newton's method finishes from there.
    """
    given, left = conditions, np.arange(conditions["T_evap"].size)
    T = np.clip(np.stack([given["T_in_evap"], given["T_in_cond"]]) + np.array([[-5.0], [5.0]]), *limits)
    T[1] = np.maximum(T[1], np.minimum(T[0] + 5.0, limits[1]))
    found = T.copy()
    for _ in range(SWEEPS):
        for side in (0, 1):
            T = _halved_side(fluid, machine, given, T, side, limits)
        finished, now = _settled(fluid, machine, given, T, limits, FINISHING_STEPS, FINE_STEP_K)
        is_solved = np.max(_error(now), axis=0) < SOLVED_BELOW
        found[:, left] = np.where(is_solved, finished, T)
        if np.all(is_solved):
            break
        left, T = left[~is_solved], T[:, ~is_solved]
        given = {name: array[~is_solved] for name, array in given.items()}
    return np.asarray(found)


def _halved_side(
    fluid: Fluid,
    machine: Machine,
    given: Mapping[str, FloatArray],
    T: FloatArray,
    side: int,
    limits: tuple[float, float],
) -> FloatArray:
    """Return temperatures with one of them where its own equation holds, the other as it is. [K]"""
    low, high = np.full(T.shape[1], limits[0]), np.full(T.shape[1], limits[1])
    T = T.copy()
    for _ in range(HALVINGS):
        T[side] = 0.5 * (low + high)
        lack = _state(fluid, machine, given, T).lack[side]
        # No state: either there is hardly anything to compress, or the compressed gas is too hot for the model.
        is_wide = np.where(np.isnan(lack), T[1] - T[0] > SMALL_LIFT_K, lack > 0.0)
        is_colder = ~is_wide if side == 0 else is_wide
        low, high = np.where(is_colder, low, T[side]), np.where(is_colder, T[side], high)
    T[side] = 0.5 * (low + high)
    return np.asarray(T)


def _error(state: _State) -> FloatArray:
    """Return the relative error of both equations; NaN counts as unsolved."""
    relative = np.abs(state.lack / state.needed)
    return np.where(np.isnan(relative), np.inf, relative)


def _slopes(
    fluid: Fluid, machine: Machine, given: Mapping[str, FloatArray], T: FloatArray, lack: FloatArray, small: float
) -> FloatArray:
    """Return the slopes of both equations along both temperatures, shape (2, 2, n), by small steps taken in one go."""
    places = np.concatenate([T + small * unit[:, None] for unit in np.eye(2)], axis=1)
    twice = {name: np.tile(array, 2) for name, array in given.items()}
    beside = np.split(_state(fluid, machine, twice, places).lack, 2, axis=1)
    slopes = np.stack([(there - lack) / small for there in beside], axis=1)
    # Where a small step leaves the range: warmer evaporation or colder condensation narrows the difference.
    usual = np.array([[-1.5, 0.0], [0.0, 1.5]])[:, :, None]
    return np.where(np.isnan(slopes), usual, slopes)


def _newton_step(slopes: FloatArray, lack: FloatArray) -> FloatArray:
    (a, b), (c, d) = slopes
    determinant = a * d - b * c
    with np.errstate(divide="ignore", invalid="ignore"):
        step = -np.stack([d * lack[0] - b * lack[1], a * lack[1] - c * lack[0]]) / determinant
    return np.clip(np.where(np.isfinite(step), step, 0.0), -LONGEST_STEP_K, LONGEST_STEP_K)


def _stepped(
    at: Callable[[FloatArray], _State],
    T: FloatArray,
    now: _State,
    slopes: FloatArray,
    step: FloatArray,
    limits: tuple[float, float],
) -> tuple[FloatArray, _State, FloatArray]:
    """Take a step, shortened where it would leave the range, and update the slopes with what it showed."""
    for _ in range(5):
        new_T = np.clip(T + step, *limits)
        new = at(new_T)
        left = np.isnan(new.lack).any(axis=0) & ~np.isnan(now.lack).any(axis=0)
        if not np.any(left):
            break
        step = np.where(left, 0.25 * step, step)
    moved = new_T - T
    length = np.sum(moved * moved, axis=0)
    unseen = new.lack - now.lack - np.einsum("ijn,jn->in", slopes, moved)
    with np.errstate(divide="ignore", invalid="ignore"):
        update = unseen[:, None] * moved[None] / length
    return new_T, new, slopes + np.where(np.isfinite(update), update, 0.0)


def _reasons(T: FloatArray, now: _State, limits: tuple[float, float]) -> NDArray[np.str_]:
    """Return why a condition has no solution: what it lacks at the end of its range, or that the search failed.

    Physics is named only where the equations show it: at a limit, still short of difference; or with no state at all.
    """
    edge, (lowest, highest) = 0.1, limits
    is_nothing = np.isnan(now.lack).any(axis=0)
    return np.select(
        [
            (T[0] < lowest + edge) & ~(now.lack[0] > 0.0),
            (T[1] > highest - edge) & ~(now.lack[1] > 0.0),
            is_nothing & (T[1] - T[0] < SMALL_LIFT_K),
            is_nothing & np.isfinite(T).all(axis=0),
        ],
        [
            f"evaporating would fall below {lowest - ZERO_C_K:.0f} degC, where the refrigerant's model begins",
            f"condensing would rise to {highest - ZERO_C_K:.0f} degC, too close to the critical point",
            "condensing would come as low as evaporating: there is nothing to compress",
            "the compressed gas would be hotter than the refrigerant's model reaches",
        ],
        NOT_CONVERGED,
    )


def _balance(now: _State, error: FloatArray, reason: NDArray[np.str_]) -> Balance:
    solved = reason == ""

    def kept(values: FloatArray) -> FloatArray:
        return np.where(solved, values, np.nan)

    arrays = {item.name: kept(getattr(now.cycle, item.name)) for item in fields(Cycle) if item.name != "settings"}
    cycle = Cycle(settings=now.cycle.settings, **arrays)
    return Balance(cycle, kept(now.mass_flow), kept(now.swept), error, reason)


def _joined(parts: Sequence[Balance], shape: tuple[int, ...]) -> Balance:
    """Put solved chunks together again in the shape of the conditions."""

    def joined(arrays: Sequence[ArrayLike]) -> FloatArray:
        return np.concatenate([np.atleast_1d(array) for array in arrays]).reshape(shape)

    def settings_of(part: Balance) -> Settings:
        return part.cycle.settings

    settings = {
        item.name: joined(
            [np.broadcast_to(getattr(settings_of(part), item.name), part.residual.shape) for part in parts]
        )
        for item in fields(Settings)
    }
    arrays = {
        item.name: joined([getattr(part.cycle, item.name) for part in parts])
        for item in fields(Cycle)
        if item.name != "settings"
    }
    return Balance(
        Cycle(settings=Settings(**settings), **arrays),
        joined([part.mass_flow_kg_per_s for part in parts]),
        joined([part.swept_volume_m3_per_s for part in parts]),
        joined([part.residual for part in parts]),
        np.concatenate([part.reason for part in parts]).reshape(shape),
    )

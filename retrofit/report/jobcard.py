"""The job card of one changeover as texts: numbered steps with hold points, parts to see to, and blanks."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

from retrofit.case.values import NOTHING
from retrofit.checks.operating import discharge_limit, limit_of
from retrofit.report.judging import spelled
from retrofit.study import Comparison, Component, Entry
from retrofit.study.changeover import Changeover
from retrofit.study.practice import Figure, practice
from retrofit.units import ZERO_C_K, UnitSystem, listed, stacked

MICRON_PA = 0.133322  # a thousandth of a millimetre of mercury
WATER_KG_PER_M3 = 1000.0  # what the water capacity of a cylinder is stamped by
PER_VOLUME = {"si": "kg a litre", "ip": "lb a pound of water capacity"}
OIL_UNIT = {"si": "l", "ip": "gal"}
# Rows of the hardware table that a step of their own speaks of, and those that are settings.
OWN_STEP = ("charge", "oil")
SETTINGS = ("set-point", "controller", "high-pressure-switch")
UNKNOWN = "unknown, fill in"


@dataclass(frozen=True)
class Blank:
    """Something to write in by hand: what, and its unit."""

    label: str
    unit: str = ""


@dataclass(frozen=True)
class Item:
    """A part of the plant to see to: its verdict, its name, and what to ask."""

    verdict: str
    name: str
    text: str


@dataclass(frozen=True)
class Step:
    """One step of the job card.

    Attributes:
        number, title: Of the step.
        is_hold: Whether nobody goes on before it is signed.
        lines: What to do.
        parts: Parts of the plant that it is about.
        blanks: What to write down.
    """

    number: int
    title: str
    is_hold: bool
    lines: tuple[str, ...]
    parts: tuple[Item, ...]
    blanks: tuple[Blank, ...]


@dataclass(frozen=True)
class Card:
    """The job card of one candidate; `stops` is what stands against beginning at all."""

    key: str
    name: str
    old: str
    verdict: str
    stops: tuple[str, ...]
    steps: tuple[Step, ...]


@dataclass(frozen=True)
class Job:
    """One changeover with what its texts are written with."""

    comparison: Comparison
    changing: Changeover
    units: UnitSystem

    @property
    def entry(self) -> Entry:
        """Return the new refrigerant."""
        return self.changing.entry

    @property
    def new(self) -> str:
        """Return the name of the new refrigerant."""
        return self.entry.refrigerant.display_name

    @property
    def old(self) -> str:
        """Return the name of the refrigerant in the plant."""
        return self.comparison.existing.refrigerant.display_name

    @property
    def key(self) -> str:
        """Return a name of the changeover that can be part of an id."""
        return "".join(c for c in self.entry.refrigerant.designation if c.isalnum())

    def rows(self, verdict: str) -> list[Component]:
        """Return the rows of the hardware table with a verdict, without those that have a step of their own."""
        return [row for row in self.entry.hardware if row.verdict == verdict and row.code not in OWN_STEP]

    def mass(self, mass_kg: float | None) -> str:
        """Return a mass with its unit, or that it is not known.

        Args:
            mass_kg: The mass. [kg]
        """
        return UNKNOWN if mass_kg is None else self.units.with_unit("mass", mass_kg)

    def gauge(self, p_Pa: float | None) -> str:
        """Return an absolute pressure as a gauge at the plant shows it, or that it is not known.

        Args:
            p_Pa: The pressure. [Pa]
        """
        ambient = self.comparison.case.plant.ambient_pressure_Pa
        return UNKNOWN if p_Pa is None else self.units.with_unit("gauge pressure", p_Pa - ambient, decimals=1)


def card(job: Job) -> Card:
    """Return the job card of one changeover.

    Args:
        job: The changeover.
    """
    made = (maker(job) for maker in STEPS)
    return Card(
        job.key,
        job.new,
        job.old,
        job.entry.verdict or "not judged",
        tuple(f"{spelled(item.title)}: {spelled(item.text)}" for item in job.entry.findings if item.level == "stop"),
        tuple(Step(number, *step) for number, step in enumerate(made, start=1)),
    )


def span(low: str, high: str) -> str:
    """Return a range in words, or the one value if both ends read the same."""
    return low if low == high else f"{low} to {high}"


def micron(figure: Figure) -> str:
    """Return a vacuum in the unit of the trade and in pascal."""
    return f"{figure.low:.0f} micron ({figure.low * MICRON_PA:.0f} Pa)"


# -- the steps ---------------------------------------------------------------------------------------

Made = tuple[str, bool, tuple[str, ...], tuple[Item, ...], tuple[Blank, ...]]


def _items(rows: Iterable[Component]) -> tuple[Item, ...]:
    return tuple(Item(row.verdict, spelled(row.name), spelled(row.ask)) for row in rows)


def _before(job: Job) -> Made:
    filling = job.entry.hardware_numbers.filling if job.entry.hardware_numbers else None
    need = f"{job.mass(filling.expected_kg)} expected, {job.mass(filling.highest_kg)} at most" if filling else UNKNOWN
    open_rows = _items(row for row in job.rows("unknown"))
    named = {item.name for item in open_rows}
    asked = [item for item in job.entry.findings if item.level == "unknown" and spelled(item.title) not in named]
    lines = (
        "Permits to work, certified people, consent of owner, insurer and authority, makers' approvals in writing; "
        "the cautions of both refrigerants read by everybody on site.",
        "Goods or process cooled by other means for as long as the plant stands still.",
        f"On site: {job.new} ({need}), recovery cylinders, oil, driers, seals, the parts of step 6 in both fits, "
        "dry nitrogen, scales, vacuum gauge, leak detector, gauges and hoses rated for the highest pressure.",
        "What follows is not known yet. Settle each before the start:" if open_rows or asked else "",
    )
    items = (*open_rows, *(Item("unknown", spelled(item.title), spelled(item.advice)) for item in asked))
    blanks = (Blank("Permit no."), Blank("In charge"), Blank("Planned from"), Blank("to"))
    return "Permits, people, parts", True, tuple(line for line in lines if line), items, blanks


def _as_found(job: Job) -> Made:
    lines = (
        f"With {job.old} running at full, take one column of the readings of the commissioning sheet, and write down "
        "every set point as found: without them nobody can say afterwards what the change has done.",
        "Leak-test the whole plant while it still has its charge, and repair every leak before anything is changed.",
    )
    return "Readings as found; leaks found and repaired", False, lines, (), (Blank("Leaks found"), Blank("repaired"))


def _oil_verdict(job: Job) -> str:
    """Return the verdict on the oil; without a row nothing is known."""
    return next((row.verdict for row in job.entry.hardware if row.code == "oil"), "unknown")


def _oil_before(job: Job) -> Made:
    here, usual = job.comparison.case.plant.oil or UNKNOWN, job.entry.refrigerant.lubricants.text or "not stated"
    facts, verdict = f"In the plant: {here}. Usual with {job.new}: {usual}.", _oil_verdict(job)
    if verdict in ("keep", "adjust"):
        stays = "No other kind of oil is asked for here; the maker confirms kind, grade and viscosity."
        return "Oil: its kind stays", False, (facts, stays), (), (Blank("Grade confirmed"), Blank("by"))
    is_open = verdict == "unknown"
    title = "Oil: settle which, before any change" if is_open else f"Oil changes, with {job.old} still in"
    lines = (
        facts,
        f"{'If it has to go: ' if is_open else ''}{job.old} carries the old oil back to the compressor, so it is "
        f"changed while {job.old} is still in; the last change is step 5. {_oil_count(job)}",
        "A sample says when it is enough, not a count.",
    )
    blanks = [Blank(f"Change {count}: out", job.units.each(OIL_UNIT)) for count in (1, 2, 3)]
    return title, False, lines, (), (*blanks, Blank("Old oil left", "%"))


def _oil_count(job: Job) -> str:
    left = span(*(f"{share:.0%}" for share in job.changing.oil_left))
    by = "by the case" if job.changing.is_oil_left_given else f"by practice ({practice('oil_left').basis})"
    counts = [
        f"{span(_count(item.fewest), _count(item.most))} changes to {item.target:.0%} of old oil"
        for item in job.changing.oil_changes
    ]
    return spelled(f"With {left} of the oil staying behind at each change, {by}, it takes {listed(counts, 'or')}.")


def _count(number: float) -> str:
    return f"{number:.0f}" if number < 1e6 else "no number of"


def _size(job: Job, volume_m3: float) -> str:
    """Return the size of a cylinder as it is stamped: litres, or pounds of water."""
    return stacked(*(_size_in(replace(job, units=system), volume_m3) for system in job.units.systems))


def _size_in(job: Job, volume_m3: float) -> str:
    if job.units.name == "si":
        return job.units.with_unit("volume", volume_m3, decimals=0)
    return f"{job.mass(volume_m3 * WATER_KG_PER_M3)} of water capacity"


def _recover(job: Job) -> Made:
    found = job.changing.recovery
    fill, T = f"{found.fill:.0%}", job.units.with_unit("temperature", found.T_K, decimals=0)
    lines = [f"Recover the whole charge into clean cylinders and weigh it. Expected: {job.mass(found.charge_kg)}."]
    if found.kg_per_m3 is not None:
        each = f"{found.kg_per_m3 / WATER_KG_PER_M3:.2f} " + job.units.each(PER_VOLUME)
        lines.append(f"No cylinder more than {fill} full of liquid at {T}: {each}, and never above the mass stamped.")
    sizes = [
        f"{size.count} of {_size(job, size.volume_m3)} ({job.mass(size.each_kg)} each)" for size in found.cylinders
    ]
    if sizes:
        lines.append(f"Cylinders: {listed(sizes)}.")
    if found.reason:
        lines.append(f"Number of cylinders not computed: {spelled(found.reason)}.")
    lines.append("Nothing is let off to the air. If the weight differs from the charge on record, find out why.")
    blanks = (Blank("Recovered", job.units.label("mass")), Blank("Cylinder nos."), Blank("Sealed and labelled by"))
    return "Recover and weigh", True, tuple(spelled(line) for line in lines), (), blanks


def _drain(job: Job) -> Made:
    unit = job.units.each(OIL_UNIT)
    if _oil_verdict(job) in ("keep", "adjust"):
        title = "Oil that came out"
        text = "Measure the oil that came out with the charge and at drains, and put as much of the same kind back."
    else:
        title = "Drain the oil and measure it"
        text = (
            "Drain every low point: crankcases, separators, accumulators, suction traps. Measure it, and fill the same "
            "volume of new oil, of the kind and grade that the maker confirms."
        )
    return title, False, (text,), (), (Blank("Out", unit), Blank("In", unit), Blank("Kind and grade"))


def _parts(job: Job) -> Made:
    rows = [row for row in job.rows("replace") if not row.code.startswith(SETTINGS)]
    work = [row for row in job.rows("adjust") if not row.code.startswith(SETTINGS)]
    lines = ["New filter driers in any case. Keep every part taken out, marked with its place, until acceptance."]
    if not job.entry.hardware:
        lines.append("No component was judged: walk through all of them.")
    return "Parts", False, tuple(lines), _items([*rows, *work]), (Blank("Relief valve tags"), Blank("Driers, type"))


def _tightness(job: Job) -> Made:
    plant = job.comparison.case.plant
    low, high = job.gauge(plant.low_side_limit_Pa), job.gauge(plant.high_side_limit_Pa)
    lines = (
        "Dry nitrogen with a regulator, never oxygen, never the refrigerant. Test pressure by the standard that "
        f"applies and the papers of the plant. Nameplate: low side {low}, high side {high}; relief valves and "
        "controls that would not bear it taken off.",
        "Every joint with a leak detector or foam; pressure read again at the same temperature.",
    )
    p, T = job.units.label("gauge pressure"), job.units.label("temperature")
    blanks = (Blank("Low side", p), Blank("High side", p), Blank("Air", T), Blank("Held", "h"), Blank("Fall", p))
    return "Tightness with dry nitrogen", True, lines, (), blanks


def _evacuate(job: Job) -> Made:
    hold = practice("vacuum_hold").low
    lines = (
        f"Down to {micron(practice('vacuum'))} or less, both sides, gauge on the plant and not on the pump; then hold "
        f"{hold:.0f} min with the pump shut off.",
        f"A rise above {micron(practice('vacuum_moisture'))} that then stays is moisture: break with dry nitrogen and "
        "evacuate again. A rise that goes on is a leak: back to step 7.",
        "Seals may leak after a vacuum that held before: test again under pressure of the new charge.",
    )
    blanks = (Blank("Reached", "micron"), Blank(f"After {hold:.0f} min", "micron"), Blank("Gauge no."))
    return "Evacuate and hold", True, lines, (), blanks


def _sight_glass(job: Job) -> str:
    return "" if job.comparison.case.plant.sight_glass == NOTHING else "sight glass, "


def _charge(job: Job) -> Made:
    unit, share = job.units.label("mass"), span(*(f"{end:.0%}" for end in practice("first_charge").ends))
    first = job.changing.first_charge_kg
    amount = span(*(job.mass(mass) for mass in first)) if first else UNKNOWN
    lines = [
        f"By weight, into the high side of the plant at standstill: {amount} first, {share} of the charge expected. "
        f"Then trim by {_sight_glass(job)}level or subcooling.",
    ]
    is_blend = len(job.entry.refrigerant.composition) > 1
    lines.append(
        f"{job.new} leaves its cylinder as liquid only: drawn as vapour, a blend changes its composition."
        if is_blend
        else "Liquid never into the suction of a compressor."
    )
    blanks = (Blank("First charge", unit), Blank("Cylinder nos."), Blank("Final charge", unit))
    return f"Charge {job.new}", False, tuple(spelled(line) for line in lines), (), blanks


def _set(job: Job) -> Made:
    rows = [row for row in (*job.rows("replace"), *job.rows("adjust")) if row.code.startswith(SETTINGS)]
    lines = (
        "Valves, pressure regulators, switches, fan steps, head pressure and controller to the new settings of the "
        "commissioning sheet, then read back. Try the high-pressure switch for real.",
        "Superheat from the dew column, subcooling from the bubble column of the new refrigerant.",
    )
    p = job.units.label("gauge pressure")
    return "Settings", False, lines, _items(rows), (Blank("High-pressure switch tripped at", p),)


def _start(job: Job) -> Made:
    comparison, units = job.comparison, job.units
    discharge = limit_of(comparison, discharge_limit(comparison))
    watch, stop = (
        units.with_unit("temperature", (end or 0.0) + ZERO_C_K, decimals=0) for end in (discharge.work, discharge.stop)
    )
    rated = comparison.case.compressor.rated_current_A
    lines = (
        f"Crankcase warm, valves open, first start with somebody at the switch. Discharge line: act above {watch}, "
        f"shut down above {stop}.",
        f"Current not above the rated {units.with_unit('current', rated) if rated else f'one ({UNKNOWN})'}; watch it "
        "through the whole pull-down. Oil level seen, no slugging, no noise.",
        "Trim to the windows of the commissioning sheet. Outside them look for the reason before touching the charge.",
    )
    return (
        "Start and trim",
        True,
        lines,
        (),
        (Blank("Started at"), Blank("Highest discharge", units.label("temperature")), Blank("Highest current", "A")),
    )


def _oil_after(job: Job) -> Made:
    limit = limit_of(job.comparison, "residual_oil")
    old = span(*(f"{share:.0%}" for share in sorted(limit.figures.values())))
    lines = (
        spelled(
            "Level after some hours of running. Sample: acid, moisture, and old oil if it was changed "
            f"({old} of all oil)."
        ),
    )
    return "Oil level and sample", False, lines, (), (Blank("Level"), Blank("Old oil", "%"), Blank("Sample no."))


def _hand_over(job: Job) -> Made:
    lines = (
        f"Every label of {job.old} off or struck out, the new one by the commissioning sheet. The change, the weights "
        "and the waste notes in the log; nameplate, risk assessment, emergency sheet and room signs where they change.",
        "Commissioning sheet filled in, operators shown the new pressures, dates of after-care agreed, the old charge "
        "and the old parts stored for the way back.",
    )
    return "Labels, log, handover", False, lines, (), (Blank("Labels set by"), Blank("Contractor"), Blank("Operator"))


STEPS = (
    _before,
    _as_found,
    _oil_before,
    _recover,
    _drain,
    _parts,
    _tightness,
    _evacuate,
    _charge,
    _set,
    _start,
    _oil_after,
    _hand_over,
)

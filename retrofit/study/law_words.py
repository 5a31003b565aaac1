"""Words for what the tables of law say: the one place where states, reasons and limits become sentences."""

from __future__ import annotations

from retrofit.refrigerants import GWP_BASES
from retrofit.study.law import LawBasis, LawMoment, LawRow, LawTable, Limit, Measured, Reason, RowState, Why

DEFERENCE = (
    "Not legal advice. The tables hold what is shown here and no more: check the current text of the law, and ask "
    "the authority or a certified body where a row leaves something open."
)
NOT_VERIFIED = "not verified against the published text"
KEY_NAMES = {
    "law.equipment": "the kind of equipment",
    "law.arrangement": "how the equipment is put together",
    "law.rated_capacity": "the rated capacity",
    "evaporator.medium": "the medium that is cooled",
    "condenser.medium": "the medium that is heated",
}


def limit_text(limit: Limit) -> str:
    """Return a limit, such as "from 50 to below 500 t CO2e"."""
    ends = (("from", limit.from_), ("above", limit.above), ("to below", limit.below), ("up to", limit.to))
    text = " ".join(f"{word} {end:g}" for word, end in ends if end is not None)
    if limit.from_ is None and limit.above is None:
        text = text.removeprefix("to ")
    return f"GWP {text}" if limit.measure == "GWP" else f"{text} {limit.measure}"


def number_text(measured: Measured) -> str:
    """Return a number of the plant, with its range if it has one."""
    if measured.value is None:
        return f"class {measured.name}"
    low, expected, high = measured.value
    if measured.measure == "share":
        return f"{100.0 * expected:.3g} % by mass of {measured.name}"
    unit = "" if measured.measure == "GWP" else f" {measured.measure}"
    span = f" ({low:.4g} to {high:.4g})" if low < high else ""
    text = f"{expected:.4g}{unit}{span}"
    return f"GWP {text}" if measured.measure == "GWP" else text


def measured_text(measured: Measured) -> str:
    """Return a number of the plant with the limit it stands against."""
    against = f", limit {limit_text(measured.limit)}" if measured.limit else ""
    return f"{number_text(measured)}{against}"


def all_measured(row: LawRow) -> str:
    """Return every number of the plant that a row looks at; empty if none."""
    return "; ".join(map(measured_text, row.measured))


def reason_text(reason: Reason) -> str:
    """Return why a row is open, without capital or full stop."""
    if reason.why == Why.STRADDLES and reason.measured:
        return f"it depends on {_straddling(reason)}: {measured_text(reason.measured)}"
    return _REASONS[reason.why].format(*reason.about, key=" or ".join(map(key_text, reason.keys)), name=_name(reason))


_REASONS = {
    Why.NOT_STATED: "{name} is not stated ({key})",
    Why.NO_CHARGE: "the charge of {0} is not known ({key})",
    Why.NO_GWP: "{0} has no GWP on the basis of this law ({1})",
    Why.NO_CLASS: "the safety class of {0} is not stated",
    Why.PAST_REVIEW: "{0} was to be reviewed by {1} and gives no answer after that day",
    Why.CONDITION: "only if {0}",
    Why.NOT_READ: "not read here, so that no answer is given: {0}",
    Why.STRADDLES: "the numbers lie on both sides of a limit",
    Why.SAFETY_CLAIMED: "the case claims the safety exception ({key}); the operator has to show the evidence",
    Why.NO_LEAK_RATE: "the leak rate is not stated ({key}); the table has {0} {1}",
    Why.NO_DAY: "the day of the change is not stated ({key}): today is taken",
    Why.NO_END: "the remaining life is not stated ({key}): every later date is shown",
}


def _straddling(reason: Reason) -> str:
    return "the rated capacity (rated_capacity in [law])" if "law.rated_capacity" in reason.keys else "the charge"


def _name(reason: Reason) -> str:
    return " and ".join(map(key_name, reason.keys))


def key_name(key: str) -> str:
    """Return what a key of the case says, such as "the rated capacity"."""
    return KEY_NAMES.get(key, key)


def key_text(key: str) -> str:
    """Return a key of the case as a reader finds it: "equipment in [law]"."""
    table, _, name = key.rpartition(".")
    return f"{name} in [{table}]"


def basis_name(basis: str) -> str:
    """Return the name of a basis of GWP."""
    return GWP_BASES.get(basis, basis)


def dates(row: LawRow) -> str:
    """Return from and until when a row applies."""
    if row.applies_from is None:
        return "No date"
    until = f" to {row.applies_until}" if row.applies_until else ""
    return f"From {row.applies_from}{until}"


def source_text(row: LawRow) -> str:
    """Return document and clause of a row."""
    return ", ".join(part for part in (row.document, row.clause) if part)


def cited(row: LawRow) -> str:
    """Return document and clause of a row, the day it was read, and whether it was verified.

    Edition and address are those of its table, which the section on law lists once.
    """
    return f"{source_text(row)}; {_known(row)}"


def _known(row: LawRow) -> str:
    return f"read {row.date_checked}, {'verified' if row.is_verified else NOT_VERIFIED}"


def brief(row: LawRow) -> str:
    """Return a row without its source: dates, words, numbers, reasons, exceptions, and a word if it is not verified."""
    known = "" if row.is_verified else f"{_capital(NOT_VERIFIED)}."
    return " ".join(part for part in (*_parts(row), known) if part)


def line(row: LawRow) -> str:
    """Return a row in one paragraph, with document, clause, edition and address, and what to check."""
    source = "; ".join(part for part in (source_text(row), row.edition, row.address) if part)
    return " ".join(part for part in (*_parts(row), f"{source}; {_known(row)}: check the current text.") if part)


def _parts(row: LawRow) -> tuple[str, ...]:
    said = all_measured(row)
    told = {text for text in map(measured_text, row.measured)}
    reasons = (
        f"{_capital(reason_text(reason))}."
        for reason in row.reasons
        if not (reason.measured and measured_text(reason.measured) in told and not reason.keys)
    )
    exceptions = row.exceptions and f"Exceptions and remarks: {row.exceptions}"
    return (f"{dates(row)}: {row.text}", said and f"{said}.", *reasons, exceptions)


def moment_text(moment: LawMoment) -> str:
    """Return what happens on a day."""
    if moment.row is None:
        return moment.change.value
    row = moment.row
    doubt = f" ({'; '.join(map(reason_text, row.reasons))})" if row.state == RowState.DEPENDS else ""
    return f"{moment.change.value}: {row.text}{doubt}"


def table_problem(table: LawTable) -> str:
    """Return what is wrong with a table, without a full stop; empty if nothing is."""
    if table.is_past_review:
        return f"{table.file} was to be reviewed by {table.review_by}: its rows give no answer until it is"
    if table.ended:
        return f"every row of {table.file} has ended, the last on {table.ended}: it says nothing for a later day"
    return ""


def problems(basis: LawBasis) -> tuple[str, ...]:
    """Return what is wrong with the tables of a result."""
    return tuple(map(table_problem, basis.faulty))


def not_checked(basis: LawBasis) -> str:
    """Return that no table holds for a jurisdiction; empty if one does."""
    if basis.tables:
        return ""
    return f"Law not checked: there is no table for {basis.jurisdiction}; there are tables for {', '.join(basis.known)}"


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]

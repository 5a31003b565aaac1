"""Computing the case of a report again, and why a result differs as far as that can be told."""

from __future__ import annotations

import tempfile
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from pathlib import Path, PurePath

from retrofit.case import Case, read_case
from retrofit.checks import assess
from retrofit.errors import CaseFileError, ReportError
from retrofit.report.carried.differences import Difference, differences
from retrofit.report.carried.made_with import PROGRAM, data_digests, group_of, versions_of
from retrofit.report.carried.reader import Carried
from retrofit.report.carried.result import LIFE, digest, result_of
from retrofit.study import Comparison, compare
from retrofit.study.life import with_life
from retrofit.units import shown

CASE_FILE = "case.toml"

ALTERED = {
    "case": "the case in the file was edited after the report was made: its digest does not fit",
    "files": "a file kept with the case was edited after the report was made: its digest does not fit",
    "options": "the day of law, the units or the time kept in the file were edited: their digest does not fit",
    "made_with": "the versions kept in the file were edited, so what is said of them is not certain",
    "result": "the result kept in the file was altered: its fingerprint does not fit its numbers",
    "page": "the page is not as it was written (an editor, a mail programme, or a browser that saved it): what it "
    "shows may differ from the result kept in it",
}
NAMES = {"retrofit": "retrofit", "coolprop": "CoolProp", "numpy": "NumPy"}
UNKNOWN = (
    "unknown: case, versions, data and program are those of the report. The arithmetic of another machine or a damaged "
    "store of property tables could do it; set RETROFIT_STORE to an empty folder and try again"
)


@dataclass(frozen=True)
class Rerun:
    """A report and its case computed again.

    Attributes:
        carried: What the report carries.
        fingerprint: Of the result computed again.
        versions: What it was computed with now.
        differences: What differs, the weightiest first.
        altered: What in the file is not as it was written, in words.
        changed: What else has changed since: versions, data, program, in words.
        result: The result computed again, in canonical form.
    """

    carried: Carried
    fingerprint: str
    versions: Mapping[str, str]
    differences: tuple[Difference, ...]
    altered: tuple[str, ...]
    changed: tuple[str, ...]
    result: Mapping[str, object]

    @property
    def differs(self) -> bool:
        """True if a number or a word differs, or the file is not as it was written. [-]"""
        return bool(self.differences or self.altered)

    @property
    def reasons(self) -> tuple[str, ...]:
        """Return why the result may differ, as far as that can be told; nothing if nothing does."""
        found = (*self.altered, *self.changed)
        return found or ((UNKNOWN,) if self.differences else ())


def rerun(carried: Carried, on_build: Callable[[str], None] | None = None) -> Rerun:
    """Compute the case of a report again, for its own day of law, and set the result against the one it carries.

    Args:
        carried: What the report carries.
        on_build: Called with a designation before its tables are built.
    Raises: ReportError if this version cannot use the case.
    """
    comparison = _computed(carried, on_build)
    result, versions = result_of(comparison), versions_of(comparison)
    return Rerun(
        carried=carried,
        fingerprint=digest(result),
        versions=versions,
        differences=differences(carried.result, result),
        altered=tuple(ALTERED[part] for part in carried.altered),
        changed=(*_versions(carried.versions, versions), *_data(carried, versions)),
        result=result,
    )


def _computed(carried: Carried, on_build: Callable[[str], None] | None) -> Comparison:
    """Compute from files in a folder of its own; of the names in the report only those of checked files are used."""
    with tempfile.TemporaryDirectory(prefix="retrofit-rerun-") as name:
        folder = Path(name).resolve()
        case_file = folder / _free_name(carried)
        _write_inside(folder, {case_file.name: carried.case_text.encode("utf-8"), **carried.files}, carried.name)
        try:
            case = _titled(read_case(case_file), carried)
            return _lived(assess(compare(case, on_build), carried.on), carried)
        except CaseFileError as error:
            raise _unusable(carried, error) from error


def _free_name(carried: Carried) -> str:
    """Return a name for the case that none of its files has."""
    name = CASE_FILE
    while name in carried.files:
        name = f"_{name}"
    return name


def _write_inside(folder: Path, files: Mapping[str, bytes], name: str) -> None:
    """Write files into a folder; one that would stand outside it, or over another, is refused."""
    for place, content in files.items():
        path = (folder / place).resolve()
        try:
            if not path.is_relative_to(folder):
                raise ValueError
            path.parent.mkdir(parents=True, exist_ok=True)
            path.write_bytes(content)
        except (OSError, ValueError) as error:
            raise ReportError(
                f'{name}: it carries a file "{shown(place)}" that cannot stand beside its case'
            ) from error


def _lived(comparison: Comparison, carried: Carried) -> Comparison:
    """Return a result with its remaining life if the report has one, by as many draws and the seed that it names."""
    drawn = (carried.result.get(LIFE) or {}).get("draws")
    return with_life(comparison, drawn["number"], drawn["seed"]) if drawn else comparison


def _unusable(carried: Carried, error: CaseFileError) -> ReportError:
    name = PurePath(error.path).name
    where = "its case" if name == _free_name(carried) else name
    problems = "; ".join(problem.located(where) for problem in error.problems[:3])
    edited = "; it was edited after the report was made" if "case" in carried.altered else ""
    return ReportError(
        f"{carried.name}: this version cannot use the case it carries ({problems}{edited}); write the case out with "
        "--case FILE and correct it, or use the version that made the report"
    )


def _titled(case: Case, carried: Carried) -> Case:
    """Return the case with the title it had: one that gives none goes by the name of its file."""
    return case if "title" in case.given else replace(case, title=PurePath(carried.case_name).stem)


def _versions(then: Mapping[str, str], now: Mapping[str, str]) -> tuple[str, ...]:
    return tuple(
        f"{NAMES.get(name, name)} {then.get(name, 'of no stated version')} then, {now.get(name, 'not used')} now"
        for name in dict.fromkeys([*now, *then])
        if then.get(name) != now.get(name)
    )


def _data(carried: Carried, versions: Mapping[str, str]) -> tuple[str, ...]:
    """Return which data have changed, group by group; of the program only what its version does not say."""
    now, then = data_digests(), carried.data
    groups: dict[str, list[str]] = {}
    for place in sorted({*now, *then}):
        if now.get(place) != then.get(place):
            text = f"{then.get(place, 'absent')} then, {now.get(place, 'absent')} now"
            groups.setdefault(group_of(place), []).append(text if place == PROGRAM else f"{place} ({text})")
    if carried.versions.get("retrofit") != versions.get("retrofit"):
        groups.pop(group_of(PROGRAM), None)
    return tuple(f"{words} changed: {', '.join(places)}" for words, places in groups.items())

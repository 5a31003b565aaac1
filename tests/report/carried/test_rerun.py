"""A report computed again: nothing differs, or what does and why."""

import copy
import json
from pathlib import Path

import pytest

from retrofit import __version__
from retrofit.errors import ReportError
from retrofit.report.carried import read_carried, rerun, rerun_json, rerun_text
from retrofit.report.carried.differences import differences

ROOT = Path(__file__).resolve().parents[3]


@pytest.fixture
def again(written):
    """Return a function that computes a page again."""
    return lambda html: rerun(read_carried(written(html)))


@pytest.fixture(scope="module")
def html(page_of):
    """Return the report of a case with room, law and readings."""
    return page_of("harbour-market", "si")


def text_of(found):
    """Return the text for people on one line, without marks of a terminal."""
    return " ".join(rerun_text(found, 100, str).split())


@pytest.mark.parametrize("name", ["harbour-market", "office-chiller"])
def test_a_report_comes_out_again(name, page_of, again):
    """Every number and word, with the same fingerprint and no reason."""
    found = again(page_of(name, "ip"))

    assert (found.differs, found.differences, found.reasons) == (False, (), ())
    assert found.fingerprint == found.carried.fingerprint
    assert "Nothing differs." in text_of(found)


def test_a_case_without_a_title_keeps_the_name_of_its_file(tmp_path, made_at, again):
    """The title is part of the result, and is made from the name."""
    from retrofit.case import read_case
    from retrofit.checks import assess
    from retrofit.report import render_html
    from retrofit.study import compare

    path = tmp_path / "north wing.toml"
    text = (ROOT / "cases" / "office-chiller.toml").read_text(encoding="utf-8")
    path.write_text("\n".join(line for line in text.splitlines() if not line.startswith("title")), encoding="utf-8")
    found = again(render_html(assess(compare(read_case(path))), made_at=made_at))

    assert found.result["title"] == "north wing"
    assert not found.differs


def test_the_day_of_law_is_that_of_the_report(made_at, again):
    """Not the day on which it is computed again."""
    import datetime

    from retrofit.case import read_case
    from retrofit.checks import assess
    from retrofit.report import render_html
    from retrofit.study import compare

    day = datetime.date(2033, 6, 30)
    result = assess(compare(read_case(ROOT / "cases" / "harbour-market.toml")), day)
    found = again(render_html(result, made_at=made_at))

    assert found.result["law"]["on"] == "2033-06-30"
    assert not found.differs


def test_an_altered_number_is_found_with_both_values(html, edited, again):
    """By hand: 2.6 against the true COP of R448A, and the fingerprint says that it is the file."""
    changed = edited(html, lambda data, result: result["candidates"][0]["duty"].update(cop=2.0))
    found = again(changed)
    (only,) = found.differences
    true = found.result["candidates"][0]["duty"]["cop"]

    assert (only.refrigerant, only.quantity, only.old, only.new) == ("R448A", "duty.cop", 2.0, true)
    assert only.relative == pytest.approx((true - 2.0) / 2.0)
    assert any("fingerprint does not fit" in reason for reason in found.reasons)
    assert f"R448A duty.cop: 2 → {true:.4g}" in text_of(found)


def test_an_edited_case_is_found(html, edited, again):
    """More cooling: numbers follow, and the case is named as the reason."""
    found = again(
        edited(html, lambda data, result: data["case"].update(text=data["case"]["text"].replace("120 kW", "132 kW")))
    )
    power = next(d for d in found.differences if (d.refrigerant, d.quantity) == ("R404A", "duty.power_W"))

    assert power.relative == pytest.approx(0.1, rel=1e-6)  # power follows the duty
    assert [reason for reason in found.reasons if "the case in the file was edited" in reason] == list(found.reasons)


def test_an_edit_without_effect_is_named_too(html, edited, again):
    """A remark added to the case changes no number; the file is not as it was written all the same."""
    found = again(edited(html, lambda data, result: data["case"].update(text=data["case"]["text"] + "# hm\n")))

    assert found.differences == ()
    assert found.differs
    assert "The file is not as it was written." in text_of(found)


def _older(data, result):
    """Make the block that of an older version with another catalogue and CoolProp, whose numbers differ a little."""
    data["made_with"]["versions"] |= {"retrofit": "0.0.9", "coolprop": "7.0.0"}
    data["made_with"]["data"] |= {"refrigerants/environment.csv": "0123456789abcdef", "program": "00"}
    result["candidates"][0]["gwp_100yr_ar5"] *= 1.1
    result["candidates"][1]["duty"]["p_cond_Pa"] *= 1.001


def test_another_version_and_catalogue_are_the_reasons(html, edited, again):
    """A report of an older version, whole in itself: versions and digests then and now, largest difference first."""
    found = again(edited(html, _older, sealed=True))
    words = " ".join(found.reasons)

    assert found.altered == ()
    assert [(d.refrigerant, d.quantity) for d in found.differences] == [
        ("R448A", "gwp_100yr_ar5"),
        ("R449A", "duty.p_cond_Pa"),
    ]
    assert f"retrofit 0.0.9 then, {__version__} now" in words
    assert "CoolProp 7.0.0 then" in words
    assert "the refrigerant catalogue changed: refrigerants/environment.csv (0123456789abcdef then" in words
    assert "the program changed" not in words  # its version says so


def test_a_changed_program_of_the_same_version_is_named(html, edited, again):
    """A version number does not change with every line."""
    found = again(edited(html, lambda data, result: data["made_with"]["data"].update(program="0" * 16), sealed=True))

    assert not found.differs
    assert "Changed since, without effect here: the program changed: 0000000000000000 then" in text_of(found)


def test_numbers_and_fingerprint_altered_alike_are_found_without_a_known_reason(html, edited, again):
    """Who makes the fingerprint fit leaves the difference itself."""
    found = again(edited(html, lambda d, r: r["existing"]["duty"].update(cop=2.5), sealed=True))

    assert [d.quantity for d in found.differences] == ["duty.cop"]
    assert found.reasons[0].startswith("unknown: ")


def test_a_case_this_version_cannot_use_is_an_error_of_ours(html, edited, again):
    """With line and key, and what to do; no name of a temporary folder."""
    with pytest.raises(ReportError, match=r"its case:\d+: plants: .*--case FILE") as found:
        again(edited(html, lambda d, r: d["case"].update(text=d["case"]["text"].replace("[plant]", "[plants]"))))
    assert "retrofit-rerun-" not in found.value.message
    assert "it was edited" in found.value.message


@pytest.mark.parametrize("files", [["case.toml"], ["a", "a/b"]], ids=["named as the case", "under a file"])
def test_files_of_a_hostile_report_do_no_harm(files, html, edited, written):
    """A file named as the case does not take its place; one that cannot be written is refused in one sentence."""
    changed = edited(html, lambda d, r: d["files"].update({name: ["YQ=="] for name in files}), sealed=True)
    kept = read_carried(written(changed))
    if len(files) == 1:
        assert not rerun(kept).differs
    else:
        with pytest.raises(ReportError, match="cannot stand beside its case"):
            rerun(kept)


def test_the_json_has_every_difference(html, edited, again):
    """What a script needs: whether, what, why, and both fingerprints."""
    found = json.loads(json.dumps(rerun_json(again(edited(html, _older, sealed=True))), allow_nan=False))

    assert found["schema"] == "retrofit.rerun/1"
    assert found["differs"] is True
    assert len(found["differences"]) == 2
    assert found["fingerprint"]["carried"] != found["fingerprint"]["now"]


def test_what_an_altered_file_says_reaches_no_terminal_unescaped(html, edited, again):
    """Title, versions and words of a hostile file."""

    def change(data, result):
        result["title"] = "\x1b[2J"
        result["candidates"][0]["verdict"] = "\x1b[31msafe"
        data["made_with"]["versions"]["\x1bx"] = "\x1b"

    assert "\x1b" not in rerun_text(again(edited(html, change)), 100, str)


# The comparison itself, by hand

RESULT = {
    "existing": {"refrigerant": "R404A", "verdict": "suitable", "duty": {"cop": 2.0, "T_discharge_K": 340.0}},
    "candidates": [
        {"refrigerant": "R448A", "verdict": "suitable", "duty": {"cop": 2.5, "glide_evap_K": 0.0, "unmet_W": 0.0}}
    ],
    "law": None,
}


def _changed(*path, to):
    result = copy.deepcopy(RESULT)
    place = result
    for part in path[:-1]:
        place = place[part]
    place[path[-1]] = to
    return result


R448A = ("candidates", 0, "duty")


@pytest.mark.parametrize(
    ("path", "value", "differs"),
    [
        ((*R448A, "cop"), 2.50002, False),  # 0.8e-5 of 2.5
        ((*R448A, "cop"), 2.50003, True),  # 1.2e-5
        ((*R448A, "glide_evap_K"), 0.0029, False),  # 1e-5 of 300 K is 0.003 K
        ((*R448A, "glide_evap_K"), 0.0031, True),
        ((*R448A, "unmet_W"), 0.009, False),  # 1e-5 of 1 kW
        ((*R448A, "cop"), None, True),
        (("candidates", 0, "verdict"), "not suitable", True),
        (("law",), {"on": "2026-12-01"}, True),
        ((*R448A, "unmet_W"), False, True),
    ],
)
def test_equal_means_within_the_accuracy_of_the_tables(path, value, differs):
    """1e-5 of the number, or of the size that differences of its kind come from."""
    assert bool(differences(RESULT, _changed(*path, to=value))) is differs


def test_the_weightiest_stands_first():
    """A verdict before any number, a large change before a small one."""
    new = _changed(*R448A, "cop", to=5.0)
    new["existing"]["duty"]["T_discharge_K"] = 341.0
    new["candidates"][0]["verdict"] = "not suitable"

    assert [item.quantity for item in differences(RESULT, new)] == ["verdict", "duty.cop", "duty.T_discharge_K"]


def test_a_refrigerant_that_is_gone_is_one_difference():
    """Not one for each of its numbers; and order does not matter."""
    new = copy.deepcopy(RESULT)
    new["candidates"].append({"refrigerant": "R290"})
    (only,) = differences(new, RESULT)

    assert (only.refrigerant, only.quantity, only.old, only.new) == (
        "R290",
        "the refrigerant itself",
        "there",
        "absent",
    )
    assert differences(new, {**new, "candidates": new["candidates"][::-1]}) == ()

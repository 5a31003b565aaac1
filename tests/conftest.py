"""What every test shares: a store of tables of this session's own, so that each refrigerant is built once,
and cases without files."""

import datetime
import os

import pytest

from retrofit.case import Case
from retrofit.case.model import CaseFile

STORE = "RETROFIT_STORE"


@pytest.fixture(scope="session", autouse=True)
def session_store(tmp_path_factory):
    """Point the store of tables at a folder of this session, unless the caller has chosen one; yield the folder."""
    if given := os.environ.get(STORE):
        yield given
        return
    base = tmp_path_factory.getbasetemp()
    # Parallel workers have a base folder each, side by side; the store may be shared between processes.
    folder = (base.parent if "PYTEST_XDIST_WORKER" in os.environ else base) / "session-store"
    os.environ[STORE] = str(folder)
    yield str(folder)
    del os.environ[STORE]


@pytest.fixture(scope="session", autouse=True)
def day_of_the_tests():
    """Read the tables of law for one fixed day, so that no result of a test changes with the calendar."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr("retrofit.checks.law.check.today", lambda: datetime.date(2026, 12, 1))
        yield


@pytest.fixture(scope="session")
def case_of():
    """Return a function that makes a case from the text a user would write, without a file."""
    return _case_of


def _case_of(existing="R404A", candidates=("R448A", "R449A"), *, plant=(), duty=(), compressor=(), **compare):
    """Return a case; each table takes keys and texts of the case file, on top of an ordinary plant."""
    tables = {
        "title": "A plant",
        "plant": {"refrigerant": existing, **dict(plant)},
        "duty": {"cooling": "120 kW", "evaporating": "-8 degC", "condensing": "42 degC", **dict(duty)},
        "compressor": dict(compressor),
        "compare": {"candidates": list(candidates), **compare},
    }
    read = CaseFile.model_validate(tables)
    parts = {name: getattr(read, name) for name in ("plant", "duty", "compressor", "compare")}
    return Case(title="A plant", about=None, **parts, path="plant.toml", text="", given={}, defaults=())


@pytest.fixture(scope="session")
def case_with():
    """Return a function that makes a case at sea level with any tables, of keys and texts of the case file."""
    return _case_with


def _case_with(existing="R404A", candidates=("R448A",), **tables):
    """Return a case of an ordinary plant; a table given is laid over it, key by key, None taking a key away."""
    ordinary = {
        "plant": {"refrigerant": existing},
        "duty": {"cooling": "120 kW", "evaporating": "-8 degC", "condensing": "42 degC"},
        "compressor": {},
        "compare": {"candidates": list(candidates)},
    }
    laid = {name: {**ordinary.get(name, {}), **table} for name, table in {**ordinary, **tables}.items()}
    kept = {name: {k: v for k, v in table.items() if v is not None} for name, table in laid.items()}
    read = CaseFile.model_validate(kept, context={"p_ambient_Pa": 101_325.0})
    parts = {name: getattr(read, name) for name in CaseFile.model_fields if name not in ("title", "about")}
    return Case(title="A plant", about=None, **parts, path="plant.toml", text="", given={}, defaults=())

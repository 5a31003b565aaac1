"""What every test shares: a store of tables of this session's own, so that each refrigerant is built once,
cases without files, and one browser."""

import datetime
import os
from pathlib import Path

import pytest

from retrofit.case import Case
from retrofit.case.model import CaseFile

STORE = "RETROFIT_STORE"
CHROMIUM = Path("/usr/bin/chromium")
FLAGS = [
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync",
]  # fmt: skip


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


@pytest.fixture(scope="session")
def browser():
    """Yield a Chromium; skip without one unless RETROFIT_REQUIRE_BROWSER=1 says that it has to be there."""
    required = os.environ.get("RETROFIT_REQUIRE_BROWSER") == "1"
    if not CHROMIUM.exists() and not required:
        pytest.skip(f"no Chromium at {CHROMIUM}")
    sync_api = (
        pytest.importorskip("playwright.sync_api") if not required else __import__("playwright.sync_api").sync_api
    )
    with sync_api.sync_playwright() as playwright:
        chromium = playwright.chromium.launch(executable_path=str(CHROMIUM), args=FLAGS)
        yield chromium
        chromium.close()

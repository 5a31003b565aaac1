"""What every test shares: a store of tables of this session's own, so that each refrigerant is built once."""

import os

import pytest

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

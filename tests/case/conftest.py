"""Write a case file, and read it or collect the complaints about it."""

import pytest

from retrofit.case import read_case
from retrofit.errors import CaseFileError


@pytest.fixture
def case(tmp_path):
    """Return a function that writes a case file and reads it."""

    def read(text):
        path = tmp_path / "plant.toml"
        path.write_bytes(text if isinstance(text, bytes) else text.encode())
        return read_case(path)

    return read


@pytest.fixture
def complaints(case):
    """Return a function that writes a case file and returns its problems as (line, key, text)."""

    def read(text):
        with pytest.raises(CaseFileError) as refusal:
            case(text)
        assert refusal.value.exit_code == 2
        return [(problem.line, problem.key, problem.text) for problem in refusal.value.problems]

    return read

"""One small result to look at."""

from __future__ import annotations

import pytest
from tests.support.small_cases import GYPSUM

from gossan.case.read import case_from_text
from gossan.recording import run


@pytest.fixture(scope="session")
def result(tmp_path_factory):
    return run(case_from_text(GYPSUM), tmp_path_factory.mktemp("views") / "gypsum.h5").loaded()

"""What holds for every test: numpy's errors raise, examples are the same each time, the folder is empty."""

from __future__ import annotations

import os
from collections.abc import Iterator

import numpy as np
import pytest
from hypothesis import settings

# kernels that only kernels call are tested one by one: read when gossan.base.jit is imported, after this file
os.environ["GOSSAN_KERNEL_ENTRIES"] = "1"

# A trace may be so small that it vanishes: underflow is an answer, all else is a mistake.
np.seterr(divide="raise", over="raise", invalid="raise", under="ignore")

# the same examples on every machine; no deadline, since the first call may compile
settings.register_profile("fixed", deadline=None, derandomize=True, print_blob=True)
settings.load_profile("fixed")


@pytest.fixture(scope="session", autouse=True)
def an_empty_folder(tmp_path_factory: pytest.TempPathFactory) -> Iterator[None]:
    """Tests run in a folder of their own: nothing is left in the repository, nothing there is needed."""
    before = os.getcwd()
    os.chdir(tmp_path_factory.mktemp("here"))
    yield
    os.chdir(before)

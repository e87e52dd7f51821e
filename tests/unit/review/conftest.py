import sys
from pathlib import Path

import pytest

# What several test files share stands in the folder "support", which is no package.
sys.path += [str(Path(__file__).parent), str(Path(__file__).parents[2] / "support")]


@pytest.fixture(scope="session")
def issued():
    """Give the files of one issued sheet, by their kind."""
    from rechecked import issue

    return issue()


@pytest.fixture(scope="session")
def rechecked():
    """Give a recheck that makes each fresh sheet once."""
    from rechecked import Rechecker

    return Rechecker()

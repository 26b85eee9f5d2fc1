from collections.abc import Callable

import numpy as np
import pytest

from materials import database
from materials.gas import Gas
from materials.property import Property
from materials.source import Source


@pytest.fixture(scope="session")
def air() -> Gas:
    return database.gas("air")


@pytest.fixture(scope="session")
def curve() -> Callable[..., Property]:
    def build(T, value, rule="linear", beyond="hold"):
        source = Source("invented", "made up for this test", "assumed")
        return Property("emissivity", np.array(T), np.array(value), rule, beyond, 0.0, "1", source)

    return build

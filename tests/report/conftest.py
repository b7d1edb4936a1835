import importlib.util
import sys
from pathlib import Path

import pytest

PLACE = Path(__file__).parent.parent / "pictures" / "made_results.py"


def _loaded():
    if "made_results" not in sys.modules:
        spec = importlib.util.spec_from_file_location("made_results", PLACE)
        module = importlib.util.module_from_spec(spec)
        sys.modules["made_results"] = module
        spec.loader.exec_module(module)
    return sys.modules["made_results"]


@pytest.fixture(scope="session")
def factory():
    """The module that makes results by hand."""
    return _loaded()


@pytest.fixture(scope="session")
def short(factory):
    """Results that fall short."""
    return factory.made(short=True)


@pytest.fixture(scope="session")
def meets(factory):
    """Results that meet every target."""
    return factory.made(short=False)

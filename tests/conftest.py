"""What several folders of tests share."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path
from types import ModuleType

import pytest


@pytest.fixture(scope="session")
def samples() -> ModuleType:
    """Patterns and a solid from elementary geometry: tests/outputs/samples.py."""
    path = Path(__file__).parent / "outputs" / "samples.py"
    spec = importlib.util.spec_from_file_location("samples_of_outputs", path)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module  # dataclasses look their module up
    spec.loader.exec_module(module)
    return module

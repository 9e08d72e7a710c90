"""A check value that names its derivation is computed again by it, and every worksheet function has a check value.

An item's ``derivation`` names the function of ``derivations/<its file's name>.py`` that finds the number by another way
than the tool does; here it is run and must give the number of the YAML, to its digits.
"""

import importlib
import inspect
import re
from pathlib import Path
from types import ModuleType
from typing import Any

import numpy as np
import pytest
import yaml

from doubler import catalogue, mechanics

FOLDER = Path(__file__).parent
ITEMS = {path.stem: yaml.safe_load(path.read_text(encoding="utf-8")) for path in sorted(FOLDER.glob("*.yaml"))}
DERIVED = [
    pytest.param(topic, item, id=f"{topic}:{item['id']}")
    for topic, items in ITEMS.items()
    for item in items
    if "derivation" in item
]
TOPICS = sorted(path.stem for path in (FOLDER / "derivations").glob("*.py") if path.stem in ITEMS)


def module_of(topic: str) -> ModuleType:
    return importlib.import_module(f"published.derivations.{topic}")


@pytest.mark.parametrize(("topic", "item"), DERIVED)
def test_the_computed_value_is_found_again(topic: str, item: dict[str, Any]) -> None:
    assert item["confidence"] == "computed"
    found, expected = getattr(module_of(topic), item["derivation"])(), item["expected"]
    if isinstance(expected, str):
        assert found == expected
        return
    found, expected = np.asarray(found, dtype=float), np.asarray(expected, dtype=float)
    assert found.shape == expected.shape
    np.testing.assert_allclose(found, expected, rtol=1e-8, atol=1e-9 * np.max(np.abs(expected)))


@pytest.mark.parametrize("topic", TOPICS)
def test_no_derivation_stands_unused(topic: str) -> None:
    module = module_of(topic)
    written = {
        name
        for name, member in inspect.getmembers(module, inspect.isfunction)
        if member.__module__ == module.__name__ and not name.startswith("_")
    }
    assert written == {item["derivation"] for item in ITEMS[topic] if "derivation" in item}


def test_no_derivation_asks_the_tool() -> None:
    for path in (FOLDER / "derivations").glob("*.py"):
        assert "doubler" not in path.read_text(encoding="utf-8"), path.name


def test_every_function_has_a_check_value_from_outside() -> None:
    mechanics.load()
    used = {
        name
        for items in ITEMS.values()
        for item in items
        for name in re.findall(r"\b[A-Z]+_[A-Z0-9_]+(?=\()", item["formula"])
    }
    assert not sorted(set(catalogue.names()) - used)

"""Every public function says in which unit each number is."""

import importlib
import inspect
import pkgutil
import re
from collections.abc import Callable, Iterator
from typing import Any

import pytest

import heataudit.physics

NUMERIC = re.compile(r"\b(Numbers|Array|float|int)\b")
UNIT = re.compile(r"\[[^\]\s][^\]]*\]")


def public_callables() -> Iterator[tuple[str, Callable[..., Any]]]:
    for module_info in pkgutil.iter_modules(heataudit.physics.__path__, "heataudit.physics."):
        module = importlib.import_module(module_info.name)
        for name, thing in vars(module).items():
            if name.startswith("_") or getattr(thing, "__module__", None) != module.__name__:
                continue
            if inspect.isclass(thing):
                yield f"{module.__name__}.{name}", thing
                for method_name, method in vars(thing).items():
                    if inspect.isfunction(method) and not method_name.startswith("_"):
                        yield f"{module.__name__}.{name}.{method_name}", method
            elif inspect.isfunction(thing):
                yield f"{module.__name__}.{name}", thing


PUBLIC = dict(public_callables())


def numbers_without_unit(function: Callable[..., Any]) -> list[str]:
    """Names of the numeric arguments whose paragraph under Parameters shows no unit in brackets."""
    text = inspect.getdoc(function) or ""
    section = re.search(r"^Parameters\n-+\n(.*?)(?=^\w[^\n]*\n-+\n|\Z)", text, re.DOTALL | re.MULTILINE)
    paragraphs = dict(re.findall(r"^(\w+)\n((?:[ ]+.*\n?)+)", section[1] if section else "", re.MULTILINE))
    numeric = [
        name for name, parameter in inspect.signature(function).parameters.items()
        if NUMERIC.search(str(parameter.annotation))
    ]  # fmt: skip
    return [name for name in numeric if not UNIT.search(paragraphs.get(name, ""))]


@pytest.mark.parametrize("name", PUBLIC)
def test_every_numeric_argument_has_its_unit(name: str) -> None:
    assert numbers_without_unit(PUBLIC[name]) == []


@pytest.mark.parametrize("name", PUBLIC)
def test_what_is_returned_has_its_unit(name: str) -> None:
    function = PUBLIC[name]
    if inspect.isclass(function) or not NUMERIC.search(str(inspect.signature(function).return_annotation)):
        return
    above_parameters = (inspect.getdoc(function) or "").split("Parameters\n")[0]
    assert UNIT.search(above_parameters)


def test_the_walk_meets_the_functions() -> None:
    assert {"heataudit.physics.lines.line_drop", "heataudit.physics.oil.Oil.viscosity"} <= PUBLIC.keys()


def test_a_missing_unit_is_noticed() -> None:
    def lift(height: float, density: float) -> float:
        """Pressure.

        Parameters
        ----------
        height
            Height [m].
        density
            Density of the oil.
        """
        return height * density

    assert numbers_without_unit(lift) == ["density"]

"""The house: data flows one way, and imports never run upward."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parent.parent / "heataudit"
ROOMS = ("machine", "physics", "network", "audit", "report", "fleet", "cli", "__main__", "__init__")
"""From the bottom up."""


def room_of(parts: tuple[str, ...]) -> int:
    """Storey of a module, by the parts of its path below the package."""
    return ROOMS.index(parts[0].removesuffix(".py")) if parts else ROOMS.index("__init__")


def imported(tree: ast.AST) -> set[tuple[str, ...]]:
    """What a module imports of the package, wherever the import stands."""
    found = set()
    for node in ast.walk(tree):
        names = []
        if isinstance(node, ast.Import):
            names = [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom) and node.module:
            names = [node.module]
        found |= {tuple(name.split(".")[1:]) for name in names if name.split(".")[0] == "heataudit"}
    return found


@pytest.mark.parametrize("path", sorted(PACKAGE.rglob("*.py")), ids=lambda path: str(path.relative_to(PACKAGE)))
def test_imports_never_run_upward(path: Path) -> None:
    storey = room_of(path.relative_to(PACKAGE).parts)
    for parts in imported(ast.parse(path.read_text(encoding="utf-8"))):
        if not parts and ROOMS[storey] in ("cli", "__main__", "report"):
            continue  # the version stands in the public face
        assert room_of(parts) <= storey, f"{path.name} imports heataudit.{'.'.join(parts)} from a room above"


def test_the_top_level_is_as_agreed() -> None:
    allowed = {"README.md", "DEVELOPERS.md", "pyproject.toml", "heataudit", "tests", "templates", "examples", "build"}
    found = {path.name for path in PACKAGE.parent.iterdir() if not path.name.startswith(".")}
    assert {name for name in found if not name.endswith(".egg-info")} <= allowed

"""The shape of the house: what imports what, and that the tests run against what is installed."""

from __future__ import annotations

import ast
import json
import sys
from collections.abc import Iterator
from functools import cache
from importlib.metadata import distribution
from pathlib import Path
from types import ModuleType
from urllib.parse import unquote, urlparse

import pytest

import engine
import tui

STORE_SIDE = {"store"}
"""Modules of the engine that may import tomli_w."""


def folder(package: ModuleType) -> Path:
    """Where an imported package stands."""
    return Path(str(package.__file__)).resolve().parent


@cache
def modules() -> dict[str, ast.Module]:
    """The source of every module of the engine that was imported, by its name in the package."""
    return {path.stem: ast.parse(path.read_bytes()) for path in sorted(folder(engine).glob("*.py"))}


def imported(tree: ast.Module) -> Iterator[str]:
    """Full names of all that a module imports, wherever in it: engine.x for a module of the engine."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            base = ".".join(filter(None, ["engine" if node.level else "", node.module or ""]))
            yield from ([f"{base}.{alias.name}" for alias in node.names] if base == "engine" else [base])


def inside() -> dict[str, set[str]]:
    """For each module of the engine, the modules of the engine that it imports."""
    names = modules()
    return {
        name: {word.split(".")[1] for word in imported(tree) if word.startswith("engine.")} & set(names)
        for name, tree in names.items()
    }


def test_the_engine_has_modules_to_look_at() -> None:
    assert {"stress", "criteria", "project", "edits", "margins", "store"} <= set(modules())


@pytest.mark.parametrize("name", list(modules()))
def test_the_engine_imports_numpy_and_the_standard_library_only(name: str) -> None:
    roots = {word.split(".")[0] for word in imported(modules()[name])}
    allowed = set(sys.stdlib_module_names) | {"numpy", "engine"} | ({"tomli_w"} if name in STORE_SIDE else set())
    assert roots - allowed == set()


def test_imports_inside_the_engine_go_one_way() -> None:
    left, order = inside(), []
    while left:
        free = [name for name, needs in left.items() if not needs & left.keys()]
        assert free, f"these import one another: {sorted(left)}"
        order += free
        left = {name: needs for name, needs in left.items() if name not in free}
    assert order.index("stress") < order.index("project") < order.index("edits")
    assert order.index("project") < order.index("table") < order.index("margins")


def test_the_margins_do_not_need_the_project_file() -> None:
    graph: dict[str, set[str]] = inside()
    needs: set[str] = set()
    todo = ["margins", "edits", "summary", "cautions"]
    while todo:
        more = graph[todo.pop()] - needs
        todo += more
        needs |= more
    assert not needs & {"store", "spans", "inplace", "fileblocks"}


def installed_at() -> Path:
    """Where the packages of the installed distribution stand: a checkout, if the install is editable."""
    found = distribution("hexlipse")
    text = found.read_text("direct_url.json")
    origin = json.loads(text) if text else {}
    if origin.get("dir_info", {}).get("editable"):
        return Path(unquote(urlparse(origin["url"]).path)).resolve()
    return Path(str(found.locate_file(""))).resolve()


@pytest.mark.parametrize("package", [engine, tui])
def test_the_packages_under_test_are_those_that_are_installed(package: ModuleType) -> None:
    assert folder(package).parent == installed_at()


def test_the_engine_is_typed_for_who_imports_it() -> None:
    assert (folder(engine) / "py.typed").is_file()

"""The house rules: which way imports run, how large a room may be, and what no tracked file may say."""

import ast
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
MODULES = sorted([*ROOT.glob("models/**/*.py"), *ROOT.glob("optimizer/**/*.py")])
FORBIDDEN_IN_MODELS = {"pymoo", "pandas", "typer", "optimizer", "altair", "pint", "rich", "moocore"}
LARGEST_MODULE = 400
UNWANTED_NAMES = {"utils", "helpers", "common", "util", "helper", "misc"}


def imported(path):
    tree = ast.parse(path.read_text())
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            yield from (alias.name.split(".")[0] for alias in node.names)
        elif isinstance(node, ast.ImportFrom) and node.module and node.level == 0:
            yield node.module.split(".")[0]


@pytest.mark.parametrize(
    "path", [path for path in MODULES if "models" in path.parts], ids=lambda path: path.stem
)
def test_models_stand_alone(path):
    assert not set(imported(path)) & FORBIDDEN_IN_MODELS


@pytest.mark.parametrize("path", MODULES, ids=lambda path: str(path.relative_to(ROOT)))
def test_rooms_are_not_crowded(path):
    assert len(path.read_text().splitlines()) <= LARGEST_MODULE
    assert path.stem not in UNWANTED_NAMES


@pytest.mark.parametrize("path", MODULES, ids=lambda path: str(path.relative_to(ROOT)))
def test_public_things_have_docstrings(path):
    tree = ast.parse(path.read_text())
    assert path.stem == "__init__" or ast.get_docstring(tree)
    for node in ast.walk(tree):
        if isinstance(node, ast.FunctionDef | ast.ClassDef) and not node.name.startswith("_"):
            inner = isinstance(node, ast.FunctionDef) and not _at_top(tree, node)
            assert inner or ast.get_docstring(node), f"{node.name} has no docstring"


def _at_top(tree, node):
    holders = [tree, *(entry for entry in tree.body if isinstance(entry, ast.ClassDef))]
    return any(node in holder.body for holder in holders)


@pytest.mark.parametrize("heavy", ["numpy", "pandas", "altair", "pymoo", "scipy", "pint"])
def test_help_imports_nothing_heavy(heavy):
    code = f"import sys, optimizer.cli; sys.exit('{heavy}' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], cwd=ROOT, check=False).returncode == 0

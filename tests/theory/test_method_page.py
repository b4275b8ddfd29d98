"""docs/method.md names only what exists, and leaves out no public function of a module it treats.

Helps whoever follows a number from the screen to its formula: a page that lags behind is a lie.
"""

import ast
import re
from functools import cache
from pathlib import Path

import pytest

TOP = Path(__file__).parents[2]
PAGE = (TOP / "docs" / "method.md").read_text(encoding="utf-8")
THEORY = TOP / "rescue_planner" / "theory"
SAID = re.findall(r"`([a-z_]+(?:\.[a-z_]+)+)`", PAGE)
NAMED = sorted({name for name in SAID if name != "module.name" and not name.endswith(".py")})
TESTS = sorted(set(re.findall(r"`([a-z_]+): ([a-z0-9_]+)`", PAGE)))
TREATED = sorted(set(re.findall(r"^## `([a-z_]+)`", PAGE, flags=re.MULTILINE)))


@cache
def functions(path):
    tree = ast.parse(path.read_text(encoding="utf-8"))
    return {node.name for node in tree.body if isinstance(node, ast.FunctionDef)}


@cache
def names_by_file():
    found = {}
    for path in (TOP / "tests").rglob("test_*.py"):
        names = {name.removeprefix("test_that_") for name in functions(path)}
        found.setdefault(path.stem.removeprefix("test_"), set()).update(names)
    return found


def test_that_every_function_named_exists():
    missing = []
    for name in NAMED:
        *where, function = name.split(".")
        package = (TOP / "rescue_planner" / where[0]).is_dir()
        base = TOP / "rescue_planner" if package else THEORY
        path = base.joinpath(*where).with_suffix(".py")
        if package and base.joinpath(*where, function).with_suffix(".py").exists():
            continue  # the name of a module
        if not path.exists() or function not in functions(path):
            missing.append(name)
    assert missing == []


def test_that_every_test_named_exists():
    known = names_by_file()
    assert [f"{f}: {name}" for f, name in TESTS if name not in known.get(f, set())] == []


@pytest.mark.parametrize("module", TREATED)
def test_that_no_public_function_is_left_out(module):
    public = {name for name in functions(THEORY / f"{module}.py") if not name.startswith("_")}
    said = {name.split(".")[1] for name in NAMED if name.split(".")[0] == module}
    assert sorted(public - said) == []


def test_that_every_row_of_the_page_has_its_five_cells():
    for block in re.split(r"\n\n", PAGE):
        if "| formula |" in block:
            assert {line.count("|") for line in block.splitlines()} == {6}


def test_that_the_page_is_read_at_all():
    """A pattern that finds nothing would pass every check above."""
    assert len(NAMED) > 100
    assert len(TESTS) > 100
    assert len(TREATED) > 15

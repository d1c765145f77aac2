"""The Python interface: the same answers as the command, every public name documented, errors said."""

from __future__ import annotations

import ast
import importlib
import inspect
import json
import pkgutil
from pathlib import Path

import pytest
from commands import command

import quillshaft
from train_files import TEXT

ROOT = Path(quillshaft.__file__).parent
MODULES = sorted(item.name for item in pkgutil.walk_packages([str(ROOT)], "quillshaft."))
SOURCES = sorted(ROOT.rglob("*.py"))
Function = ast.FunctionDef | ast.AsyncFunctionDef


def test_three_lines_give_what_the_command_gives(tmp_path):
    path = tmp_path / "train.toml"
    path.write_text(TEXT, "utf-8")
    train = quillshaft.load(path)
    screening = quillshaft.screen(train)
    text = quillshaft.screening_json(screening)
    assert text == command("screen", path, "--json", "-").out
    assert json.loads(text)["verdict"] == screening.verdict
    changed = quillshaft.screen(quillshaft.load(path, ["new-coupling"]))
    assert quillshaft.screening_json(changed) == command("screen", path, "--case", "new-coupling", "--json", "-").out


def test_a_bad_file_raises_one_error_with_every_problem(tmp_path):
    path = tmp_path / "train.toml"
    path.write_text(TEXT.replace("[29, 77]", "[29]").replace("psi = 1.1", "psi = -1"), "utf-8")
    with pytest.raises(quillshaft.TrainFileError) as caught:
        quillshaft.load(path)
    assert [problem.line for problem in caught.value.problems] == [33, 35]
    assert all(isinstance(problem, quillshaft.Problem) for problem in caught.value.problems)
    assert str(caught.value) + "\n" == command("screen", path).err


@pytest.mark.parametrize("name", sorted(set(quillshaft.__all__) - {"__version__"}))
def test_a_public_name_is_documented_and_found(name):
    value = getattr(quillshaft, name)
    assert inspect.getdoc(value)
    assert value.__name__ == name


def test_a_name_that_is_not_there_is_an_attribute_error():
    with pytest.raises(AttributeError, match="has no attribute 'shake'"):
        quillshaft.shake  # noqa: B018


@pytest.mark.parametrize("name", MODULES)
def test_every_module_class_and_function_is_documented(name):
    module = importlib.import_module(name)
    source = Path(str(module.__file__)).read_text("utf-8")
    assert module.__doc__ or not source.strip(), "only an empty file goes without a docstring"
    for key, value in vars(module).items():
        own = getattr(value, "__module__", None) == name and not key.startswith("_")
        if own and (inspect.isclass(value) or inspect.isfunction(value)):
            assert value.__doc__, f"{name}.{key}"


def _functions(path: Path) -> list[Function]:
    return [node for node in ast.walk(ast.parse(path.read_text("utf-8"))) if isinstance(node, Function)]


def _raises(function: Function) -> list[str]:
    """Errors that a function raises itself, bare re-raises left out."""
    raised = [node.exc for node in ast.walk(function) if isinstance(node, ast.Raise) and node.exc is not None]
    return [ast.unparse(item.func if isinstance(item, ast.Call) else item) for item in raised]


def _silent(path: Path) -> list[str]:
    """Public functions of a file that raise and do not say so."""
    found = []
    for function in _functions(path):
        public = not function.name.startswith("_") and not any(
            "after" in ast.unparse(d) for d in function.decorator_list
        )
        if public and _raises(function) and "aises" not in (ast.get_docstring(function) or ""):
            found.append(f"{path.relative_to(ROOT)}:{function.name}")
    return found


COMMANDS = {"cli/main.py:main", "cli/main.py:run"} | {
    f"cli/{name}_command.py:{name}" for name in ("screen", "report", "respond")
}
"""Commands end with an exit code: their docstring is the text of --help."""


def test_a_public_function_that_raises_says_so():
    silent = {name for path in SOURCES for name in _silent(path)}
    assert silent - COMMANDS == set()


def test_the_walk_over_raising_functions_sees_them():
    raising = [f.name for path in SOURCES for f in _functions(path) if _raises(f) and not f.name.startswith("_")]
    assert {"lay_cases", "parse_document", "read_quantity"} <= set(raising)


def test_every_public_function_is_fully_annotated():
    bare = []
    for path in SOURCES:
        for function in _functions(path):
            arguments = [*function.args.posonlyargs, *function.args.args, *function.args.kwonlyargs]
            named = [item for item in arguments if item.arg not in ("self", "cls")]
            if function.returns is None or any(item.annotation is None for item in named):
                bare.append(f"{path.relative_to(ROOT)}:{function.name}")
    assert bare == []

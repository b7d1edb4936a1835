"""The shape of files and functions: short, named after the trade, finished, and the same on every machine."""

import ast
import re
from pathlib import Path

import pytest

CHECKOUT = Path(__file__).resolve().parents[2]
ERGO = sorted((CHECKOUT / "ergo").rglob("*.py"))
TESTS = sorted((CHECKOUT / "tests").rglob("*.py"))
KINDS = {".py", ".toml", ".csv", ".js", ".css", ".typ", ".md", ".html"}
NOT_OURS = {"vendor", "__pycache__"}
PAGES = [CHECKOUT / name for name in ("README.md", "DEVELOPERS.md", "pyproject.toml")]
WRITTEN = [
    path
    for found in (*((CHECKOUT / top).rglob("*") for top in ("ergo", "assets", "datasets", "tests")), PAGES)
    for path in sorted(found)
    if path.is_file() and path.suffix in KINDS and not NOT_OURS & set(path.parts) and path != Path(__file__).resolve()
]
LONGEST_FUNCTION, LONGEST_FILE = 40, 400
NO_TRADE_NAMES = {"utils", "util", "helpers", "helper", "common", "base", "misc"}
UNFINISHED = re.compile(r"\b(TO" + r"DO|FIX" + r"ME|X" + r"XX|HACK)\b")
# Folders that exist on one machine only; "/tmp" and the like inside a longer word are none.
MACHINE_PATH = re.compile(r"(?<![\w./*])(/root|/home|/work|/tmp|/Users|/mnt|[A-Z]:\\\\)(?=[/\"'\s]|$)")
FUNCTIONS = (ast.FunctionDef, ast.AsyncFunctionDef)


def place(path):
    return str(path.relative_to(CHECKOUT))


def code_lines(function, lines):
    """Lines of a function that hold code: neither blank, nor a comment, nor its docstring."""
    told = range(0)
    if ast.get_docstring(function) is not None:
        told = range(function.body[0].lineno, function.body[0].end_lineno + 1)
    spanned = range(function.lineno, function.end_lineno + 1)
    return sum(n not in told and bool(text := lines[n - 1].strip()) and not text.startswith("#") for n in spanned)


def functions(path):
    text = path.read_text(encoding="utf-8")
    return [(node, text.splitlines()) for node in ast.walk(ast.parse(text)) if isinstance(node, FUNCTIONS)]


def test_the_counter_counts_code_alone():
    text = 'def f(a):\n    """Say\n    much."""\n    # why\n\n    b = (a +\n         1)\n    return b\n'
    assert code_lines(ast.parse(text).body[0], text.splitlines()) == 4


@pytest.mark.parametrize("path", ERGO, ids=place)
def test_functions_are_short(path):
    long = {node.name: code_lines(node, lines) for node, lines in functions(path)}
    assert {name: n for name, n in long.items() if n > LONGEST_FUNCTION} == {}


def test_files_are_short():
    counts = {place(path): len(path.read_text(encoding="utf-8").splitlines()) for path in ERGO}
    assert len(counts) > 100
    assert {name: n for name, n in counts.items() if n > LONGEST_FILE} == {}


def test_files_have_names_of_the_trade():
    assert [place(path) for path in [*ERGO, *TESTS] if path.stem in NO_TRADE_NAMES] == []


def test_modules_say_what_they_are():
    said = [*ERGO, *(path for path in TESTS if path.name.startswith("test_"))]
    silent = [place(p) for p in said if not ast.get_docstring(ast.parse(p.read_text(encoding="utf-8")))]
    assert silent == []


def test_nothing_is_left_unfinished():
    assert [place(path) for path in WRITTEN if UNFINISHED.search(path.read_text(encoding="utf-8"))] == []


def test_no_path_of_one_machine():
    found = {place(p): m.group(0) for p in WRITTEN if (m := MACHINE_PATH.search(p.read_text(encoding="utf-8")))}
    assert found == {}


def only_not_a_number(test):
    """Whether an assertion asks for nothing but NaN or its absence."""
    call = test.operand if isinstance(test, ast.UnaryOp) else test
    while isinstance(call, ast.Call) and isinstance(call.func, ast.Attribute) and call.func.attr in {"all", "any"}:
        call = call.args[0] if call.args else call.func.value
        call = call.operand if isinstance(call, ast.UnaryOp) else call
    name = call.func.attr if isinstance(call, ast.Call) and isinstance(call.func, ast.Attribute) else ""
    return name in {"isnan", "isfinite"}


def checks(function):
    """What a test asserts: conditions of `assert`, and None for any other way to check."""
    found = [node.test for node in ast.walk(function) if isinstance(node, ast.Assert)]
    for node in ast.walk(function):
        if isinstance(node, ast.Call):
            called = ast.unparse(node.func)
            if re.search(r"raises|warns|assert_\w+|expect|benchmark", called):
                found.append(None)
    return found


def test_the_finder_of_tests_without_a_number_finds_them():
    text = "def test_a():\n    assert np.isfinite(x).all()\n    assert not np.any(np.isnan(x))\n"
    conditions = checks(ast.parse(text).body[0])
    assert [only_not_a_number(c) for c in conditions] == [True, True]
    assert not only_not_a_number(ast.parse("x == 1").body[0].value)


@pytest.mark.parametrize("path", [p for p in TESTS if p.name.startswith("test_")], ids=place)
def test_every_test_asserts_more_than_that_a_number_is_there(path):
    local = {n.name for n, _ in functions(path) if not n.name.startswith("test_") and checks(n)}
    empty = []
    for node, _ in functions(path):
        if not node.name.startswith("test_"):
            continue
        called = {ast.unparse(c.func) for c in ast.walk(node) if isinstance(c, ast.Call)}
        found = checks(node)
        if called & local or any(c is None or not only_not_a_number(c) for c in found):
            continue
        empty.append(node.name)
    assert empty == []

"""The house rules that a program can check: imports go one way, and modules stay small."""

from __future__ import annotations

import ast
import re
import shutil
import subprocess
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
PACKAGE = ROOT / "derive"
# The journey is the layout: a station uses itself and those before it.
STATIONS = (
    "errors",
    "version",
    "algebra",
    "expressions",
    "quantities",
    "topology",
    "devices",
    "reading",
    "bands",
    "nodal",
    "eliminate",
    "normalise",
    "readable",
    "bias",
    "reactances",
    "estimates",
    "approximate",
    "response",
    "check",
    "handcheck",
    "drawing",
    "sheet",
    "render",
    "pipeline",
    "progress",
    "batch",
    "hand",
    "compare",
    "review",
    "start",
    "watch",
    "cli",
)
# These two stand in front of the journey and look at all of it.
FRONT = ("__init__", "__main__")
MODULES = sorted(path for path in PACKAGE.rglob("*.py"))
TOP_LEVEL = {
    "README.md",
    "DEVELOPERS.md",
    "pyproject.toml",
    "LICENSE",
    "derive",
    "report_templates",
    "tests",
    "cases",
}
LONGEST_MODULE, LONGEST_FUNCTION = 350, 60


def name_of(path: Path) -> str:
    return str(path.relative_to(ROOT).with_suffix("")).replace("/", ".").removesuffix(".__init__")


def station_of(module: str) -> str:
    words = module.split(".")
    return words[1] if len(words) > 1 else "__init__"


def imports_of(tree: ast.AST, package: str, known: set[str]) -> set[str]:
    """Give the modules of this package that a module imports anywhere, functions included."""
    found: set[str] = set()
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            base = node.module or ""
            if node.level:
                above = package.split(".")[: len(package.split(".")) - node.level + 1]
                base = ".".join([*above, *([node.module] if node.module else [])])
            found |= {
                f"{base}.{alias.name}" if f"{base}.{alias.name}" in known else base
                for alias in node.names
            }
    return {module for module in found if module == "derive" or module.startswith("derive.")}


def backward(imports: dict[str, set[str]]) -> list[str]:
    """Give what breaks the order of the stations, in words."""
    wrong = []
    for module, used in sorted(imports.items()):
        own = station_of(module)
        if own in FRONT:
            continue
        for other in sorted(used):
            station = station_of(other)
            if station in FRONT or STATIONS.index(station) > STATIONS.index(own):
                wrong.append(f"{module} imports {other}")
    return wrong


def cycle(imports: dict[str, set[str]]) -> list[str]:
    """Give the modules of one circle of imports; nothing where there is none."""
    left = {module: {other for other in used if other != module} for module, used in imports.items()}
    while True:
        free = [module for module, used in left.items() if not used & left.keys()]
        if not free:
            return sorted(left)
        for module in free:
            del left[module]


def read_imports() -> dict[str, set[str]]:
    known = {name_of(path) for path in MODULES}
    return {
        name_of(path): imports_of(
            ast.parse(path.read_text(encoding="utf-8")),
            name_of(path) if path.name == "__init__.py" else name_of(path).rpartition(".")[0],
            known,
        )
        for path in MODULES
    }


def test_every_module_belongs_to_a_station():
    assert {station_of(name_of(path)) for path in MODULES} <= {*STATIONS, *FRONT}


def test_imports_go_one_way_those_inside_functions_included():
    assert backward(read_imports()) == []


def test_a_backward_import_would_be_seen():
    source = "def late():\n    from derive.sheet import compose\n    from ..render import pdf\n"
    known = {"derive.sheet.compose", "derive.render.pdf"}
    used = imports_of(ast.parse(source), "derive.nodal", known)
    assert used == {"derive.sheet.compose", "derive.render.pdf"}
    assert len(backward({"derive.nodal.write": used})) == 2


def test_no_module_imports_in_a_circle():
    assert cycle(read_imports()) == []
    assert cycle({"a": {"b"}, "b": {"c"}, "c": {"a"}, "d": {"a"}}) == ["a", "b", "c", "d"]


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_modules_and_functions_stay_small(path):
    text = path.read_text(encoding="utf-8")
    assert text.count("\n") <= LONGEST_MODULE
    for node in ast.walk(ast.parse(text)):
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef):
            assert node.end_lineno - node.lineno + 1 <= LONGEST_FUNCTION, node.name


def test_every_folder_of_the_package_says_what_it_is_for():
    for folder in sorted({path.parent for path in MODULES}):
        first = folder / "__init__.py"
        assert first.is_file(), folder
        assert ast.get_docstring(ast.parse(first.read_text(encoding="utf-8"))), first


# One makes a pattern, and no user writes one; the other sets type in a language that runs no program.
HARMLESS = {("re", "compile"), ("typst", "compile")}
FORBIDDEN_CALLS = {"eval", "exec", "compile", "__import__", "sympify", "parse_expr", "S"}


def forbidden_calls(tree: ast.AST) -> list[str]:
    """Give the calls by which a user's text could come to be run."""
    found = []
    for node in ast.walk(tree):
        if isinstance(node, ast.Call):
            called = node.func
            if isinstance(called, ast.Name) and called.id in FORBIDDEN_CALLS:
                found.append(called.id)
            elif isinstance(called, ast.Attribute) and called.attr in FORBIDDEN_CALLS:
                owner = called.value.id if isinstance(called.value, ast.Name) else ""
                if (owner, called.attr) not in HARMLESS:
                    found.append(called.attr)
    return found


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_nothing_that_a_user_writes_can_be_run(path):
    assert forbidden_calls(ast.parse(path.read_text(encoding="utf-8"))) == []


def test_a_call_that_runs_text_would_be_seen():
    for text in ("eval(x)", "sympy.sympify(x)", "builtins.exec(x)", "compile(x, '', 'eval')"):
        assert forbidden_calls(ast.parse(text)), text
    assert forbidden_calls(ast.parse("re.compile('a')")) == []


def prints(tree: ast.AST) -> bool:
    calls = (node for node in ast.walk(tree) if isinstance(node, ast.Call))
    return any(isinstance(call.func, ast.Name) and call.func.id == "print" for call in calls)


def test_only_the_command_line_prints():
    printing = [name_of(path) for path in MODULES if prints(ast.parse(path.read_text(encoding="utf-8")))]
    assert printing == ["derive.cli"]


# Written in pieces, so that this file does not hold what it looks for.
UNFINISHED = re.compile("|".join(("TO" + "DO", "FIX" + "ME", "X" * 3, "NotImplemented" + "Error")))
MACHINE_PATH = re.compile(
    "|".join(("/wo" + "rk/", "/tm" + "p/", "/ho" + "me/", "/us" + r"r/(?!bin/env)"))
)


def text_files() -> list[Path]:
    endings = {".py", ".toml", ".md", ".html", ".css", ".typ", ".lark", ".j2"}
    folders = (PACKAGE, ROOT / "tests", ROOT / "report_templates", ROOT / "cases")
    found = [path for folder in folders for path in sorted(folder.rglob("*")) if path.suffix in endings]
    found += [path for path in sorted(ROOT.glob("*")) if path.suffix in endings]
    return [path for path in found if "__pycache__" not in path.parts]


def test_nothing_is_left_unfinished():
    found = [path for path in text_files() if UNFINISHED.search(path.read_text(encoding="utf-8"))]
    assert found == []
    assert UNFINISHED.search("# TO" + "DO: later")


def test_no_file_knows_the_machine_that_it_was_written_on():
    found = [path for path in text_files() if MACHINE_PATH.search(path.read_text(encoding="utf-8"))]
    assert found == []
    assert MACHINE_PATH.search('open("/tm' + 'p/x")')
    assert not MACHINE_PATH.search("#!/usr/bin/env python")


ELECTRICAL = re.compile("resist|volt|capac|ohm|circuit|node|ampl|current|impedan|induct", re.IGNORECASE)


@pytest.mark.parametrize("path", sorted((PACKAGE / "algebra").glob("*.py")), ids=name_of)
def test_the_algebra_does_not_know_what_it_is_used_for(path):
    assert ELECTRICAL.findall(path.read_text(encoding="utf-8")) == []


def test_a_word_of_the_trade_would_be_seen():
    assert ELECTRICAL.search('"""Solve for the Voltage of a node."""')


def git(*words: str) -> str:
    if shutil.which("git") is None:
        pytest.skip("this machine has no git")
    done = subprocess.run(["git", *words], cwd=ROOT, capture_output=True, text=True, check=False)
    if done.returncode:
        pytest.skip("this is no git checkout")
    return done.stdout


def test_the_top_level_holds_what_it_is_to_hold_and_no_more():
    tracked = {line.split("/")[0] for line in git("ls-files").splitlines()}
    assert {name for name in tracked if not name.startswith(".")} <= TOP_LEVEL


def test_what_programs_leave_behind_is_ignored():
    ignored = ["sheets", "build", "dist", ".venv", ".hypothesis", ".pytest_cache", "derive/__pycache__"]
    assert git("check-ignore", "--no-index", *(f"{name}/x" for name in ignored)).split() == [
        f"{name}/x" for name in ignored
    ]

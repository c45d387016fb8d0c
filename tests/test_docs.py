"""The documentation: its code runs and prints what it shows, and what it names exists."""

import ast
import importlib.util
import re
import shlex
import tomllib
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest

import wellindex
from wellindex import CaseError
from wellindex.__main__ import main
from wellindex.case.schema import read_case

ROOT = Path(__file__).parents[1]
DOCS = ROOT / "docs"
PACKAGE = Path(wellindex.__file__).parent
EXAMPLE = PACKAGE / "case" / "five_layers.toml"


def _script(name: str) -> ModuleType:
    spec = importlib.util.spec_from_file_location(name, DOCS / "scripts" / f"{name}.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


pages = _script("pages")
PAGES = [
    path
    for path in [
        ROOT / "README.md",
        ROOT / "DEVELOPERS.md",
        *sorted(DOCS.rglob("*.rst")),
        *sorted(DOCS.rglob("*.md")),
    ]
    if not path.relative_to(ROOT).as_posix().startswith(("docs/_build", "docs/_generated"))
]
WITH_CODE = [page for page in PAGES if pages.examples(page)]


def _named(path: Path) -> str:
    return path.relative_to(ROOT).as_posix()


@pytest.mark.parametrize("page", WITH_CODE, ids=_named)
def test_the_code_of_a_page_runs_and_prints_what_it_shows(page: Path) -> None:
    pages.run(page)


def test_no_block_of_code_is_missed() -> None:
    found = sum(len(pages.examples(page)) for page in PAGES)
    written = sum(
        len(re.findall(r"^(?:```python|\.\. code-block:: python)$", page.read_text(), re.MULTILINE))
        for page in PAGES
    )
    assert found == written > 30


@pytest.mark.parametrize(
    ("suffix", "text"),
    [
        (".md", "```python\nprint(1 + 1)\n```\n\n```text\n3\n```\n"),
        (".md", "```python\nprint(1 + 1)\n```\n\nNot shown.\n"),
        (".rst", ".. code-block:: python\n\n   print(1 + 1)\n\n.. code-block:: text\n\n   3\n"),
    ],
)
def test_a_page_that_shows_something_else_is_caught(suffix: str, text: str, tmp_path: Path) -> None:
    page = tmp_path / f"page{suffix}"
    page.write_text(text)
    with pytest.raises(AssertionError, match="line"):
        pages.run(page)


def test_every_public_name_is_in_the_reference() -> None:
    text = "\n".join(page.read_text() for page in (DOCS / "reference").glob("*.rst"))
    documented = re.findall(
        r"^\.\. (?:auto(?:function|class|exception)|py:(?:data|class)):: (\w+)", text, re.MULTILINE
    )
    assert sorted(documented) == sorted(wellindex.__all__)


def _callables() -> dict[str, Any]:
    """Every function, class and method of the reference, by its name there."""
    found: dict[str, Any] = {}
    for page in sorted((DOCS / "reference").glob("*.rst")):
        for directive in re.split(r"^(?=\.\. auto)", page.read_text(), flags=re.MULTILINE):
            head = re.match(r"\.\. auto(function|class):: (\w+)", directive)
            if head is None:
                continue
            thing = getattr(wellindex, head[2])
            found[head[2]] = thing
            members = re.search(r":members:(.*)", directive)
            hidden = re.search(r":exclude-members:(.*)", directive)
            names = set(members[1].replace(",", " ").split() or vars(thing)) if members else set()
            names -= set(hidden[1].replace(",", " ").split() if hidden else ())
            for name in sorted(names):
                if not name.startswith("_") and callable(getattr(thing, name)):
                    found[f"{head[2]}.{name}"] = getattr(thing, name)
    return found


CALLABLES = _callables()


def test_the_callables_of_the_reference_are_found() -> None:
    assert {"well_index", "Well.at_rate", "TensorGrid.centre", "Couplings.by_cell"} <= set(
        CALLABLES
    )
    assert "Couplings.in_si" not in CALLABLES


@pytest.mark.parametrize("name", CALLABLES)
def test_every_public_callable_has_an_example(name: str) -> None:
    text = CALLABLES[name].__doc__ or ""
    assert re.search(r"^ *Examples\n *-+\n", text, re.MULTILINE), name
    assert ">>> " in text


def test_published_values_are_met_on_the_page_of_checks(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.syspath_prepend(DOCS / "scripts")
    checks = _script("check_tables")
    tables = checks.compute()
    assert checks.missed(tables) == []
    assert "141.2" in checks.page(tables)
    row = tables["equivalent_radius"][0]
    assert checks.missed({"": [row._replace(value=row.value * 1.0001)]})


def _shell_commands() -> list[list[list[str]]]:
    """Return the command lines of the README, each split at "&&"."""
    lines = re.findall(r"^    (\S.*)$", _without_fences(ROOT / "README.md"), re.MULTILINE)
    return [[shlex.split(part) for part in line.split("&&")] for line in lines]


def _without_fences(page: Path) -> str:
    return re.sub(r"^```.*?^```$", "", page.read_text(), flags=re.DOTALL | re.MULTILINE)


def test_the_readme_has_two_commands() -> None:
    (venv, install, run), (install_tests, test) = _shell_commands()
    assert venv[1:] == ["-m", "venv", ".venv"]
    assert install == [".venv/bin/pip", "install", "."]
    assert run[:4] == [".venv/bin/python", "-m", "wellindex", "run"]
    assert install_tests == [".venv/bin/pip", "install", ".[test]"]
    assert test == [".venv/bin/python", "-m", "pytest"]


def test_what_the_readme_installs_exists() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]
    wanted = re.findall(r"pip install '\.\[(\w+)\]'", (ROOT / "README.md").read_text())
    assert wanted == ["test", "docs"]
    assert set(wanted) <= set(project["optional-dependencies"])


def test_the_command_in_the_readme_runs(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    command = _shell_commands()[0][-1]
    monkeypatch.chdir(tmp_path)
    case = PACKAGE.parent / command[-1]
    assert case == EXAMPLE
    arguments = [*command[3:-1], str(case)]
    assert main(arguments) == 0
    assert "surface rate" in capsys.readouterr().out
    assert list(tmp_path.rglob("*.csv"))


LAYOUT = re.compile(r"^    ([\w/]+\.py) {2,}\S.*$", re.MULTILINE)


def _imports(module: Path) -> set[str]:
    """Return the modules of the package that a module imports, as paths."""
    found = set()
    for node in ast.walk(ast.parse(module.read_text())):
        if isinstance(node, ast.ImportFrom) and (node.module or "").startswith("wellindex."):
            parts = str(node.module).split(".")[1:]
            names = [alias.name for alias in node.names]
            for candidate in ("/".join(parts), *("/".join([*parts, name]) for name in names)):
                if (PACKAGE / f"{candidate}.py").is_file():
                    found.add(f"{candidate}.py")
    return found


def test_a_file_imports_only_from_files_listed_above_it() -> None:
    listed = LAYOUT.findall((ROOT / "DEVELOPERS.md").read_text())
    files = {path.relative_to(PACKAGE).as_posix() for path in PACKAGE.rglob("*.py")}
    assert sorted(listed) == sorted(name for name in files if not name.endswith("__init__.py"))
    for number, name in enumerate(listed):
        assert _imports(PACKAGE / name) <= set(listed[:number]), name


def test_benchmarks_are_shown_where_there_are_any(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.syspath_prepend(DOCS / "scripts")
    page = _script("benchmark_page").page
    assert "tests.benchmarks.run --write" in page(tmp_path)
    text = "Here.\n\n| what | ratio |\n|---|---|\n| a call | 2.00 |\n"
    (tmp_path / "benchmarks.md").write_text(text)
    assert page(tmp_path).splitlines()[-2:] == ["   * - a call", "     - 2.00"]


TABLES: dict[str, list[Any]] = {
    "top": [],
    "units": ["units"],
    "grid": ["grid"],
    "rock": ["rock"],
    "fluid": ["fluid"],
    "wells": ["wells", 0],
    "survey": ["wells", 0, "survey"],
    "open": ["wells", 0, "open", 0],
}


@pytest.mark.parametrize("table", TABLES)
def test_the_case_page_lists_every_key(table: str) -> None:
    text = (DOCS / "howto" / "case_file.rst").read_text()
    section = text.split(f".. _case-{table}:")[1].split(".. _case-")[0]
    written = re.findall(r"^   \* - ``(\w+)``$", section, re.MULTILINE)
    document = tomllib.loads(EXAMPLE.read_text())
    place: Any = document
    for step in TABLES[table]:
        place = place[step]
    place["q9q9q9"] = "1"
    with pytest.raises(CaseError, match="q9q9q9: unknown key") as refused:
        read_case(document)
    known = re.search(r"q9q9q9: unknown key; known here: (.*)", str(refused.value))
    assert known is not None
    assert sorted(written) == sorted(known[1].split(", "))

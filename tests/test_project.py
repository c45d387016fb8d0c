"""The project's own files: one version, and gates that name only what exists."""

import importlib.metadata
import re
import tomllib
from pathlib import Path

import pytest

import wellindex

ROOT = Path(__file__).parents[1]
GATES = [ROOT / ".ci" / name for name in ("run", "thorough")]
#: Written by the run itself.
MADE = {"docs/_generated/benchmarks.md"}


def test_there_is_one_version() -> None:
    assert importlib.metadata.version("wellindex") == wellindex.__version__
    document = tomllib.loads((ROOT / "pyproject.toml").read_text())
    assert "version" not in document["project"]
    assert document["project"]["dynamic"] == ["version"]
    assert document["tool"]["hatch"]["version"] == {"path": "wellindex/__init__.py"}
    source = Path(wellindex.__file__).read_text()
    assert re.findall(r'^__version__ = "(\d+\.\d+\.\d+\w*)"$', source, re.MULTILINE) == [
        wellindex.__version__
    ]


def named(gate: Path) -> set[str]:
    """The files, folders and modules of the project that a script names, as paths."""
    lines = [line.split(" #")[0] for line in gate.read_text().splitlines()]
    text = "\n".join(line for line in lines if not re.match(r"\s*(#|step )", line))
    found = set()
    for command in re.findall(r"cp -r ([^\"\n]+)", text):
        found |= set(command.split())
    for words in re.findall(r"-m (tests[\w.]+)", text):
        found.add(words.replace(".", "/") + ".py")
    found |= set(re.findall(r"(?<![\w$/}\"*.])((?:\.ci|docs|tests|wellindex)(?:/[\w.]+)*)", text))
    found |= set(re.findall(r"(?<![\w/$])([A-Z]+\.md|pyproject\.toml)", text))
    return found - MADE


@pytest.mark.parametrize("gate", GATES, ids=lambda gate: gate.name)
def test_every_file_that_a_gate_names_exists(gate: Path) -> None:
    names = named(gate)
    assert names
    # In a folder without the package its name is the installed one's.
    package = Path(wellindex.__file__).parent
    lost = {
        name for name in names if not (package if name == "wellindex" else ROOT / name).exists()
    }
    assert lost == set()


def test_the_names_are_found() -> None:
    assert {"README.md", "docs", "wellindex"} <= named(GATES[0])
    wanted = {"tests", "docs", "README.md", "pyproject.toml", ".ci", ".ci/mutate"}
    assert wanted | {"tests/benchmarks/run.py"} <= named(GATES[1])


def test_the_mutation_run_names_what_exists() -> None:
    settings = tomllib.loads((ROOT / ".ci" / "mutation.toml").read_text())["cosmic-ray"]
    package = Path(wellindex.__file__).parent
    for module in settings["module-path"]:
        assert (package.parent / module).is_file(), module
    tests = re.findall(r"tests/\S+", settings["test-command"])
    assert tests
    for test in tests:
        assert (ROOT / test).is_file(), test

"""What an editor and a type checker see of the package: samples that must pass, and must fail."""

import re
import subprocess
import sys
from collections import Counter
from pathlib import Path

import pytest

SAMPLES = Path(__file__).parent / "typing_samples"
ERROR = re.compile(r"^[^:]*?(\w+\.py):(\d+): error: .*\[([a-z-]+)\]$", re.MULTILINE)
MARK = re.compile(r"# E: ([a-z -]+)$")


@pytest.fixture(scope="module")
def found() -> dict[str, Counter[tuple[int, str]]]:
    """The errors that mypy --strict finds, by file, line and code."""
    # Errors inside the package are another gate's business, with the newest stubs of numpy.
    options = ["--strict", "--config-file=", "--no-error-summary", "--hide-error-context"]
    options.append("--follow-imports=silent")
    run = subprocess.run(
        [sys.executable, "-m", "mypy", *options, "must_pass.py", "must_fail.py"],
        cwd=SAMPLES,
        capture_output=True,
        text=True,
        check=False,
    )
    assert run.returncode == 1, run.stdout + run.stderr
    errors: dict[str, Counter[tuple[int, str]]] = {"must_pass.py": Counter()}
    for name, line, code in ERROR.findall(run.stdout):
        errors.setdefault(name, Counter())[int(line), code] += 1
    assert sum(len(lines) for lines in errors.values()), run.stdout
    assert set(errors) == {"must_pass.py", "must_fail.py"}, run.stdout
    return errors


def expected(name: str) -> Counter[tuple[int, str]]:
    marks: Counter[tuple[int, str]] = Counter()
    for number, line in enumerate((SAMPLES / name).read_text(encoding="utf-8").splitlines(), 1):
        mark = MARK.search(line)
        if mark:
            marks.update((number, code) for code in mark[1].split())
    return marks


def test_correct_use_passes(found: dict[str, Counter[tuple[int, str]]]) -> None:
    assert found["must_pass.py"] == Counter()


def test_each_mistake_is_found_and_nothing_else(
    found: dict[str, Counter[tuple[int, str]]],
) -> None:
    assert len(expected("must_fail.py")) > 20
    assert found["must_fail.py"] == expected("must_fail.py")


def test_the_correct_samples_run() -> None:
    run = subprocess.run(
        [sys.executable, "-W", "error", SAMPLES / "must_pass.py"],
        capture_output=True,
        text=True,
        check=False,
    )
    assert run.returncode == 0, run.stderr

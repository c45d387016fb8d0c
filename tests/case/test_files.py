"""Results are written all together or not at all; what stands there is kept unless forced."""

import os
from pathlib import Path

import pytest

from tests.case.cases import BUNDLED, command

NAMES = ["couplings.csv", "results.json"]


def _contents(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir()}


@pytest.fixture
def earlier(tmp_path: Path) -> Path:
    """A folder with results of an earlier run in other units."""
    folder = tmp_path / "out"
    assert command("run", BUNDLED, "--out", folder, "--units", "si").code == 0
    return folder


def test_both_files_are_written_and_nothing_else(tmp_path: Path) -> None:
    folder = tmp_path / "new" / "deeper"
    answer = command("run", BUNDLED, "--out", folder)
    assert answer.code == 0
    assert sorted(path.name for path in folder.iterdir()) == NAMES
    for name in NAMES:
        assert f"written: {folder / name}" in answer.out


def test_the_default_folder_is_named_after_the_case(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    assert command("run", BUNDLED).code == 0
    folder = tmp_path / "results" / "five_layers"
    assert sorted(path.name for path in folder.iterdir()) == NAMES


def test_a_case_named_with_dots_alone_stays_inside_results(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    Path("...toml").write_bytes(BUNDLED.read_bytes())
    assert command("run", "...toml").code == 0
    assert sorted(path.name for path in (tmp_path / "results" / "case").iterdir()) == NAMES


def test_existing_files_are_kept(earlier: Path) -> None:
    before = _contents(earlier)
    answer = command("run", BUNDLED, "--out", earlier)
    assert answer.code == 2
    assert "exists and is kept: choose another folder with --out, or replace it with --force" in (
        answer.err
    )
    assert answer.out == ""
    assert _contents(earlier) == before


def test_existing_files_are_refused_before_the_case_is_computed(
    earlier: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def never(*_args: object) -> None:
        raise AssertionError

    monkeypatch.setattr("wellindex.__main__.run_case", never)
    assert command("run", BUNDLED, "--out", earlier).code == 2


def test_force_replaces_files_and_leaves_others_alone(earlier: Path) -> None:
    (earlier / "notes.txt").write_text("mine")
    before = _contents(earlier)
    assert command("run", BUNDLED, "--out", earlier, "--force").code == 0
    after = _contents(earlier)
    assert sorted(after) == sorted([*NAMES, "notes.txt"])
    assert after["notes.txt"] == before["notes.txt"]
    assert all(after[name] != before[name] for name in NAMES)


def test_the_same_case_gives_the_same_files(earlier: Path) -> None:
    before = _contents(earlier)
    assert command("run", BUNDLED, "--out", earlier, "--units", "si", "--force").code == 0
    assert _contents(earlier) == before


def _fail_at(monkeypatch: pytest.MonkeyPatch, name: str, call: int, error: BaseException) -> None:
    real, calls = getattr(os, name), []

    def failing(*args: object) -> None:
        calls.append(args)
        if len(calls) == call:
            raise error
        real(*args)

    monkeypatch.setattr(os, name, failing)


FAILURES = [("replace", call) for call in (1, 2)] + [("fsync", call) for call in (1, 2)]


@pytest.mark.parametrize(("name", "call"), FAILURES)
def test_a_failure_leaves_no_new_folder(
    name: str, call: int, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    _fail_at(monkeypatch, name, call, OSError(28, "No space left on device"))
    answer = command("run", BUNDLED, "--out", tmp_path / "new" / "deeper")
    assert answer.code == 2
    assert "No space left on device" in answer.err
    assert answer.out == ""
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize(("name", "call"), [*FAILURES, ("replace", 3), ("replace", 4)])
def test_a_failure_brings_replaced_files_back(
    name: str, call: int, earlier: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    before = _contents(earlier)
    _fail_at(monkeypatch, name, call, OSError(5, "Input/output error"))
    assert command("run", BUNDLED, "--out", earlier, "--force").code == 2
    assert _contents(earlier) == before


def test_an_interrupt_brings_everything_back(
    earlier: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    before = _contents(earlier)
    _fail_at(monkeypatch, "replace", 4, KeyboardInterrupt())
    answer = command("run", BUNDLED, "--out", earlier, "--force")
    assert answer == (130, "", "interrupted; nothing is written\n")
    assert _contents(earlier) == before


def test_a_file_in_place_of_the_folder(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("mine")
    for folder in (tmp_path / "out", tmp_path / "out" / "deeper"):
        answer = command("run", BUNDLED, "--out", folder, "--force")
        assert answer.code == 2
        assert "is a file, not a folder: choose another with --out" in answer.err
    assert (tmp_path / "out").read_text() == "mine"


def test_a_folder_in_place_of_a_file(tmp_path: Path) -> None:
    (tmp_path / "results.json").mkdir()
    answer = command("run", BUNDLED, "--out", tmp_path, "--force")
    assert answer.code == 2
    assert "results.json' is a folder, not a file" in answer.err
    assert [path.name for path in tmp_path.iterdir()] == ["results.json"]


def test_a_folder_that_must_not_be_written_to(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(os, "access", lambda *_args: False)
    answer = command("run", BUNDLED, "--out", tmp_path)
    assert answer.code == 2
    assert f"no permission to write in {str(tmp_path)!r}" in answer.err


def test_a_folder_that_cannot_be_made(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_args: object, **_named: object) -> None:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(Path, "mkdir", refuse)
    answer = command("run", BUNDLED, "--out", tmp_path / "out")
    assert answer.code == 2
    assert "Permission denied" in answer.err


@pytest.mark.parametrize("name", ["x" * 300, "a\0b"])
def test_a_folder_that_no_disk_can_name(name: str, tmp_path: Path) -> None:
    answer = command("run", BUNDLED, "--out", tmp_path / name)
    assert answer.code == 2
    assert "cannot write to" in answer.err
    assert list(tmp_path.iterdir()) == []


def test_a_link_that_leads_nowhere_is_no_folder(tmp_path: Path) -> None:
    (tmp_path / "out").symlink_to(tmp_path / "gone")
    answer = command("run", BUNDLED, "--out", tmp_path / "out")
    assert answer.code == 2
    assert "is a file, not a folder" in answer.err

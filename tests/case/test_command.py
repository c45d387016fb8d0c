"""The command in a process of its own: exit codes, streams, what it prints and loads."""

import io
import subprocess
import sys
from contextlib import redirect_stderr, redirect_stdout
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from tests.case.cases import BUNDLED, command, edited, written
from wellindex.__main__ import main
from wellindex.case.entries import Entry, Table


def _process(*arguments: object, **options: object) -> subprocess.CompletedProcess[bytes]:
    return subprocess.run(
        [sys.executable, "-m", "wellindex", *map(str, arguments)],
        capture_output=True,
        check=False,
        **options,  # type: ignore[call-overload]
    )


def test_the_bundled_case_runs(tmp_path: Path) -> None:
    done = _process("run", BUNDLED, cwd=tmp_path)
    assert done.returncode == 0
    assert done.stderr == b""
    out = done.stdout.decode("ascii")
    assert out.startswith("Deviated oil producer through five uneven layers\n")
    assert "[cP*rb/day/psi]" in out
    assert "no permeability across the well: index 0" in out
    assert "surface rate" in out
    assert "Screening calculations: not for well control" in out
    assert max(map(len, out.splitlines())) <= 130
    assert (tmp_path / "results" / "five_layers" / "couplings.csv").is_file()


def test_a_bad_case_ends_with_2_and_no_traceback(tmp_path: Path) -> None:
    case = written(tmp_path, edited(('"0.9 cP"', "0.9")))
    done = _process("run", case, cwd=tmp_path)
    assert done.returncode == 2
    assert done.stdout == b""
    assert b"fluid.viscosity: needs a viscosity; got 0.9; give a text with its unit" in done.stderr
    assert b"Traceback" not in done.stderr
    assert list(tmp_path.iterdir()) == [case]


def test_a_reader_that_leaves_is_no_error(tmp_path: Path) -> None:
    many = "\n".join(
        edited()[edited().index("[[wells]]") :].replace("Demo 1", f"Demo {n}") for n in range(2, 99)
    )
    case = written(tmp_path, edited(extra="\n" + many))
    process = subprocess.Popen(
        [sys.executable, "-m", "wellindex", "run", str(case), "--out", str(tmp_path / "out")],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    )
    assert process.stdout is not None
    assert process.stderr is not None
    with process.stdout, process.stderr:
        process.stdout.readline()
        process.stdout.close()
        errors = process.stderr.read()
    assert process.wait() == 1
    assert errors == b""
    assert (tmp_path / "out" / "results.json").is_file()


class _Unwritable(io.StringIO):
    """A stream on a full disk, or one whose reader has left; its descriptor is a file of ours."""

    def __init__(self, error: OSError, descriptor: int) -> None:
        super().__init__()
        self.error = error
        self.descriptor = descriptor

    def write(self, _text: str) -> int:
        raise self.error

    def fileno(self) -> int:
        return self.descriptor


@pytest.mark.parametrize(
    ("error", "words"),
    [
        (OSError(28, "No space left"), "error: cannot print the results: No space left\n"),
        (BrokenPipeError(32, "Broken pipe"), ""),
    ],
)
def test_output_that_cannot_be_printed(error: OSError, words: str, tmp_path: Path) -> None:
    errors = io.StringIO()
    with (
        (tmp_path / "stream").open("w") as file,
        redirect_stdout(_Unwritable(error, file.fileno())),
        redirect_stderr(errors),
    ):
        assert main(["check", str(BUNDLED)]) == 1
    assert errors.getvalue() == words


def test_a_process_without_output_runs(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sys, "stdout", None)
    assert main(["check", str(BUNDLED)]) == 0


def test_a_title_that_the_stream_cannot_show_is_escaped(tmp_path: Path) -> None:
    case = written(tmp_path, edited(("Oil producer", "Ölförderung")))
    done = _process("run", case, cwd=tmp_path, env={"PYTHONIOENCODING": "ascii"})
    assert done.returncode == 0
    assert done.stdout.startswith(b"\\xd6lf\\xf6rderung")


def test_help_and_version() -> None:
    help_text = _process("run", "--help").stdout.decode("ascii")
    for word in ("CASE.toml", "--out FOLDER", "--units", "--force"):
        assert word in help_text
    assert _process("--version").stdout.startswith(b"wellindex 0.")


def test_no_plotting_and_nothing_of_scipy_beyond_what_pint_loads(tmp_path: Path) -> None:
    code = (
        "import sys, numpy, pint\n"
        "names = lambda: {m for m in sys.modules if m.split('.')[0] in ('scipy', 'matplotlib')}\n"
        "before = names()\n"
        "from wellindex.__main__ import main\n"
        f"assert main(['run', {str(BUNDLED)!r}, '--out', {str(tmp_path / 'out')!r}]) == 0\n"
        "assert names() == before, names() - before\n"
        "assert 'matplotlib' not in sys.modules\n"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, check=False)
    assert done.returncode == 0, done.stderr


#: What stands in every_key.toml as comments, in place of other keys.
IN_PLACE = (
    ("dx = ", "[rock]", 'corners = { file = "grid.npz", unit = "m" }\n\n'),
    ("kx = ", "net_to_gross", 'permeability = { file = "rock.npz", unit = "D" }\n'),
    (
        "measured_depth = [",
        "# In place",
        'stations = [["82 m", "20 degree", "15 degree"], ["102 m", "28 degree", "18 degree"]]\n',
    ),
)


def _in_other_words(folder: Path) -> list[Path]:
    """The case with every key, with the keys in place of others; and the files it names."""
    text = BUNDLED.with_name("every_key.toml").read_text(encoding="utf-8")
    for start, stop, instead in IN_PLACE:
        before, _start, rest = text.partition(f"\n{start}")
        text = f"{before}\n{instead}{stop}{rest.partition(stop)[2]}"
    corners = np.zeros((16, 15, 3, 8, 3))
    for n in range(8):
        step = np.array([n & 1, n >> 1 & 1, n >> 2 & 1])
        corners[..., n, :] = (np.moveaxis(np.indices((16, 15, 3)), 0, -1) + step) * [18.0, 20, 6]
    np.savez(folder / "grid.npz", corners=corners + np.array([0.0, 0.0, 85.0]))
    np.savez(folder / "rock.npz", kx=np.ones((16, 15, 3)), kz=np.ones((16, 15, 3)))
    (folder / "survey.csv").write_text(
        "measured_depth [m],inclination [degree],azimuth [degree]\n82,20,15\n102,28,18\n"
    )
    (stations,) = (line for line in text.splitlines() if line.startswith("stations = "))
    return [
        written(folder, text),
        written(folder, text.replace(stations, 'file = "survey.csv"'), "other.toml"),
    ]


def test_the_case_with_every_key_has_every_key(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    asked: dict[tuple[str, ...], set[str]] = {}
    make = Table.__init__

    def recording(self: Table, entry: Entry, values: Any, required: Any, optional: Any) -> None:
        asked.setdefault((*required, *optional), set()).update(values)
        make(self, entry, values, required, optional)

    monkeypatch.setattr(Table, "__init__", recording)
    case = BUNDLED.with_name("every_key.toml")
    answer = command("check", case)
    assert answer == (
        0,
        f"{case} is valid: 3 wells, 8 couplings, grid of 16 x 15 x 3 blocks\n",
        "",
    )
    for other in _in_other_words(tmp_path):
        answer = command("check", other)
        assert answer.code == 0, answer.err
    assert len(asked) == 12
    for known, given in asked.items():
        assert given == set(known)


def test_check_says_that_a_case_is_valid_and_writes_nothing(tmp_path: Path) -> None:
    case = written(tmp_path, edited())
    answer = command("check", case)
    assert answer == (
        0,
        f"{case} is valid: 1 well, 4 couplings, grid of 21 x 21 x 5 blocks\n",
        "",
    )
    assert list(tmp_path.iterdir()) == [case]


def test_a_byte_order_mark_and_windows_line_ends_are_read(tmp_path: Path) -> None:
    case = tmp_path / "case.toml"
    case.write_bytes(edited().replace("\n", "\r\n").encode("utf-8-sig"))
    assert command("check", case).code == 0

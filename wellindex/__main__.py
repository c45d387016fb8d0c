"""The command: ``python -m wellindex run CASE.toml``."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TextIO

from wellindex import __version__
from wellindex.case import figure, files, report
from wellindex.case.run import run_case
from wellindex.errors import CaseError
from wellindex.units.systems import SYSTEMS

_DEFAULT_FOLDER = "results"


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="python -m wellindex",
        description="Well indices, rates and bottom-hole pressures of the wells in a case file.",
        epilog=report.CAUTION,
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"wellindex {__version__}")
    commands = parser.add_subparsers(dest="command", required=True, metavar="run | check")
    run = commands.add_parser(
        "run",
        help="compute a case, print the results and write them to files",
        description="Compute a case: print its couplings and results, and write "
        f"{report.CSV_NAME} and {report.JSON_NAME}; with --figure also drawings.",
        allow_abbrev=False,
    )
    run.add_argument("case", metavar="CASE.toml", type=Path, help="the case file")
    run.add_argument(
        "--out",
        metavar="FOLDER",
        type=Path,
        help="where the files go; default: results/CASE in the current folder",
    )
    run.add_argument(
        "--units",
        choices=SYSTEMS,
        help="unit system of the results; default: the case's, or metric where it names none",
    )
    run.add_argument(
        "--figure",
        action="store_true",
        help="also draw each well's path through the grid, in section and in plan, as SVG and PNG "
        "(needs matplotlib: the extra 'report')",
    )
    run.add_argument("--force", action="store_true", help="replace result files that exist")
    check = commands.add_parser(
        "check",
        help="say whether a case can be computed; write nothing",
        description="Say whether a case can be computed, and if not, all that is wrong with it. "
        "Nothing is written.",
        allow_abbrev=False,
    )
    check.add_argument("case", metavar="CASE.toml", type=Path, help="the case file")
    return parser


def _run(given: argparse.Namespace) -> str:
    folder = given.out or Path(_DEFAULT_FOLDER, given.case.stem.strip(".") or "case")
    file = files.read_file(given.case)
    files.check_folder(folder, report.NAMES, force=given.force)
    if given.figure:
        figure.require()
    outcome = run_case(file, given.units)
    text = report.as_text(outcome)
    contents: dict[str, str | bytes] = {**report.as_files(outcome, __version__)}
    if given.figure:
        contents |= figure.as_files(outcome)
    written = files.write_together(folder, contents, force=given.force)
    return text + "\n" + "\n".join(f"written: {path}" for path in written)


def _check(given: argparse.Namespace) -> str:
    outcome = run_case(files.read_file(given.case))
    wells = len(outcome.wells)
    couplings = sum(len(well.couplings) for well in outcome.wells)
    blocks = " x ".join(str(count) for count in outcome.case.grid.shape)
    summary = (
        f"{given.case} is valid: {wells} well{'s' * (wells != 1)}, "
        f"{couplings} coupling{'s' * (couplings != 1)}, grid of {blocks} blocks"
    )
    cautions = [line for well in outcome.wells for line in report.caution_lines(well)]
    return "\n".join([summary, *cautions])


def main(argv: Sequence[str] | None = None) -> int:
    """Run the command.

    Parameters
    ----------
    argv : list of str, optional
        Arguments; default those of the process.

    Returns
    -------
    int
        0; 2 where the case, the folder or the arguments are wrong (then nothing is written); 1
        where the output cannot be printed; 130 where it was interrupted.
    """
    given = _parser().parse_args(argv)
    try:
        text = _run(given) if given.command == "run" else _check(given)
    except CaseError as error:
        _say(f"error: {given.case}: {error}", sys.stderr)
        return 2
    except KeyboardInterrupt:
        _say("interrupted; nothing is written", sys.stderr)
        return 130
    try:
        _say(text, sys.stdout)
    except OSError as error:
        # What is still buffered cannot be written: without this, Python complains when it exits.
        with open(os.devnull, "wb") as nowhere:
            os.dup2(nowhere.fileno(), sys.stdout.fileno())
        if not isinstance(error, BrokenPipeError):
            _say(f"error: cannot print the results: {error.strerror}", sys.stderr)
        return 1
    return 0


def _say(text: str, stream: TextIO | None) -> None:
    """Print, with escapes for what the stream cannot show."""
    if stream is None:
        return
    encoding = stream.encoding or "ascii"
    print(text.encode(encoding, "backslashreplace").decode(encoding), file=stream, flush=True)


if __name__ == "__main__":
    sys.exit(main())

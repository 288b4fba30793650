"""The command line: arguments in, calls of ``build``, text and exit status out."""

from __future__ import annotations

import argparse
import json
import os
import shlex
import signal
import sys
from collections.abc import Callable, Sequence
from pathlib import Path
from types import FrameType
from typing import TextIO

from calcpack import __version__
from calcpack.errors import CalcpackError, Problem, ProjectError

DONE, NOT_MET, REFUSED = 0, 1, 2
STOPPED, NO_READER = 130, 141  # what a shell reports of a program that a signal ended


LONGEST = 400  # characters of one message: an engine may quote a whole drawing


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command. Returns 0 done, 1 a criterion is not met, 2 bad input or refused, 130 stopped by the user."""
    for stream in (sys.stdout, sys.stderr):  # a terminal may lack characters that results have
        stream.reconfigure(errors="backslashreplace")
    parser = _parser()
    options = parser.parse_args(arguments)
    if options.command is None:
        parser.print_help(sys.stderr)
        return REFUSED
    options.interrupt = Interrupt()
    with options.interrupt:
        try:
            status = options.run(options)
            sys.stdout.flush()
            return status
        except KeyboardInterrupt:
            return _stopped()
        except BrokenPipeError:  # the reader of our output went away
            _drop_output()
            return NO_READER
        except CalcpackError as error:
            if options.interrupt.asked:
                return _stopped()
            _report_problems(error, options)
        except OSError as error:
            if error.filename is None:  # our own output: a full disk
                _drop_output()
            print(f"calcpack: {error.filename or 'output'}: {error.strerror}", file=sys.stderr)
        return REFUSED


class Interrupt:
    """Ctrl-C that is not lost: libraries take a KeyboardInterrupt for a drawing that cannot be read, and go on."""

    def __init__(self) -> None:
        self.asked = False
        self._before = signal.getsignal(signal.SIGINT)

    def __enter__(self) -> None:
        if self._before is signal.default_int_handler:
            signal.signal(signal.SIGINT, self._handle)

    def __exit__(self, *_: object) -> None:
        if self._before is signal.default_int_handler:
            signal.signal(signal.SIGINT, self._before)

    def _handle(self, number: int, frame: FrameType | None) -> None:
        self.asked = True
        raise KeyboardInterrupt

    def honour(self) -> None:
        """Raise KeyboardInterrupt where one was lost."""
        if self.asked:
            raise KeyboardInterrupt


def _stopped() -> int:
    print("calcpack: stopped", file=sys.stderr)
    return STOPPED


def _drop_output() -> None:
    """What is left in the buffer of the output goes nowhere, so that the interpreter does not try once more."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="calcpack",
        description="Turns a project folder of YAML inputs (levels, lines, fittings, pumps, cases) into solved "
        "hydraulics and one traceable calculation package.",
        epilog="Exit status: 0 done; 1 done, but a criterion is not met; 2 bad input or refused.",
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"calcpack {__version__}")
    commands = parser.add_subparsers(dest="command", metavar="COMMAND")

    new = _command(commands, "new", _new, "write a small, complete, commented project that builds")
    new.add_argument("folder", type=Path, metavar="FOLDER", help="a new or empty folder")

    check = _command(commands, "check", _check, "read, validate and solve; print results, criteria and open items")
    check.add_argument("folder", type=Path, metavar="FOLDER", help="a project folder")
    check.add_argument("--json", action="store_true", help="print results.json, or the problems, as JSON")

    draft = _command(commands, "draft", _draft, "write the whole package as PDF, marked DRAFT, into FOLDER/build/")
    draft.add_argument("folder", type=Path, metavar="FOLDER", help="a project folder")
    draft.add_argument("--json", action="store_true", help="print paths and verdict counts, or the problems, as JSON")

    schema = _command(commands, "schema", _schema, "print the JSON Schema of the input files")
    schema.add_argument("--results", action="store_true", help="the schema of results.json instead")
    return parser


def _command(commands, name: str, run: Callable[[argparse.Namespace], int], what: str) -> argparse.ArgumentParser:
    command = commands.add_parser(name, help=what, description=f"{what[0].upper()}{what[1:]}.", allow_abbrev=False)
    command.set_defaults(run=run)
    return command


def _new(options: argparse.Namespace) -> int:
    from calcpack.project.starter import write_starter

    for path in write_starter(options.folder):
        print(path)
    print(f"next: calcpack check {shlex.quote(str(options.folder))}")
    return DONE


def _check(options: argparse.Namespace) -> int:
    from calcpack import build, terminal

    outcome = build.check(options.folder, _progress(options))
    if options.json:
        _print_json(build.results_text(outcome))
    else:
        print(terminal.report(outcome.job, color=_color(sys.stdout)))
    return NOT_MET if outcome.not_met else DONE


def _draft(options: argparse.Namespace) -> int:
    from calcpack import build, terminal
    from calcpack.ledger import entry

    outcome = build.draft(options.folder, _progress(options))
    if options.json:
        _print_json(json.dumps({
            "pdf": str(outcome.pdf), "results": str(outcome.results), "sheets": outcome.pages,
            "verdicts": outcome.verdicts, "fingerprint": outcome.fingerprint,
        }, ensure_ascii=False))
    else:
        print(f"{outcome.pdf}  ({outcome.pages} sheets)")
        print(outcome.results)
        print("; ".join(f"{word}: {count}" for word, count in outcome.verdicts.items()))
        for line in terminal.criteria(outcome.job, entry.NOT_MET):
            print(f"{entry.NOT_MET}: {line}")
    return NOT_MET if outcome.not_met else DONE


def _schema(options: argparse.Namespace) -> int:
    if options.results:
        from calcpack.results import RESULTS_SCHEMA

        schema = RESULTS_SCHEMA
    else:
        from calcpack.project import json_schema

        schema = json_schema()
    _print_json(json.dumps(schema, indent=2, ensure_ascii=False))
    return DONE


def _print_json(text: str) -> None:
    """JSON is UTF-8 whatever the terminal is."""
    sys.stdout.reconfigure(encoding="utf-8")
    print(text.rstrip("\n"))


def _progress(options: argparse.Namespace) -> Callable[[str], None]:
    """Announces each step on a terminal, silent elsewhere; between steps the user may stop the program."""
    show = sys.stderr.isatty()

    def announce(step: str) -> None:
        options.interrupt.honour()
        if show:
            print(f"  {step}", file=sys.stderr, flush=True)

    return announce


def _color(stream: TextIO) -> bool:
    return stream.isatty() and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb"


def _report_problems(error: CalcpackError, options: argparse.Namespace) -> None:
    """Every problem as a line, or all as JSON; a problem of no file has an empty one."""
    of_inputs = isinstance(error, ProjectError)
    problems = error.problems if of_inputs else [Problem("", 0, "", one[:LONGEST]) for one in str(error).splitlines()]
    if getattr(options, "json", False):
        fields = ("file", "line", "where", "text", "hint")
        _print_json(json.dumps({"problems": [{name: getattr(one, name) for name in fields} for one in problems]}))
        return
    for problem in problems:
        print(_printable(str(problem)) if of_inputs else f"calcpack: {problem.text}", file=sys.stderr)
    if of_inputs:
        count = len(problems)
        print(f"calcpack: {count} problem{'' if count == 1 else 's'}; nothing was written", file=sys.stderr)


def _printable(text: str) -> str:
    """Control characters of the inputs do not reach the terminal."""
    return "".join(char if char.isprintable() or char.isspace() else "?" for char in text)


if __name__ == "__main__":
    sys.exit(main())

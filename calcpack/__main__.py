"""The command line: arguments in, calls of ``build``, text and exit status out."""

from __future__ import annotations

import argparse
import json
import os
import sys
from collections.abc import Callable, Sequence
from pathlib import Path

from calcpack import __version__
from calcpack.errors import CalcpackError, ProjectError

DONE, NOT_MET, REFUSED = 0, 1, 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command. Returns 0 done, 1 a criterion is not met, 2 bad input or refused."""
    options = _parser().parse_args(arguments)
    try:
        return options.run(options)
    except ProjectError as error:
        _report_problems(error, options)
        return REFUSED
    except CalcpackError as error:
        print(f"calcpack: {error}", file=sys.stderr)
        return REFUSED
    except BrokenPipeError:  # the reader of our output went away
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return REFUSED


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="calcpack",
        description="Turns a project folder of YAML inputs (levels, lines, fittings, pumps, cases) into solved "
        "hydraulics and one traceable calculation package.",
        epilog="Exit status: 0 done; 1 done, but a criterion is not met; 2 bad input or refused.",
    )
    parser.add_argument("--version", action="version", version=f"calcpack {__version__}")
    commands = parser.add_subparsers(dest="command", required=True, metavar="COMMAND")

    new = commands.add_parser("new", help="write a small, complete, commented project that builds")
    new.add_argument("folder", type=Path, metavar="FOLDER")
    new.set_defaults(run=_new)

    check = commands.add_parser("check", help="read, validate and solve; print results, criteria and open items")
    check.add_argument("folder", type=Path, metavar="FOLDER")
    check.add_argument("--json", action="store_true", help="print the results as JSON")
    check.set_defaults(run=_check)

    draft = commands.add_parser("draft", help="write the whole package as PDF, marked DRAFT, into FOLDER/build/")
    draft.add_argument("folder", type=Path, metavar="FOLDER")
    draft.add_argument("--json", action="store_true", help="print paths and verdict counts as JSON")
    draft.set_defaults(run=_draft)

    schema = commands.add_parser("schema", help="print the JSON Schema of the input files")
    schema.add_argument("--results", action="store_true", help="the schema of results.json instead")
    schema.set_defaults(run=_schema)
    return parser


def _new(options: argparse.Namespace) -> int:
    from calcpack.project.starter import write_starter

    for path in write_starter(options.folder):
        print(path)
    print(f"next: calcpack draft {options.folder}")
    return DONE


def _check(options: argparse.Namespace) -> int:
    from calcpack import build, terminal

    outcome = build.check(options.folder, _progress())
    if options.json:
        sys.stdout.write(build.results_text(outcome))
    else:
        print(terminal.report(outcome.job, color=_color(sys.stdout)))
    return NOT_MET if outcome.not_met else DONE


def _draft(options: argparse.Namespace) -> int:
    from calcpack import build

    outcome = build.draft(options.folder, _progress())
    if options.json:
        print(json.dumps({"pdf": str(outcome.pdf), "results": str(outcome.results), "sheets": outcome.pages,
                          "verdicts": outcome.verdicts, "fingerprint": outcome.fingerprint}))
    else:
        print(f"{outcome.pdf}  ({outcome.pages} sheets)")
        print(outcome.results)
        print(", ".join(f"{word}: {count}" for word, count in outcome.verdicts.items()))
    return NOT_MET if outcome.not_met else DONE


def _schema(options: argparse.Namespace) -> int:
    from calcpack.project import json_schema
    from calcpack.results import RESULTS_SCHEMA

    print(json.dumps(RESULTS_SCHEMA if options.results else json_schema(), indent=2, ensure_ascii=False))
    return DONE


def _progress() -> Callable[[str], None]:
    """Announces each step on a terminal; silent elsewhere."""
    if not sys.stderr.isatty():
        return lambda step: None
    return lambda step: print(f"  {step}", file=sys.stderr, flush=True)


def _color(stream) -> bool:
    return stream.isatty() and not os.environ.get("NO_COLOR")


def _report_problems(error: ProjectError, options: argparse.Namespace) -> None:
    if getattr(options, "json", False):
        fields = ("file", "line", "where", "text", "hint")
        print(json.dumps({"problems": [{name: getattr(one, name) for name in fields} for one in error.problems]}))
        return
    for problem in error.problems:
        print(problem, file=sys.stderr)
    count = len(error.problems)
    print(f"calcpack: {count} problem{'' if count == 1 else 's'}; nothing was written", file=sys.stderr)


if __name__ == "__main__":
    sys.exit(main())

"""Reading of a project folder: YAML files -> the frozen model, or every problem in them.

``read``     files -> plain data that knows its places
``schema``   plain data -> declared blocks of keys
``resolve``  blocks -> :mod:`calcpack.project.model`
``starter``  the files of a new project
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

from calcpack.errors import ProjectError
from calcpack.project.model import Project

__all__ = ["json_schema", "load"]


def load(folder: Path | str) -> Project:
    """Read a project folder. Raises ProjectError with every problem found, in file and line order."""
    # Imported here: whoever only reads the model does not wait for the schema library.
    from calcpack.project.problems import Problems
    from calcpack.project.read import read_folder
    from calcpack.project.resolve import resolve
    from calcpack.project.resolve.draft import Draft
    from calcpack.project.schema import units_of, validate_all

    path = Path(folder)
    read = read_folder(path)
    problems = Problems()
    problems.extend(read.problems)
    draft = Draft(read.data, validate_all(read.data, problems), units_of(read.data), problems)
    project = resolve(draft, path.resolve().name, read.files)
    if project is None:
        raise ProjectError(problems)
    return project


def json_schema() -> dict[str, Any]:
    """JSON Schema (2020-12) of the input files: a definition for each file and for every block in them."""
    from calcpack.project.schema.export import json_schema as export

    return export()

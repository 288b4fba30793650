"""The files of a new project: small, complete, commented, invented."""

from __future__ import annotations

from pathlib import Path

from calcpack.errors import Problem, ProjectError
from calcpack.project.read import STEMS

_STARTER = Path(__file__).parent / "starter"


def write_starter(folder: Path | str) -> list[Path]:
    """Write the starter files into a new or empty folder and return their paths.

    Raises ProjectError when something stands in the folder already, or when it cannot be written.
    """
    target = Path(folder)
    written: list[Path] = []
    try:
        target.mkdir(parents=True, exist_ok=True)
        if any(target.iterdir()):
            raise _refusal(target, "is not empty", "name a new folder")
        for stem in STEMS:
            path = target / f"{stem}.yaml"
            written.append(path)
            path.write_bytes((_STARTER / path.name).read_bytes())
    except (FileExistsError, NotADirectoryError) as error:
        raise _refusal(target, "is a file, or lies below one", "name a new folder") from error
    except OSError as error:
        for path in written:  # four files or none
            path.unlink(missing_ok=True)
        raise _refusal(target, f"cannot be written: {error.strerror}") from error
    return written


def _refusal(folder: Path, text: str, hint: str = "") -> ProjectError:
    return ProjectError([Problem(str(folder), 0, "", text, hint)])

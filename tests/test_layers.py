"""Data flows one way: a module imports from rows above its own and from its own folder, and nothing else."""

import ast
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parent.parent / "calcpack"

ROWS = (
    {"errors", "quantities", "digits", "values"},
    {"units"},
    {"formulas", "catalog"},
    {"project", "ledger"},
    {"hydraulics"},
    {"sheets"},
    {"drawings", "report"},
    {"results", "terminal", "package", "pictures"},
    {"build"},
    {"__main__"},
)
ROW = {part: number for number, row in enumerate(ROWS) for part in row}

# Narrower than the rows: the part on the left never imports those on the right.
NEVER = {
    "formulas": {"units"},
    "hydraulics": {"catalog", "units", "ledger"},
    "ledger": {"units", "project", "catalog"},
    "project": {"ledger", "formulas"},
    "sheets": {"units"},
    "drawings": {"hydraulics", "catalog", "sheets"},
    "report": {"hydraulics"},
}

# Libraries by part. Standard library modules are free everywhere.
LIBRARIES = {
    "units": {"pint"},
    "formulas": {"numpy"},
    "catalog": {"yaml", "iapws"},
    "project": {"yaml", "pydantic", "annotated_types", "pydantic_core", "typing_extensions"},
    "ledger": {"numpy"},
    "hydraulics": {"numpy", "scipy", "fluids"},
    "drawings": {"matplotlib", "fontTools", "numpy"},
    "report": {"jinja2", "markupsafe", "weasyprint", "fontTools"},
}
STANDARD = {*__import__("sys").stdlib_module_names}

MODULES = sorted(PACKAGE.rglob("*.py"))


def part_of(path: Path) -> str:
    return path.relative_to(PACKAGE).parts[0].removesuffix(".py")


def imports(path: Path) -> list[tuple[str, int]]:
    """Dotted names that a module imports anywhere, inside functions too."""
    found = []
    for node in ast.walk(ast.parse(path.read_text())):
        if isinstance(node, ast.Import):
            found += [(alias.name, node.lineno) for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}:{node.lineno}: relative import"
            if node.module == "calcpack":
                found += [(f"calcpack.{alias.name}", node.lineno) for alias in node.names]
            else:
                found.append((node.module, node.lineno))
    return found


@pytest.mark.parametrize("path", MODULES, ids=lambda path: str(path.relative_to(PACKAGE)))
def test_imports_follow_the_rows(path):
    part = part_of(path)
    if part == "__init__":
        assert imports(path) == []
        return
    for name, line in imports(path):
        where = f"{path.name}:{line}: {name}"
        top, _, rest = name.partition(".")
        if top != "calcpack":
            assert top in STANDARD or top in LIBRARIES.get(part, set()), where
            continue
        target = rest.partition(".")[0]
        if target in ("", "__version__"):
            continue
        assert target in ROW, where
        assert target == part or ROW[target] < ROW[part], f"{where}: row {ROW[part]} must not see row {ROW[target]}"
        assert target not in NEVER.get(part, set()), where


def test_every_part_has_a_row():
    assert {part_of(path) for path in MODULES} - {"__init__"} == set(ROW)

"""Absolute roughness of pipe, new and aged."""

from __future__ import annotations

from calcpack.catalog.errors import CatalogError
from calcpack.catalog.names import plain, unknown
from calcpack.catalog.table import CatalogValue, load_table

_TABLE = "roughness"


def roughness(material: str, condition: str) -> CatalogValue:
    """Absolute roughness in m of a ``material`` in a ``condition`` ("new" or "aged").

    Raises :class:`CatalogError` when the table has no such material, or not in that condition.
    """
    table = load_table(_TABLE)
    rows = [row for row in table.rows if row["material"] == plain(material)]
    if not rows:
        raise unknown("material", material, materials())
    for row in rows:
        if row["condition"] == plain(condition):
            return table.value(row, "roughness", "roughness", f"{row['title']}, {row['condition']}")
    known = ", ".join(row["condition"] for row in rows)
    raise CatalogError(
        f'no "{condition}" roughness for {rows[0]["title"]}', f"known: {known}; or give a value with its source"
    )


def materials() -> list[str]:
    """Every material of the table, in its order."""
    return list(dict.fromkeys(row["material"] for row in load_table(_TABLE).rows))

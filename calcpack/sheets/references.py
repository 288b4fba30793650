"""References: the bibliography behind every citation, the formulas used, and the documents that inputs cite."""

from __future__ import annotations

from collections import Counter

from calcpack.catalog.sources import Source, source
from calcpack.digits import digits_written, format_number
from calcpack.formulas import FORMULAS, Formula
from calcpack.formulas.expression import Symbol
from calcpack.formulas.formula import LIST, Range
from calcpack.quantities import KINDS, UNITS, Unit
from calcpack.sheets.content import Block, Column, Prose, Ref, Row, Section, Sheet, Table
from calcpack.sheets.job import Job
from calcpack.sheets.registers import TO_CONFIRM, count
from calcpack.values import CONFIRMED, UNCONFIRMED

KEY = "references"  # citations print the number in the second cell of a row for the key in its first


def fill(job: Job) -> Sheet:
    """Lay out sources, formulas and documents of the complete ledger; books how often each formula is used."""
    sections = (
        Section("reference-sources", "Sources", (_sources(job),)),
        Section("reference-formulas", "Formulas used", (_formulas(job),)),
        Section("reference-documents", "Documents that inputs cite", _documents(job)),
    )
    return Sheet(KEY, "References", sections)


def cited(job: Job) -> dict[str, str]:
    """Source key -> its number R1, R2, ... in the order in which the ledger first cites it."""
    keys = dict.fromkeys(entry.citation.key for entry in job.ledger if entry.citation.key)
    return {key: f"R{number}" for number, key in enumerate(keys, start=1)}


def _sources(job: Job) -> Table:
    columns = (Column("Key", width=1.4), Column("No.", width=0.5), Column("Title", width=3.6),
               Column("Published by, edition, year", width=2.6), Column("Standing", width=2.6))
    rows = tuple(
        Row((key, number, one.title, ", ".join(_edition(one)), _standing(one)))
        for key, number in cited(job).items() for one in (source(key),)
    )
    note = ("Primary: the text itself was read. Secondary: read as quoted by a third party. Library: read in an "
            "open-source library that cites it. Memory: not read.")
    return Table("Sources cited in this package", columns, rows, note)


def _edition(one: Source) -> list[str]:
    return [part for part in (one.body, one.edition, str(one.year or "")) if part]


def _standing(one: Source) -> str:
    parts = [one.kind, "text seen" if one.seen else (TO_CONFIRM if one.needs_confirmation else ""), one.note]
    return "; ".join(part for part in parts if part)


def _formulas(job: Job) -> Table:
    columns = (Column("Formula", width=3.5), Column("Title", width=2.6), Column("Source", width=2.4),
               Column("Range of validity", width=2.0), Column("Used", "", "count", width=0.7),
               Column("First use", width=1.2))
    used: dict[str, list[Formula]] = {}  # by text: a margin is declared for each kind of quantity with the same text
    uses, first = Counter(), {}
    for entry in job.ledger:
        if entry.formula:
            formula = FORMULAS[entry.formula]
            text = formula.equation.text
            used.setdefault(text, []).append(formula)
            uses[text] += 1
            first.setdefault(text, entry.id)
    numbers = cited(job)
    rows = []
    for text, made in used.items():
        formula = made[0]
        same = len({one.id for one in made}) > 1
        name = formula.id.rpartition(".")[0] if same else formula.id
        times = count(job, f"count/{name}", uses[text], f"{formula.title}: times used")
        place = ", ".join(part for part in (numbers.get(formula.source, formula.source), formula.locator) if part)
        ranges = "; ".join(range_words(formula, limits, job.ledger.system) for limits in formula.valid)
        rows.append(Row((name, formula.title, place, "by kind of quantity" if same else ranges or "no limit declared",
                         Ref(times.id), Ref(first[text], "where"))))
    return Table("Formulas used and how often", columns, tuple(rows))


def range_words(formula: Formula, limits: Range, system: str) -> str:
    """A range of validity in plain words: ``Re from 4000``, ``t_d up to 86400 s``."""
    declared = printed = UNITS[""]
    if isinstance(limits.tree, Symbol):
        name = limits.tree.name
        kind = KINDS[formula.kinds[name].removesuffix(LIST)]
        declared = UNITS[formula.units[name]] if formula.is_empirical else UNITS[kind.si]
        printed = declared if formula.is_empirical else kind.coherent_unit(system)
    bounds = (("from", limits.low), ("up to", limits.high))
    words = [f"{word} {_bound(bound, declared, printed)}" for word, bound in bounds if bound is not None]
    return " ".join([limits.expression, *words])


def _bound(bound: float, declared: Unit, printed: Unit) -> str:
    shown = printed.from_si(declared.to_si(bound))
    return f"{format_number(shown, digits_written(f'{shown:.4g}'))} {printed.text}".rstrip()


def _documents(job: Job) -> tuple[Block, ...]:
    """Documents of the project with the number of inputs that cite each, and the other sources that inputs name."""
    sources = [value.source for value in job.project.values if value.status in (CONFIRMED, UNCONFIRMED)]
    columns = (Column("Document", width=2.0), Column("Title", width=3.8), Column("Revision", width=1.0),
               Column("Date", width=1.2), Column("Cited", "", "count", width=0.8))
    rows, named = [], set()
    for one in job.project.documents:
        citing = [text for text in sources if one.id in text]
        named |= set(citing)
        number = count(job, f"count/document/{one.id}", len(citing), f"{one.id}: inputs that cite it")
        cells = (one.id, one.title, one.revision, one.date, Ref(number.id))
        rows.append(Row(cells, mark="" if citing else "not cited"))
    blocks: list[Block] = []
    if rows:
        blocks.append(Table("Documents of the project", columns, tuple(rows)))
    others = Counter(text for text in sources if text and text not in named)
    if others:
        columns = (Column("Source as written", width=4.0), Column("Cited", "", "count", width=0.8))
        numbers = {text: count(job, f"count/source/{text}", number, f"{text}: inputs that name it")
                   for text, number in others.items()}
        blocks.append(Table("Other sources that inputs name", columns,
                            tuple(Row((text, Ref(entry.id))) for text, entry in numbers.items())))
    without = count(job, "count/inputs-without-source", sources.count(""), "Number of inputs that name no source")
    blocks.append(Prose(f"Inputs that name no source: {{{without.id}}}."))
    return tuple(blocks)

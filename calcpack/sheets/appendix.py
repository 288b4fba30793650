"""Appendix: the input files as they were read, the identity of the program, and the fingerprint of both."""

from __future__ import annotations

import hashlib

from calcpack.sheets.content import Block, Facts, Listing, Prose, Section, Sheet
from calcpack.sheets.job import Job


def fill(job: Job) -> Sheet:
    """List every input file with its SHA-256, what computed the package, and the fingerprint."""
    files = job.project.files
    listings = tuple(Listing(f"{file.name}, SHA-256 {file.sha256}", file.text) for file in files)
    identity: list[Block] = [
        Prose("The same input files and the same program give the same numbers and the same file."),
        Facts((*((name, text) for name, text in job.program.items()), ("fingerprint", fingerprint(job)))),
    ]
    return Sheet("appendix", "Inputs as read", (
        Section("appendix-program", "Program and fingerprint", tuple(identity)),
        Section("appendix-inputs", "Input files as read", listings or (Prose("No file was read.", "note"),)),
    ))


def fingerprint(job: Job) -> str:
    """SHA-256 (hexadecimal) over name and hash of every input file and over the program identity, in their order."""
    lines = [f"{file.name}\t{file.sha256}" for file in job.project.files]
    lines += [f"{name}\t{text}" for name, text in job.program.items()]
    return hashlib.sha256("\n".join(lines).encode()).hexdigest()

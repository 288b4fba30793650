"""The ledger and its hand-check."""

from calcpack.ledger.book import Ledger, formula_of
from calcpack.ledger.entry import Citation, Entry
from calcpack.ledger.handcheck import HandCheck, settle_digits

__all__ = ["Citation", "Entry", "HandCheck", "Ledger", "formula_of", "settle_digits"]

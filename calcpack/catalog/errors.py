"""What can go wrong in a look-up."""

from __future__ import annotations


class CatalogError(ValueError):
    """A look-up has no answer. ``message`` says what is wrong, ``hint`` what exists instead."""

    def __init__(self, message: str, hint: str = "") -> None:
        self.message = message
        self.hint = hint
        super().__init__(f"{message}; {hint}" if hint else message)

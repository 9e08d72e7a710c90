"""What can go wrong, in the two forms in which it is told: an exception, and a cell's error value."""

import enum


class InputError(ValueError):
    """The call or its input is wrong: one sentence that says what, where, and what to write instead.

    The command line prints the sentence on standard error and exits with status 2.
    """


class ErrorValue(enum.Enum):
    """An error value of a spreadsheet cell, named as the spreadsheet shows it.

    Members compare by identity; ``ErrorValue("#DIV/0!")`` looks one up by its text.
    """

    NULL = "#NULL!"
    DIV0 = "#DIV/0!"
    VALUE = "#VALUE!"
    REF = "#REF!"
    NAME = "#NAME?"
    NUM = "#NUM!"
    NA = "#N/A"
    GETTING_DATA = "#GETTING_DATA"
    SPILL = "#SPILL!"
    CALC = "#CALC!"
    FIELD = "#FIELD!"

    def __str__(self) -> str:
        return self.value

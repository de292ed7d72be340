"""How the program ends."""

IN_ORDER = 0
PROBLEMS = 1
FAILED = 2
WRONG_USAGE = 3


class UsageError(Exception):
    """What was asked for cannot be done, in plain words."""

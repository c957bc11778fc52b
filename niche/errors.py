"""What can go wrong, in one family.

The library raises these and never prints; the command line translates them into a message and an exit status.
A message names the place (file and row, or the key of the study file), the value met, the rule, and what to do next.
"""


class NicheError(Exception):
    """Base of every error that `niche` raises on purpose."""


class StudyError(NicheError):
    """The study file, or a file that it names, cannot be used as it stands."""


class LogError(NicheError):
    """A log cannot be read, or holds something that stops the work."""


class ValueRuleError(NicheError, ValueError):
    """A number or array handed to the library breaks a rule of the function."""


class OutputError(NicheError):
    """A result cannot be written where it was asked for."""


class NicheWarning(UserWarning):
    """A result is there but needs a reservation: few units, undefined cells, a species without use."""

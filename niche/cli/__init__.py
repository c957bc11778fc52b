"""The command line: the only part that prints.

Each command parses, calls the library, prints and translates. Commands stand in the help in the order of these imports.
"""

from niche.cli import beginning, results, folders  # noqa: F401, I001 - importing a module adds its commands
from niche.cli.program import app, main

__all__ = ["app", "main"]

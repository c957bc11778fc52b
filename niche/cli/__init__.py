"""The command line: the only part that prints."""

from niche.cli.app import app, main

__all__ = ["app", "main"]

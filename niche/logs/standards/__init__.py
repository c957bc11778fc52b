"""Open standards that logs may be written in: Darwin Core, Camtrap DP, Table Schema and Table Dialect."""

from niche.logs.standards.reading import is_standard, open_standard, parts_of

__all__ = ["is_standard", "open_standard", "parts_of"]

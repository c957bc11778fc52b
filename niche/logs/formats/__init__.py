"""File forms: each module turns one form of file into pieces."""

from niche.logs.formats.csv_text import read_csv
from niche.logs.formats.database import DatabaseLog
from niche.logs.formats.opening import open_pieces

__all__ = ["DatabaseLog", "open_pieces", "read_csv"]

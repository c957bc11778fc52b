"""File forms: each module turns one form of file into pieces."""

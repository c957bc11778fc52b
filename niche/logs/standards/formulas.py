"""Text that a spreadsheet would run as a formula, made harmless in a way that can be undone exactly.

Text that begins with ``=``, ``+``, ``-``, ``@``, a tab or a carriage return, after any apostrophes, gets one apostrophe
in front. Reading takes one away from text of just that form. So ``=A1`` is written ``'=A1``, and ``'=A1`` is written
``''=A1``; both come back as they were, and every other text is left alone.
"""

from __future__ import annotations

import re

_ALIVE = re.compile(r"'*[=+\-@\t\r]")


def escape(text: str) -> str:
    """Text for a table that may be opened as a spreadsheet."""
    return f"'{text}" if _ALIVE.match(text) else text


def unescape(text: str) -> str:
    """The text that `escape` was given."""
    return text[1:] if text.startswith("'") and _ALIVE.match(text) else text

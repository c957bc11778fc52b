"""A short way for columns of ISO 8601 times that are all written alike, as loggers and exports write them.

The first time is the model: cells of its length, with digits where it has digits and the same signs between, are taken apart
by the place of each digit. That is several times faster than a regular expression, which reads all other cells.
"""

from __future__ import annotations

import re
from typing import Any

import numpy as np
import pyarrow as pa
from numpy.typing import NDArray

from niche.logs.clocks.written import NO_OFFSET, Numbers, Written, assembled, calendar_days

_MODEL = re.compile(
    r"\d{4}-(?P<month>\d\d)-\d\d[T ]\d\d:\d\d(?::(?P<second>\d\d)(?:[.,](?P<fraction>\d{1,9}))?)?"
    r"(?P<offset>Z|[+-](?P<hours>\d\d):?(?P<minutes>\d\d))?",
    re.ASCII,
)


def read_uniform(text: Any) -> Written:
    """Read the cells that are written as the first is, in the extended form with a calendar date.

    Parameters
    ----------
    text : pyarrow string array, length n

    Returns
    -------
    Written
        Other cells do not fit.
    """
    model = _MODEL.fullmatch(str(text[0].as_py())) if len(text) and not text.null_count else None
    if model is None or not pa.types.is_string(text.type) or isinstance(text, pa.ChunkedArray):
        return Written.blank(len(text))
    cells, alike = _bytes(text, len(model.string))
    fits = np.zeros(len(text), dtype=bool)
    fits[alike] = _written_alike(cells, model.string.encode())

    def number(first: int, last: int) -> Numbers:
        """Digits of some places as a number, one a row; 0 in rows that are not alike."""
        value = np.zeros(len(text), dtype=np.int64)
        for place in range(first, last):
            value[alike] = value[alike] * 10 + (cells[:, place] - 48)
        return np.where(fits, value, 0)

    def group(name: str, most: int = 9) -> Numbers:
        first, last = model.span(name)
        return number(first, min(last, first + most))

    zero = np.zeros(len(text), dtype=np.int64)
    second = group("second") if model["second"] else zero
    places = min(len(model["fraction"] or ""), 3)
    milli = group("fraction", 3) * 10 ** (3 - places) if places else zero
    offset = group("hours") * 60 + group("minutes") if model["hours"] else zero
    if model["hours"]:
        offset = np.where(group("minutes") > 59, NO_OFFSET, offset)
    if model["offset"] and model["offset"][0] == "-":
        offset = -offset
    written = assembled(
        fits,
        calendar_days(number(0, 4), number(5, 7), number(8, 10)),
        (number(11, 13), number(14, 16), second, milli),
        (offset, fits & (model["offset"] is not None)),
    )
    written.seconds = model["second"] is not None and bool(fits.any())
    return written


def _bytes(text: Any, length: int) -> tuple[NDArray[np.uint8], NDArray[np.bool_]]:
    """Bytes of the cells of one length, a row each, and which cells these are."""
    begins = np.frombuffer(text.buffers()[1], dtype=np.int32)[text.offset : text.offset + len(text) + 1]
    alike = np.diff(begins) == length
    data = np.frombuffer(text.buffers()[2], dtype=np.uint8)
    if alike.all():
        return data[begins[0] : begins[-1]].reshape(len(text), length), alike
    return data[begins[:-1][alike][:, None] + np.arange(length)], alike


def _written_alike(cells: NDArray[np.uint8], model: bytes) -> NDArray[np.bool_]:
    """Rows with digits where the model has digits, and the same bytes elsewhere."""
    fits = np.ones(len(cells), dtype=bool)
    for place, byte in enumerate(model):
        column = cells[:, place]
        fits &= (column - 48 < 10) if 48 <= byte < 58 else (column == byte)
    return fits

"""Time zones as a study file names them: by IANA name, or as a fixed offset from UTC."""

from __future__ import annotations

import re
from datetime import timedelta, timezone, tzinfo
from zoneinfo import ZoneInfo

UNPORTABLE = ("right/", "posix/", "localtime", "posixrules")
"""Names that some machines know as time zones, others do not or take for another; `right/` counts leap seconds."""

_OFFSET = re.compile(r"([+-])(\d{2}):?(\d{2})")


def time_zone(name: str) -> tzinfo:
    """The zone that a name stands for.

    Parameters
    ----------
    name : str
        An IANA name such as ``Europe/Berlin`` or ``Etc/GMT-1``, or a fixed offset such as ``+01:00``, for a station that
        keeps one time all year.

    Raises
    ------
    ValueError
        No such zone, or an offset beyond 18 hours.
    """
    found = _OFFSET.fullmatch(name)
    try:
        if found is None:
            if name.startswith(UNPORTABLE):
                raise ValueError(name)
            return ZoneInfo(name)
        size = timedelta(hours=int(found[2]), minutes=int(found[3]))
        if int(found[3]) > 59 or size > timedelta(hours=18):
            raise ValueError(name)
        return timezone(-size if found[1] == "-" else size)
    except (KeyError, ValueError, OSError) as error:
        raise ValueError(
            f"found {name!r}, and there is no such time zone; give an IANA name such as Europe/Berlin or Etc/GMT-1, or an "
            "offset such as +01:00"
        ) from error

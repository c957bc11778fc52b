"""Log files to visits: the only part of the program that opens a log.

Every row is used, out of sight, or set aside with a reason; so is every millisecond. The ledger proves it.
"""

from niche.logs.engine import Log, read_logs
from niche.logs.ledger import Ledger
from niche.logs.single import open_study

__all__ = ["Ledger", "Log", "open_study", "read_logs"]

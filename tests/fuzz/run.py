"""Spoil studies for some minutes: python tests/fuzz/run.py --minutes 5 [--first 20000]."""

from __future__ import annotations

import argparse
import sys
import tempfile
import time
import traceback
import warnings
from collections import Counter
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parent))

import holding
import spoiling


def main() -> None:
    parser = argparse.ArgumentParser()
    parser.add_argument("--minutes", type=float, default=5)
    parser.add_argument("--first", type=int, default=20_000)
    options = parser.parse_args()
    warnings.simplefilter("ignore")
    end, case, found = time.monotonic() + 60 * options.minutes, options.first, Counter[str]()
    failed: dict[str, int] = {}
    while time.monotonic() < end:
        with tempfile.TemporaryDirectory() as folder:
            try:
                found[holding.hold(spoiling.make(case, Path(folder)))] += 1
            except BaseException as error:
                if isinstance(error, KeyboardInterrupt):
                    raise
                last = traceback.extract_tb(error.__traceback__)[-1]
                kind = f"{type(error).__name__} at {Path(last.filename).name}:{last.lineno}: {str(error)[:120]}"
                failed.setdefault(kind, case)
                found["failed"] += 1
        case += 1
    sys.stdout.write(f"{found.total()} cases from {options.first}: {dict(found)}\n")
    for kind, first in failed.items():
        sys.stdout.write(f"case {first}: {kind}\n")
    raise SystemExit(1 if failed else 0)


if __name__ == "__main__":
    main()

"""``python -m niche`` is the command ``niche``."""

from niche.cli import main

main()

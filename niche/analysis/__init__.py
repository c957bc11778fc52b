"""Where the data side meets the numeric side: Usage and settings to results."""

from niche.analysis.compute import analyse
from niche.analysis.results import Analysis, Coefficients, Estimate, Options, PairOutcome, Use
from niche.analysis.run import Run, run_study

__all__ = ["Analysis", "Coefficients", "Estimate", "Options", "PairOutcome", "Run", "Use", "analyse", "run_study"]

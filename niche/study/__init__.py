"""The study file: its model, its reading with clear errors, and the starter that `niche start` writes."""

from niche.study.model import Settings, Species, Study, Zones
from niche.study.reading import read_study, study_from_text

__all__ = ["Settings", "Species", "Study", "Zones", "read_study", "study_from_text"]

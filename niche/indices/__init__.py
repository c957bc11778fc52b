"""Indices of breadth and overlap, and competition coefficients: pure functions on trailing axes.

Axes: ``S`` species, ``Z`` zones, ``...`` any leading axes (a resample is one). An index takes either the product matrix
``c`` of shape ``(..., S, S)`` or the proportions ``p`` of shape ``(..., S, Z)``; breadths give ``(..., S)``, overlaps
``(..., S, S)``. Element ``[s, t]`` of a matrix of coefficients is the effect of t on s.
"""

from niche.indices.breadth import hurlbert_breadth, levins, levins_standardized, shannon, smith
from niche.indices.catalogue import BREADTH, OVERLAP, Index
from niche.indices.competition import macarthur_levins, within_range
from niche.indices.core import core_zones
from niche.indices.inputs import Inputs
from niche.indices.overlap import horn, hurlbert_overlap, morisita_horn, pianka, schoener
from niche.indices.products import products, proportions

__all__ = [
    "BREADTH",
    "OVERLAP",
    "Index",
    "Inputs",
    "core_zones",
    "horn",
    "hurlbert_breadth",
    "hurlbert_overlap",
    "levins",
    "levins_standardized",
    "macarthur_levins",
    "morisita_horn",
    "pianka",
    "products",
    "proportions",
    "schoener",
    "shannon",
    "smith",
    "within_range",
]

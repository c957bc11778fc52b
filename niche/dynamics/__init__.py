"""Lotka–Volterra competition between two species: what follows from given α, β and K."""

from niche.dynamics.two_species import OUTCOMES, TwoSpecies, classify, coexistence_window, equilibrium, outcome

__all__ = ["OUTCOMES", "TwoSpecies", "classify", "coexistence_window", "equilibrium", "outcome"]

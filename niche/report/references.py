"""Sources of the methods that a run used, and of no others."""

from __future__ import annotations

from typing import TYPE_CHECKING

from markupsafe import Markup

if TYPE_CHECKING:
    from niche.analysis import Run

_SOURCES = {
    "abrams": "Abrams, P. (1980) Some comments on measuring niche overlap. <i>Ecology</i> 61, 44–49.",
    "colwell": "Colwell, R. K. & Futuyma, D. J. (1971) On the measurement of niche breadth and overlap. <i>Ecology</i> 52, "
    "567–576.",
    "efron": "Efron, B. & Tibshirani, R. J. (1993) <i>An Introduction to the Bootstrap</i>. Chapman & Hall.",
    "horn": "Horn, H. S. (1966) Measurement of “overlap” in comparative ecological studies. <i>American Naturalist</i> 100, "
    "419–424.",
    "hurlbert": "Hurlbert, S. H. (1978) The measurement of niche overlap and some relatives. <i>Ecology</i> 59, 67–77.",
    "kleiber": "Kleiber, M. (1932) Body size and metabolism. <i>Hilgardia</i> 6, 315–353.",
    "levins": "Levins, R. (1968) <i>Evolution in Changing Environments</i>. Princeton University Press.",
    "lotka": "Lotka, A. J. (1932) The growth of mixed populations. <i>Journal of the Washington Academy of Sciences</i> 22, "
    "461–469.",
    "macarthur": "MacArthur, R. & Levins, R. (1967) The limiting similarity, convergence, and divergence of coexisting "
    "species. <i>American Naturalist</i> 101, 377–385.",
    "morisita": "Morisita, M. (1959) Measuring of interspecific association and similarity between communities. "
    "<i>Memoirs of the Faculty of Science, Kyushu University, Series E (Biology)</i> 3, 65–80.",
    "pianka": "Pianka, E. R. (1973) The structure of lizard communities. <i>Annual Review of Ecology and Systematics</i> 4, "
    "53–74.",
    "schoener": "Schoener, T. W. (1970) Nonsynchronous spatial overlap of lizards in patchy habitats. <i>Ecology</i> 51, "
    "408–418.",
    "shannon": "Shannon, C. E. (1948) A mathematical theory of communication. <i>Bell System Technical Journal</i> 27, "
    "379–423.",
    "smith": "Smith, E. P. (1982) Niche breadth, resource availability, and inference. <i>Ecology</i> 63, 1675–1681.",
    "volterra": "Volterra, V. (1926) Fluctuations in the abundance of a species considered mathematically. <i>Nature</i> "
    "118, 558–560.",
}

_OF_INDEX = {
    "levins": ("levins",),
    "levins_standardized": ("levins", "hurlbert"),
    "shannon": ("shannon",),
    "pianka": ("pianka",),
    "morisita_horn": ("morisita", "horn"),
    "morisita": ("morisita",),
    "schoener": ("schoener",),
    "horn": ("horn",),
    "hurlbert": ("hurlbert",),
    "smith": ("smith",),
}


def references(run: Run) -> list[Markup]:
    """Sources in alphabetical order, ready for the page."""
    analysis = run.analysis
    used = {"efron"}
    used.update(key for name in analysis.breadth for key in _OF_INDEX[name])
    if len(analysis.usage.species) > 1:
        used.update(key for name in analysis.overlap for key in _OF_INDEX[name])
        if analysis.overlap:
            used |= {"colwell", "abrams"}
        if analysis.coefficients is not None:
            used |= {"macarthur", "lotka", "volterra"}
            if run.study.demand_basis() == "body_mass":
                used.add("kleiber")
    return [Markup(_SOURCES[key].replace("&", "&amp;")) for key in sorted(used)]

"""The cautions that stand beside every overlap, coefficient and outcome, in the same words everywhere."""

OVERLAP = (
    "Overlap is similarity of use. It is not competition: it shows competition only where what the zones offer is in "
    "short supply."
)
COEFFICIENTS = (
    "α and β follow from overlap only if the resource is limiting, demand is as stated and species compete through shared "
    "use alone; the log cannot show that."
)
OUTCOME = (
    "An outcome is a scenario under the Lotka–Volterra model with the K and coefficients given, not a forecast. Do not "
    "use it alone to justify control, removal or translocation."
)
REVIEW = (
    "Have a suitably qualified or licensed ecologist review this before any decision on habitat or animals; local law and "
    "guidance come first."
)
FIELDWORK = (
    "More watching has a cost to the animals and to people: keep distance, stop on alarm, stay off nests, roosts and "
    "breeding sites, hold the permits, assess the risks of the field and do not work alone."
)
CORE = "The core is a display convention, common practice, and not a biological boundary."
SCOPE = "Findings hold for the animals, dates, hours and places that were watched."

BY_TABLE: dict[str, tuple[str, ...]] = {
    "usage": (CORE, SCOPE),
    "breadth": (SCOPE,),
    "overlap": (OVERLAP, REVIEW),
    "coefficients": (OVERLAP, COEFFICIENTS, REVIEW),
    "outcome": (OUTCOME, COEFFICIENTS, REVIEW),
    "draws": (OVERLAP,),
    "ledger": (SCOPE,),
}
"""What each table carries: under it on the terminal, in its JSON, and in the data package."""

"""Remarks an observer might scribble beside a bout of the invented sample study."""

from __future__ import annotations

import numpy as np

HOW_OFTEN = 0.035

# Each remark with the bouts it can stand beside: species, behaviour, and the beginning or end of the zone ("" = any).
REMARKS = [
    ("turned weed and pushed under it", "turnstone", "foraging", "mussel bed"),
    ("flicked over loose shells, took a small crab", "turnstone", "foraging", "mussel bed"),
    ('hammered at a gaping mussel, then lost it to another turnstone ("YW" on left leg)', "turnstone", "foraging", ""),
    ("stitching along the water line, head down", "dunlin", "foraging", "lower"),
    ("probing fast, tight flock of about 60", "dunlin", "foraging", "mud"),
    ("lone bird, 30 m from flock", "dunlin", "foraging", ""),
    ("head under wing, one leg", "dunlin", "resting", ""),
    ("took a ragworm, about as long as the bill, swallowed whole", "redshank", "foraging", "mud"),
    ("wading, water 4–5 cm", "redshank", "foraging", "channel edge"),
    ("pecking at the surface, mud snails?", "redshank", "foraging", "mud"),
    ('called "tjü-hü-hü", bobbing', "redshank", "alert", ""),
    ("run, stop, peck; foot-trembling with left foot", "ringed plover", "foraging", ""),
    ("chased a second plover off, came back", "ringed plover", "foraging", "sand"),
    ("crouched, gull low overhead", "ringed plover", "alert", ""),
    ("stood in the lee of a shell bank", "ringed plover", "resting", "sand"),
    ("dog and walker on the dyke, whole flock looked up", "", "alert", "upper"),
    ('"false alarm", curlews went up first', "", "alert", ""),
    ("peregrine far off, to the west", "", "alert", ""),
    ("rings read twice, left leg muddy", "", "foraging", "mud"),
    ("bathed first, then preened", "", "preening", "channel edge"),
    ("wing stretch", "", "preening", ""),
]
# Weather belongs to a day, not to a bird.
WEATHER = {
    "2026-09-06": ["heat haze, behaviour hard to tell"],
    "2026-09-18": ["drizzle, lens wiped", "rain, stopped after 5 min"],
    "2026-10-05": ["wind SW 6, gusty, telescope shaking"],
}
WHEN_LOST = {
    "edge": ["down in the channel", "below the bank, heard only", "behind the channel bank"],
    "bed": ["behind a mussel hummock", "among mussels, rings hidden"],
    "": ["hidden by other birds", "behind shelducks", "flew low, picked up again", "glare, lost for a moment"],
}


def note_for(random: np.random.RandomState, session: str, species: str, label: str, behaviour: str, zone: str) -> str:
    """A remark that fits the bout, or most often none.

    ``label`` is the zone as logged and ``zone`` the one the bird was last seen in; they differ where it is out of
    sight, which observers are more inclined to explain. The day is read off the ``session``.
    """
    if label != zone:
        ending = next(ending for ending in WHEN_LOST if zone.endswith(ending))
        return str(random.choice(WHEN_LOST[ending])) if random.random_sample() < 0.2 else ""
    if random.random_sample() >= HOW_OFTEN:
        return ""
    fitting = [
        remark
        for remark, of, during, where in REMARKS
        if of in ("", species) and during == behaviour and (zone.startswith(where) or zone.endswith(where))
    ] + WEATHER.get(session[:10], [])
    return str(random.choice(fitting)) if fitting else ""

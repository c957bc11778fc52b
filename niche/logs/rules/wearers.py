"""Whose tag was read: animal and species of a read by the tag table and the time."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from niche.logs.labels import Labels, listing, propose, tidy
from niche.logs.rows import Mask, Rows
from niche.logs.tags import TagTable
from niche.study.model import Study


def animal_of_tag(
    rows: Rows, study: Study, table: TagTable, time: NDArray[np.int64], timed: Mask
) -> tuple[NDArray[np.object_], NDArray[np.object_]]:
    """Species and animal of each read.

    A tag that the table does not list, and a read at a time when nobody wore the tag, is set aside: a stray tag is no
    slip of the pen, and there is nobody to give it to.
    """
    labels = Labels.of(rows.piece.column(study.logs.columns.tag))
    names = [tidy(text) for text in labels.written]
    rows.problem("tag", labels.where(name == "" for name in names), labels, "tag missing", "fill it in")
    unknown = labels.where(name != "" and name not in table.tags for name in names)
    known = listing(table.tags)
    advice = {text: f"not in {table.file}; {propose(text, known)}" for text in labels.written}
    rows.problem("tag", unknown, labels, "tag not in the tag table", advice)
    species = np.full(len(time), None, dtype=object)
    animal = np.full(len(time), None, dtype=object)
    outside = np.zeros(len(time), dtype=bool)
    for number, name in enumerate(names):
        mine = (labels.index == number) & timed
        worn = table.tags.get(name, ())
        outside |= mine if worn else False
        for wearing in worn:
            during = mine & (time >= wearing.from_ms) & (time < wearing.to_ms)
            species[during], animal[during] = wearing.species, wearing.animal
            outside &= ~during
    advice = {
        text: f"nobody wore the tag at this time, by {table.file} (lines "
        f"{', '.join(str(w.line) for w in table.tags.get(name, ()))}); correct the table if somebody did"
        for text, name in zip(labels.written, names, strict=True)
    }
    rows.problem("tag", outside, labels, "outside the tag's validity", advice)
    return species, animal

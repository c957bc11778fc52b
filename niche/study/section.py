"""What every table of the study file shares."""

from __future__ import annotations

from typing import Annotated

from pydantic import BaseModel, ConfigDict, Field


class Section(BaseModel):
    """A table of the study file: no key beyond those listed, no silent change of type, no change once read."""

    model_config = ConfigDict(extra="forbid", frozen=True, strict=True)


Positive = Annotated[float, Field(gt=0, lt=1e100, allow_inf_nan=False)]
Text = Annotated[str, Field(min_length=1)]
Texts = Annotated[tuple[Text, ...], Field(strict=False)]

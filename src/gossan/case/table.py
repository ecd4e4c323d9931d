"""What every table of a case is."""

from __future__ import annotations

from pydantic import BaseModel, ConfigDict


class TableOfCase(BaseModel):
    """A table of the TOML, frozen once it is read."""

    model_config = ConfigDict(
        frozen=True, extra="forbid", arbitrary_types_allowed=True, populate_by_name=True
    )

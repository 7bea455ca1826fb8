"""What all sections of the settings have in common."""

from pydantic import BaseModel, ConfigDict


class Section(BaseModel):
    """A frozen section of the config; keys it does not know are refused."""

    model_config = ConfigDict(extra="forbid", frozen=True, allow_inf_nan=False)

"""Settings of the pages of a delivery."""

from pydantic import Field, NonNegativeInt

from basinheat.settings.base import Section


class Report(Section):
    """Pages of the delivery."""

    wells_drawn: NonNegativeInt = Field(
        default=300, description="wells with pictures in wells.html, the worst fits first"
    )

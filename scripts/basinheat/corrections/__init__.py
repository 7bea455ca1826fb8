"""Formation temperatures from readings in holes that mud has cooled."""

from basinheat.corrections.registry import METHODS
from basinheat.corrections.stage import Corrected, correct

__all__ = ["METHODS", "Corrected", "correct"]

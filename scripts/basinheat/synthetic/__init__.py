"""An invented basin with a known truth: rocks, heat, mud cooling and paperwork, all made up.

The truth is computed by code of its own (column conduction and mud cooling included), so that
agreement between the maps and the truth says something about the maps.
"""

from basinheat.synthetic.basin import Basin, make_basin
from basinheat.synthetic.files import DEMO_SEED, write_demo
from basinheat.synthetic.truth import Truth

__all__ = ["DEMO_SEED", "Basin", "Truth", "make_basin", "write_demo"]

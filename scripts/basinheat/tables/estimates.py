"""What the correction gives before the basin's shared sources are known."""

from basinheat.tables.contract import Table, flag, number
from basinheat.tables.temperatures import Temperatures


class Estimates(Table):
    """One row per well, depth and kind of reading; ``temperatures`` keeps the used ones."""

    columns = {
        **Temperatures.columns,
        "used": flag("the row that counts at this well and depth; others only inform the sources"),
    }
    open_columns = {
        "loading_": number("K", "change of the estimate per unit standard deviation of a source")
    }

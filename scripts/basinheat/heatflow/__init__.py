"""Heat flow of the wells and the shared sources of error, fitted together."""

from basinheat.heatflow.stage import Fit, fit

__all__ = ["Fit", "fit"]

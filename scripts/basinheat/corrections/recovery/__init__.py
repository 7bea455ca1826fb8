"""Conductive recovery: simulated response, cooling law learned in the basin, unknown times."""

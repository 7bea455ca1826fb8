"""The report of a delivery: one self-contained page."""

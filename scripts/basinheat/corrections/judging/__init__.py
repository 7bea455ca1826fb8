"""The correction methods judged: side by side, against measured temperatures, at the surface."""

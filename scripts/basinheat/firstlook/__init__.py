"""The first look: what the input files hold, what was read of them, and what looks wrong."""

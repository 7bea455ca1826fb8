"""One module per published correction, and what kinds of them have in common."""

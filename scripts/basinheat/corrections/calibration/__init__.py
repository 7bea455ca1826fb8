"""The basin's own correction, learned where mud-cooled and direct temperatures meet."""

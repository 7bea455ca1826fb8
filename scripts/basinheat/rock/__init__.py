"""The rock of the wells: from layers to slabs, to thermal resistance and what is unsure of it."""

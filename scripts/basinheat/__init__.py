"""Well temperatures to maps of geothermal gradient, heat flow and temperature at depth."""

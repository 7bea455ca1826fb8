"""Thermal conductivity: a sourced catalogue, mixing, porosity, in-situ conditions."""

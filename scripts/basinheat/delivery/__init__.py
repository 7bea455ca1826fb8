"""The folder to hand over: rasters, GeoPackage, cautions and manifest."""

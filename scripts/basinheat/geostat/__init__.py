"""Geostatistics: covariance models, variograms, likelihood, kriging engines, cross-validation."""

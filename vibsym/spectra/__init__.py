"""Prediction: which bands a structure allows. No measured data."""

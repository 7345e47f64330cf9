"""Designs given by hand, evaluated."""

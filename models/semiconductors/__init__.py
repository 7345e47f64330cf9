"""Semiconductor losses and junction temperatures of a bridge."""

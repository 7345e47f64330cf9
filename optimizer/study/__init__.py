"""A study file read, checked and turned into SI units; every error with its place."""

"""Batches: a study with lists in it, every combination a case, on this machine or on a cluster."""

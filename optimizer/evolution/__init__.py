"""pymoo's NSGA-II and NSGA-III on whole arrays: screening, mating, survival."""

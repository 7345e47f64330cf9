"""A whole run: its fronts as tables, its folder written whole, and read back."""

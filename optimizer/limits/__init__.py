"""What keeps a front from going on, and what would open an empty space."""

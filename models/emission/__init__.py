"""Conducted emission, 150 kHz to 30 MHz: the bridge's noise, the mains network, the filter it needs."""

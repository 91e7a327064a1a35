"""Choose the resistor, or the mix of resistors, that gives a bias current its drift."""

"""One part and temperature: resistor and junction, stated in sympy."""

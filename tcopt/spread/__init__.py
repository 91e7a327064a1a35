"""What silicon makes of a finished design: corners, samples, yield, and trim."""

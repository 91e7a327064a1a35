"""Results as tables for a terminal or a pipe; pure, printing is done elsewhere."""

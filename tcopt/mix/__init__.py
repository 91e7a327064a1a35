"""Need and offer: what a slot's resistance has to be, and the best that a menu can do."""

"""Numbers, kinds of quantity and unit texts."""

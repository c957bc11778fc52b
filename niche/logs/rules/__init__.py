"""Recording rules: one module a rule, each saying what one row is worth and ending in visits."""

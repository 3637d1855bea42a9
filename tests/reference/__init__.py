"""Published numbers, each set as a plan and seen through the solver."""

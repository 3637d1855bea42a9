"""The desktop program: window, bench and plots around the solver."""

"""Steady forced response: what every source does to every link over the speeds, and what that means."""

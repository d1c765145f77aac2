"""Questions over many solves: stiffness windows, comparison of cases, tolerance, drift."""

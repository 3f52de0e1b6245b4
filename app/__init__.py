"""The fronts of Masswright: the command line and the window; neither computes a number of its own."""

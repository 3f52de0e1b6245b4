"""Mass properties of rotating assemblies: pure functions and frozen values, in SI units, without a window."""

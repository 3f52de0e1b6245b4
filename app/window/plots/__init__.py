"""Plots: `Graph` says what is drawn, `CurvePlot` draws it, with its legend, a readout and a way to copy it."""

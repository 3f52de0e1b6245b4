"""The gallery of shapes: pictures with their dimensions marked, and the panel in which a shape is chosen and made.

- `drawing`: a shape as visible and hidden lines in the plane; numpy alone, kept for shapes asked for again.
- `dimensioning`: where dimension lines, arrows and symbols go beside it.
- `picture`: the drawing painted at any size in the colours of the theme.
- `panel`: what "Add shape" opens.
"""

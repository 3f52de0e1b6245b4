"""The outline of a profile, edited as a table and on a canvas.

- `draft`: an outline while it is being edited, when it need not bound an area yet; no Qt in there.
- `table`, `canvas`: the two sides of it.
- `section`: the block of the Part page and of the gallery that holds both.
"""

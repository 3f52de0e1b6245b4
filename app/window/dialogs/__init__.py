"""What asks before a line is added: a data sheet's values, a mesh's unit, an axis."""

"""Mesh files of all formats that are read, as bodies.

read_bodies gives a MeshAsset for each body of an STL, OBJ, PLY, OFF, 3MF or GLB file; FORMATS names them by suffix.
Whatever is wrong is a MeshFileError; nothing is mended, nothing outside the file is looked up, and materials, textures
and colours are not read.
"""

from core.mesh.formats.reading import FORMATS, read_bodies

__all__ = ["FORMATS", "read_bodies"]

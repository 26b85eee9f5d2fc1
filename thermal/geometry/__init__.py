"""Where the metal is: meshes, grading, coils and their air-core inductance."""

"""The building as data: sheds, parts, pieces, assemblies, joints. Knows no description and no file."""

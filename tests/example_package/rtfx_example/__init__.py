"""An example of a package that adds a kind of block to rtfx."""

"""Choose substituents that put the colour change of a phenol or aniline dye at a wanted pH."""

__version__ = "0.1.0"

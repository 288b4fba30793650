"""calcpack: calculation packages for pumped piping systems."""

__version__ = "0.1.0"

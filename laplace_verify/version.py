"""The version, in the one place that packaging, records and the command line read it from."""

__all__ = ["__version__"]

__version__ = "0.1.0"

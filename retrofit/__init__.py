"""Compare the options for changing the refrigerant of an existing vapour-compression plant."""

__version__ = "0.1.0"

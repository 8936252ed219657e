"""Panelview: which enzyme-catalysed steps a metabolite panel shows displaced, which way and how surely."""

__version__ = "0.1.0"

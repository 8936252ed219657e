"""Panelview: which enzyme-catalysed steps a metabolite panel shows displaced, which way and how surely."""

import os

# The engine's matrix products are small: starting a pool of BLAS threads takes longer than they save. Has to
# stand before numpy is first imported; whoever set a number keeps it.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

__version__ = "0.1.0"

"""Settings of every test, made before anything loads the libraries."""

import os

# As the command line has it: several test processes with threads of their own slow each other down.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

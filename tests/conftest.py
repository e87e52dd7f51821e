"""What holds for all tests."""

import os

# As the command does it; two workers with threads of their own would be in each other's way.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

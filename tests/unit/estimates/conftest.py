import sys
from pathlib import Path

# The short way to an estimate stands beside these tests, which are no package.
sys.path.append(str(Path(__file__).parent))

import sys
from pathlib import Path

# The bridge to SymPy stands beside these tests, which are no package.
sys.path.append(str(Path(__file__).parent))

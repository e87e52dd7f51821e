import sys
from pathlib import Path

# The circuits worked by hand stand beside these tests, which are no package.
sys.path.append(str(Path(__file__).parent))

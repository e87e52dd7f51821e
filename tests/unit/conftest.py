import sys
from pathlib import Path

# The short way along the road, for the stations' tests, stands beside them.
sys.path.append(str(Path(__file__).parent))

import sys
from pathlib import Path

# The short road to a register of assumptions is shared with the random stages.
sys.path += [str(Path(__file__).parent), str(Path(__file__).parents[2] / "support")]

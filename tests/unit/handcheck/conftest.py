import sys
from pathlib import Path

# The derivations stand beside these tests; what is shared with others is in the folder "support".
sys.path += [str(Path(__file__).parent), str(Path(__file__).parents[2] / "support")]

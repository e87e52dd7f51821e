import sys
from pathlib import Path

# What several test files share, here and in the folder "support", is no package.
sys.path += [str(Path(__file__).parent), str(Path(__file__).parents[1] / "support")]

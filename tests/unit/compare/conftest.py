import sys
from pathlib import Path

# The stages that all of these tests compare stand beside them.
sys.path.append(str(Path(__file__).parent))

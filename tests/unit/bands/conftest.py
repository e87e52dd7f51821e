import sys
from pathlib import Path

# The stages put together by hand stand beside the tests.
sys.path.append(str(Path(__file__).parent))

"""What `panel serve app` runs for every page."""

import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parent.parent))

from app.page import page  # noqa: E402

page().servable()

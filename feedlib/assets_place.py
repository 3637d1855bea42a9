"""Where the data files that ship with the program lie; knows nothing of what is in them."""

from pathlib import Path

_HERE = Path(__file__).parent

# An installed wheel carries the data inside the package; a checkout has it beside the package.
ASSETS: Path = _HERE / "assets" if (_HERE / "assets").is_dir() else _HERE.parent / "assets"

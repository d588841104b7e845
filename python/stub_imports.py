"""Adds the imports that annotations given as text need to a generated stub.

The generator writes such annotations out as they are: usage `python stub_imports.py STUB`.
"""

import sys
from pathlib import Path

MODULES = ("collections.abc", "typing", "numpy", "numpy.typing", "pandas", "xarray")
IMPORTS = "".join(f"import {module}\n" for module in MODULES)


def main(stub: Path) -> None:
    """Put the imports before the stub's own, once."""
    text = stub.read_text(encoding="utf-8")
    if IMPORTS not in text:
        head, _, rest = text.partition("\nfrom ")
        stub.write_text(f"{head}\n{IMPORTS}from {rest}", encoding="utf-8")


if __name__ == "__main__":
    main(Path(sys.argv[1]))

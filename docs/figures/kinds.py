"""The reference page docs/kinds.md, made from the declarations of the kinds.

python docs/figures/kinds.py
"""

from __future__ import annotations

from pathlib import Path

from develop.pieces.reference import kinds_page

DOCS = Path(__file__).resolve().parent.parent

if __name__ == "__main__":
    (DOCS / "kinds.md").write_text(kinds_page(), encoding="utf-8")

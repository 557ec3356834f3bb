"""An empty PDF file of ours: its title, nothing of the time it is made, and that it is not to be scaled."""

from __future__ import annotations

import io
from typing import TYPE_CHECKING

from develop.outputs.fonts import FACE, register

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

__all__ = ["canvas_of"]


def canvas_of(buffer: io.BytesIO, title: str) -> Canvas:
    """A canvas that writes into the buffer when it is saved. Raises WriteError without its type face."""
    from reportlab.pdfgen.canvas import Canvas

    register()
    canvas = Canvas(buffer, invariant=1, pageCompression=1, pdfVersion=(1, 6), initialFontName=FACE)
    _describe(canvas, title)
    canvas.setViewerPreference("PrintScaling", "None")
    return canvas


def _describe(canvas: Canvas, title: str) -> None:
    """Title and kind of the document, and nothing of the time it was made.

    reportlab always writes a date, and mixes it into the file's ID; where the environment sets
    SOURCE_DATE_EPOCH not even its invariant mode keeps both still.
    """
    from hashlib import md5

    from reportlab.pdfbase.pdfdoc import PDFDictionary, PDFDocument, PDFInfo, PDFString

    class Details(PDFInfo):  # type: ignore[misc]
        def format(self, document: PDFDocument) -> bytes:
            words = {
                "Title": title,
                "Subject": "flat pattern, true scale: print at actual size",
                "Creator": "develop",
                "Producer": "develop",
            }
            entries = {key: PDFString(word) for key, word in words.items()}
            return bytes(PDFDictionary(entries).format(document))

    canvas._doc.info = Details()
    canvas._doc.signature = md5(title.encode(), usedforsecurity=False)

"""Layers of a PDF that a viewer can switch: optional content groups (ISO 32000-1, 8.11).

They are written through reportlab's own objects: its catalogue and pages have no place for them, but
take what is set before the file is saved. Reading the file again with another library to add them
would cost as much time as writing it.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

__all__ = ["MARKS", "NOTES", "Layers"]

MARKS = "page-marks"
"""What helps to lay pages together and to prove their scale."""
NOTES = "notes"
"""Words, tables and maps beside the pattern."""


class Layers:
    """The layers of one file, in the order of their first use; each is named as in the cutting files."""

    def __init__(self, canvas: Canvas) -> None:
        self._canvas = canvas
        self._names: list[str] = []
        self._open = False

    def open(self, name: str) -> None:
        """All that follows belongs to this layer, until the next."""
        self.close()
        if name not in self._names:
            self._names.append(name)
        self._canvas.addLiteral(f"/OC /{name} BDC")
        self._open = True

    def close(self) -> None:
        """What follows belongs to no layer; needed before the page or form ends."""
        if self._open:
            self._canvas.addLiteral("EMC")
        self._open = False

    @property
    def resources(self) -> Any:
        """The resources of a form that draws on the layers used so far."""
        from reportlab.pdfbase.pdfdoc import PDFResourceDictionary

        found = PDFResourceDictionary()
        found.basicFonts()
        found.Properties = self._groups()
        return found

    def finish(self) -> None:
        """Put the layers into every page and into the catalogue, all switched on."""
        from reportlab.pdfbase.pdfdoc import PDFArray, PDFDictionary, PDFString

        document = self._canvas._doc
        for page in document.Pages.pages:
            page.Resources = self.resources
            if page.XObjects:
                page.Resources.XObject = page.XObjects
        groups = self._groups()
        shown = PDFDictionary(
            {
                "Name": PDFString("layers"),
                "Order": PDFArray(list(groups.values())),
                "ON": PDFArray(list(groups.values())),
            }
        )
        catalogue = document.Catalog
        catalogue.__NoDefault__ = [*catalogue.__NoDefault__, "OCProperties"]
        catalogue.OCProperties = PDFDictionary({"OCGs": PDFArray(list(groups.values())), "D": shown})

    def _groups(self) -> dict[str, Any]:
        """A reference to each group by its name."""
        from reportlab.pdfbase.pdfdoc import PDFDictionary, PDFName, PDFObjectReference, PDFString

        document, found = self._canvas._doc, {}
        for name in self._names:
            key = f"layer-{name}"
            if key not in document.idToObject:
                group = PDFDictionary({"Type": PDFName("OCG"), "Name": PDFString(name)})
                document.Reference(group, key)
            found[name] = PDFObjectReference(key)
        return found

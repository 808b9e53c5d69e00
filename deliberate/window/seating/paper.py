"""The list of tables on paper, or as a PDF file."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QMarginsF
from PySide6.QtGui import QPagedPaintDevice, QPageLayout, QPdfWriter, QTextDocument
from PySide6.QtPrintSupport import QPrintDialog, QPrinter
from PySide6.QtWidgets import QWidget

from deliberate.errors import DeliberateError

MARGIN_MM = 18.0


def print_list(html: str, title: str, parent: QWidget) -> None:
    """Ask for a printer and print the list on it."""
    printer = QPrinter(QPrinter.PrinterMode.HighResolution)
    printer.setDocName(title)
    dialog = QPrintDialog(printer, parent)
    dialog.setWindowTitle("Print the list of tables")
    if dialog.exec() == QPrintDialog.DialogCode.Accepted:
        _draw(html, printer)


def save_pdf(html: str, title: str, path: Path) -> None:
    """Write the list to a PDF file. Raises DeliberateError where that cannot be done."""
    try:
        path.open("ab").close()
    except OSError as error:
        raise DeliberateError(f"cannot be written: {error.strerror or error}", str(path)) from None
    writer = QPdfWriter(str(path))
    writer.setTitle(title)
    writer.setCreator("Deliberate")
    _draw(html, writer)
    del writer  # closes the file
    if not path.stat().st_size:
        raise DeliberateError("nothing was written to it; is the disk full?", str(path))


def _draw(html: str, device: QPagedPaintDevice) -> None:
    device.setPageMargins(QMarginsF(MARGIN_MM, MARGIN_MM, MARGIN_MM, MARGIN_MM), QPageLayout.Unit.Millimeter)
    document = QTextDocument()
    document.setHtml(html)
    document.print_(device)

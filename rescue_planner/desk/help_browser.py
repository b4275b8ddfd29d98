"""One page of the help, drawn in the program's own sizes; it loads nothing from anywhere."""

from __future__ import annotations

from PySide6.QtCore import QByteArray, QUrl
from PySide6.QtGui import (
    QResizeEvent,
    QTextBlock,
    QTextBlockFormat,
    QTextCharFormat,
    QTextCursor,
    QTextTable,
)
from PySide6.QtWidgets import QTextBrowser

from rescue_planner.desk import help_pages, theme

LETTERS = 96  # of a line, at most
RING = (
    "QTextBrowser { border: 2px solid transparent; } "
    "QTextBrowser:focus { border: 2px solid palette(highlight); }"
)


class HelpBrowser(QTextBrowser):
    """Shows one page; it loads nothing by itself, from disk or from elsewhere."""

    def __init__(self) -> None:
        super().__init__()
        self.setOpenLinks(False)
        self.setOpenExternalLinks(False)
        self.setAccessibleName("Help page")
        self.setTabChangesFocus(False)  # Tab goes from link to link
        self.setStyleSheet(RING)
        self.document().setDocumentMargin(theme.UNIT * 2)

    def loadResource(self, _kind: int, _name: QUrl | str) -> object:
        return QByteArray()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        most = self.fontMetrics().averageCharWidth() * LETTERS
        spare = max(0, self.width() - most - theme.UNIT * 4)
        if self.viewportMargins().right() != spare:
            self.setViewportMargins(0, 0, spare, 0)

    def show_text(self, markdown: str, scale: float) -> None:
        """Show a page, its headings in the program's own sizes."""
        self.setMarkdown(markdown)
        whole = QTextCursor(self.document())
        whole.beginEditBlock()
        block = self.document().begin()
        while block.isValid():
            place = QTextCursor(block)
            place.movePosition(
                QTextCursor.MoveOperation.EndOfBlock, QTextCursor.MoveMode.KeepAnchor
            )
            level = block.blockFormat().headingLevel()
            if level:
                self._set_heading(place, level, scale)
            elif place.currentTable() is None:
                self._set_paragraph(place, block.textList() is not None, scale)
            self._underline_links(block)
            block = block.next()
        self._set_tables()
        whole.endEditBlock()
        self.moveCursor(QTextCursor.MoveOperation.Start)

    def _set_tables(self) -> None:
        for frame in self.document().rootFrame().childFrames():
            if isinstance(frame, QTextTable):
                made = frame.format()
                made.setCellPadding(theme.HALF)
                made.setCellSpacing(0)
                made.setBorder(0)
                made.setBottomMargin(theme.UNIT)
                frame.setFormat(made)

    @staticmethod
    def _set_heading(place: QTextCursor, level: int, scale: float) -> None:
        look = place.charFormat()
        look.clearProperty(QTextCharFormat.Property.FontSizeAdjustment.value)  # it would win
        size = theme.TITLE if level == 1 else theme.BODY
        look.setProperty(QTextCharFormat.Property.FontPixelSize.value, theme.pixels(size, scale))
        look.setFontWeight(400 if level == 1 else 600)
        place.setCharFormat(look)
        spaced = QTextBlockFormat()
        spaced.setTopMargin(theme.UNIT * scale * (0 if level == 1 else 2))
        spaced.setBottomMargin(scale * (theme.UNIT if level == 1 else theme.HALF))
        place.mergeBlockFormat(spaced)

    @staticmethod
    def _set_paragraph(place: QTextCursor, in_list: bool, scale: float) -> None:
        spaced = QTextBlockFormat()
        spaced.setBottomMargin(scale * (theme.HALF if in_list else theme.UNIT))
        spaced.setLineHeight(125, QTextBlockFormat.LineHeightTypes.ProportionalHeight.value)
        place.mergeBlockFormat(spaced)

    def _underline_links(self, block: QTextBlock) -> None:
        """Links are told apart by more than their colour."""
        look = QTextCharFormat()
        look.setFontUnderline(True)
        ends = []
        parts = block.begin()
        while not parts.atEnd():
            piece = parts.fragment()
            if piece.charFormat().isAnchor():
                ends.append((piece.position(), piece.position() + piece.length()))
            parts += 1
        for start, end in ends:
            link = QTextCursor(self.document())
            link.setPosition(start)
            link.setPosition(end, QTextCursor.MoveMode.KeepAnchor)
            link.mergeCharFormat(look)

    def go_to_heading(self, anchor: str) -> bool:
        """Scroll to the heading of an anchor; False where the page has none such."""
        block = self.document().begin()
        while block.isValid():
            if block.blockFormat().headingLevel() and help_pages.slug(block.text()) == anchor:
                top = self.document().documentLayout().blockBoundingRect(block).top()
                self.setTextCursor(QTextCursor(block))
                self.verticalScrollBar().setValue(round(top) - theme.UNIT)
                return True
            block = block.next()
        return False

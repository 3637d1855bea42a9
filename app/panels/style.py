"""How panels are dressed: one stylesheet made of a look, and labels that take every text as plain. Knows no plan."""

from __future__ import annotations

import html
import re
from typing import Literal

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor
from PySide6.QtWidgets import QLabel, QWidget

from app.look import SIZES, Look, blend, palette_of

SHEET_WIDTH = 280
MARGIN = 16
LEAST_CONTRAST = 4.5

Role = Literal["text", "small", "soft", "strong", "head", "title", "fault"]

_LONG_WORD = re.compile(r"\S{24}(?=\S)")


def plain_label(text: str = "", role: Role = "text") -> QLabel:
    """A label that wraps, shows its text as it is and never asks for more width than it gets."""
    label = QLabel()
    label.setTextFormat(Qt.TextFormat.PlainText)
    label.setWordWrap(True)
    label.setMinimumWidth(1)
    label.setProperty("role", role)
    set_text(label, text)
    return label


def set_text(label: QLabel, text: str) -> None:
    """Another text in a plain label; words too long for a sheet may break."""
    shown = _LONG_WORD.sub(lambda word: word[0] + "\u200b", text)
    if shown != label.text():
        label.setText(shown)


def tooltip(text: str) -> str:
    """A text as a tooltip that cannot be taken for markup."""
    return f"<p style='white-space:pre-wrap'>{html.escape(text)}</p>" if text else ""


def button_text(text: str) -> str:
    """A text for a button or a menu, where a lone & would underline the next letter."""
    return text.replace("&", "&&")


def contrast(first: str, second: str) -> float:
    """Contrast of two colours, 1 to 21 (WCAG 2.2, relative luminance)."""
    low, high = sorted((_luminance(first), _luminance(second)))
    return (high + 0.05) / (low + 0.05)


def readable(look: Look, colour: str, ground: str) -> str:
    """The colour, drawn towards ink just as far as text of it can be read on the ground."""
    shares = (step / 20 for step in range(21))
    return next(
        (c for c in (blend(colour, look.ink, share) for share in shares) if contrast(c, ground) >= LEAST_CONTRAST),
        look.ink,
    )


def _luminance(colour: str) -> float:
    c = QColor(colour)
    linear = [v / 12.92 if v <= 0.04045 else ((v + 0.055) / 1.055) ** 2.4 for v in (c.redF(), c.greenF(), c.blueF())]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def dress(widget: QWidget, look: Look) -> None:
    """Give a panel and all in it the colours and letters of a look."""
    widget.setPalette(palette_of(look))
    widget.setStyleSheet(_sheet(look))


def _sheet(look: Look) -> str:
    fails = readable(look, look.fails, look.card)
    return f"""
QWidget {{ color: {look.ink}; font-size: {SIZES["text"]}px; }}
QWidget[role="card"] {{ background: {look.card}; }}
QLabel {{ background: transparent; }}
QLabel[role="soft"] {{ color: {look.soft}; font-size: {SIZES["small"]}px; }}
QLabel[role="small"] {{ font-size: {SIZES["small"]}px; }}
QLabel[role="strong"] {{ font-weight: bold; }}
QLabel[role="head"] {{ font-size: {SIZES["head"]}px; font-weight: bold; }}
QLabel[role="title"] {{ font-size: {SIZES["title"]}px; font-weight: bold; }}
QLabel[role="fault"] {{ color: {fails}; font-size: {SIZES["small"]}px; }}
QLineEdit, QPlainTextEdit, QComboBox {{
    background: {look.field}; border: 1px solid {look.hairline}; border-radius: 4px; padding: 2px 6px;
    selection-background-color: {look.impedance[1]}; selection-color: {look.card};
}}
QLineEdit, QComboBox {{ min-height: 20px; }}
QLineEdit, QPlainTextEdit {{ placeholder-text-color: {look.soft}; }}
QComboBox {{ combobox-popup: 0; padding: 2px 2px 2px 8px; }}
QComboBox::drop-down {{ border: none; width: 20px; }}
QLineEdit:focus, QPlainTextEdit:focus, QComboBox:focus {{ border-color: {look.ink}; }}
QLineEdit[bad="true"], QComboBox[bad="true"] {{ border-color: {look.fails}; }}
QLineEdit[role="name"] {{
    background: transparent; border-color: transparent; font-size: {SIZES["head"]}px; font-weight: bold; padding: 2px 0;
}}
QLineEdit[role="name"]:hover {{ border-color: {look.hairline}; }}
QLineEdit[role="name"]:focus {{ background: {look.field}; border-color: {look.ink}; }}
QComboBox QAbstractItemView {{
    background: {look.card}; color: {look.ink}; border: 1px solid {look.hairline};
    selection-background-color: {look.band_wash}; selection-color: {look.ink};
}}
QComboBox QAbstractItemView::item {{ padding: 3px 6px; }}
QComboBox QAbstractItemView::item:selected {{ background: {look.band_wash}; color: {look.ink}; }}
QComboBox QAbstractItemView::item:disabled {{ color: {look.soft}; }}
QMenu {{ background: {look.card}; border: 1px solid {look.hairline}; padding: 4px; menu-scrollable: 1; }}
QMenu::item {{ padding: 4px 20px 4px 12px; }}
QMenu::item:selected {{ background: {look.band_wash}; }}
QMenu::item:disabled {{ color: {look.soft}; }}
QPushButton {{
    background: {look.field}; border: 1px solid {look.hairline}; border-radius: 4px;
    padding: 3px 10px; min-height: 18px;
}}
QPushButton:hover {{ border-color: {look.soft}; }}
QPushButton:focus {{ border-color: {look.ink}; }}
QPushButton[role="bare"] {{
    background: transparent; border-color: transparent; text-align: left; padding: 2px 0; font-weight: bold;
}}
QPushButton[role="bare"]:focus {{ border-color: {look.ink}; }}
QPushButton[role="icon"] {{ background: transparent; border-color: transparent; padding: 1px 4px; }}
QPushButton[role="icon"]:hover {{ border-color: {look.hairline}; }}
QPushButton[role="icon"]:focus {{ border-color: {look.ink}; }}
QPushButton[role="chip"] {{ border-radius: 11px; padding: 1px 8px; font-size: {SIZES["small"]}px; }}
QPushButton:disabled {{ color: {look.soft}; }}
QFrame[role="problem"] {{ background: {look.fails_wash}; border: 1px solid transparent; border-radius: 6px; }}
QFrame[role="problem"]:focus {{ border-color: {look.ink}; }}
QFrame[role="over"] {{ background: {look.card}; border: 1px solid {look.hairline}; border-radius: 6px; }}
QFrame[role="rule"] {{ background: {look.hairline}; border: none; max-height: 1px; min-height: 1px; }}
QScrollArea {{ background: transparent; border: none; }}
QScrollBar:vertical {{ background: transparent; width: 8px; margin: 0; }}
QScrollBar::handle:vertical {{ background: {look.hairline}; border-radius: 4px; min-height: 24px; }}
QScrollBar::add-line:vertical, QScrollBar::sub-line:vertical {{ height: 0; }}
QScrollBar::add-page:vertical, QScrollBar::sub-page:vertical {{ background: transparent; }}
QToolTip {{ background: {look.card}; color: {look.ink}; border: 1px solid {look.hairline}; }}
"""

"""The order in which Tab goes through fields that are made late. Knows no fields."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLayout, QWidget


def tab_through(first: QWidget, container: QWidget) -> None:
    """Let Tab go from `first` through all controls of a container, as they stand in its layouts."""
    for control in controls(container):
        QWidget.setTabOrder(first, control)
        first = control


def tab_in_order(container: QWidget) -> None:
    """Let Tab go through the controls of a container as they stand in its layouts."""
    for first, second in pairwise(controls(container)):
        QWidget.setTabOrder(first, second)


def controls(widget: QWidget) -> Iterator[QWidget]:
    """What Tab can reach in a widget, as it stands in its layouts."""
    if widget.focusPolicy() & Qt.FocusPolicy.TabFocus:
        yield widget
    elif (layout := widget.layout()) is not None:
        yield from _in_layout(layout)


def _in_layout(layout: QLayout) -> Iterator[QWidget]:
    for number in range(layout.count()):
        item = layout.itemAt(number)
        if item is None:
            continue
        if isinstance(inner := item.layout(), QLayout):
            yield from _in_layout(inner)
        elif isinstance(widget := item.widget(), QWidget):
            yield from controls(widget)

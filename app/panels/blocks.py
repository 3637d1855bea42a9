"""Blocks that several panels show: rows of figures, cards of problems. Change no plan."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent, QMouseEvent
from PySide6.QtWidgets import QFrame, QGridLayout, QHBoxLayout, QLabel, QVBoxLayout, QWidget

from app.look import SIGNS, Look, Verdict
from app.panels.figures import Row
from app.panels.style import plain_label, readable, set_text, tooltip
from feedlib import Problem

MOST_PROBLEMS = 12


class FigureBlock(QWidget):
    """Figures, each with its name; only texts change while the rows stay the same."""

    def __init__(self) -> None:
        super().__init__()
        self._head = plain_label(role="soft")
        self._rows: list[tuple[QLabel, QLabel]] = []
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(8)
        self._grid.setVerticalSpacing(3)
        self._grid.setColumnStretch(1, 1)
        self._grid.addWidget(self._head, 0, 0, 1, 2)

    def show_rows(self, head: str, rows: Sequence[Row]) -> None:
        """Show these figures."""
        self.set_head(head)
        while len(self._rows) < len(rows):
            self._add()
        for number, (name, value) in enumerate(self._rows):
            there = number < len(rows)
            if there:
                row = rows[number]
                if row.name != name.text():
                    name.setText(row.name)
                    name.setToolTip(tooltip(row.meaning))
                if row.value != value.text():
                    value.setText(row.value)
                    value.setAccessibleName(f"{row.name} {row.value}".strip())
            if there == name.isHidden():
                name.setVisible(there)
                value.setVisible(there)

    def set_head(self, head: str) -> None:
        """Show another head over the same figures."""
        set_text(self._head, head)

    def _add(self) -> None:
        name, value = plain_label(role="soft"), plain_label()
        for label in (name, value):
            # One line each: no height that depends on the width, so a new text moves nothing.
            label.setWordWrap(False)
            self._grid.addWidget(label, len(self._rows) + 1, 0 if label is name else 1)
        value.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        name.setMinimumWidth(96)
        self._rows.append((name, value))


class ProblemCard(QFrame):
    """One problem: its sign, what is wrong, what to do. `clicked` where it leads somewhere."""

    clicked = Signal()

    def __init__(self, problem: Problem, look: Look, *, where: str = "", leads: bool = False) -> None:
        super().__init__()
        self.setProperty("role", "problem")
        self._leads = leads
        state: Verdict = "fails" if problem.stops else "near"
        text = f"{where}: {problem.text}" if where else problem.text
        sign = plain_label(SIGNS[state], "strong")
        sign.setWordWrap(False)
        sign.setFixedWidth(14)
        sign.setStyleSheet(f"color: {readable(look, look.verdict(state), look.fails_wash)}")
        row = QHBoxLayout(self)
        row.setContentsMargins(8, 6, 8, 6)
        row.setSpacing(4)
        row.addWidget(sign, 0, Qt.AlignmentFlag.AlignTop)
        words = QVBoxLayout()
        words.setSpacing(1)
        words.addWidget(plain_label(text))
        words.addWidget(plain_label(problem.advice, "small"))
        row.addLayout(words, 1)
        self.setAccessibleName(f"{text} {problem.advice}")
        if leads:
            self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
            self.setCursor(Qt.CursorShape.PointingHandCursor)

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        inside = self.rect().contains(event.position().toPoint())
        if self._leads and inside and event.button() == Qt.MouseButton.LeftButton:
            self.clicked.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if self._leads and event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space):
            self.clicked.emit()
        else:
            super().keyPressEvent(event)


class ProblemBlock(QWidget):
    """Problems as cards, made anew only when they are others. `chosen`(part id) where a card leads to a part."""

    chosen = Signal(str)

    def __init__(self, look: Look, *, leads: bool) -> None:
        super().__init__()
        self._look, self._leads = look, leads
        self._shown: tuple[tuple[Problem, str], ...] = ()
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setSpacing(6)
        self.hide()

    def set_look(self, look: Look) -> None:
        """Draw with another look."""
        self._look = look
        shown, self._shown = self._shown, ()
        self.show_problems(shown)

    def show_problems(self, problems: Sequence[tuple[Problem, str]]) -> None:
        """Show problems, each with the name of its part or an empty text."""
        if tuple(problems) == self._shown:
            return
        self._shown = tuple(problems)
        while (item := self._layout.takeAt(0)) is not None:
            widget = item.widget()
            if widget is not None:
                widget.hide()
                widget.deleteLater()
        for problem, where in self._shown[:MOST_PROBLEMS]:
            card = ProblemCard(problem, self._look, where=where, leads=self._leads and problem.part_id is not None)
            if problem.part_id is not None:
                card.clicked.connect(lambda part_id=problem.part_id: self.chosen.emit(part_id))
            self._layout.addWidget(card)
        if (more := len(self._shown) - MOST_PROBLEMS) > 0:
            self._layout.addWidget(plain_label(f"and {more} more", "soft"))
        self.setVisible(bool(self._shown))


def rule() -> QFrame:
    """A hairline between two sections."""
    line = QFrame()
    line.setProperty("role", "rule")
    return line

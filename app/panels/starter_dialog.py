"""The dialog that begins with a starter: which one, at what frequency, for what antennas, of which cables."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QLabel,
    QLineEdit,
    QListWidget,
    QVBoxLayout,
    QWidget,
)

from app.editing.edits import new_plan
from app.editing.entry import EntryError, read_quantity
from app.editing.quarter_wave import NamedCable
from app.editing.starters import STARTERS, Measure, Starter
from app.look import Look, font, palette_of
from app.panels.shelf import by_impedance, offer, stocked
from feedlib import PlanError
from feedlib.plan import Plan

FIRST_FEEDER, FIRST_MATCH = "RG-213/U", "RG-11A/U"


class StarterDialog(QDialog):
    """Asks what a starter needs; `plan` is the harness when it was accepted."""

    def __init__(self, parent: QWidget, look: Look, measure: Measure, frequency_hz: float) -> None:
        super().__init__(parent)
        self.setWindowTitle("Begin with a starter")
        self.setPalette(palette_of(look))
        self.plan: Plan | None = None
        self._measure = measure
        self.starters = QListWidget()
        self.starters.addItems([s.label for s in STARTERS])
        self.starters.setAccessibleName("Starters")
        self.frequency = QLineEdit(f"{frequency_hz / 1e6:.9g} MHz")
        self.impedance = QLineEdit("50 Ω")
        self.feeder, self.match = _cables(FIRST_FEEDER), _cables(FIRST_MATCH)
        self.refusal = QLabel()
        self.refusal.setTextFormat(Qt.TextFormat.PlainText)
        self.refusal.setWordWrap(True)
        self.refusal.setMinimumHeight(34)  # so that nothing moves when there is something to say
        self.refusal.setFont(font("small"))
        self.refusal.setStyleSheet(f"color: {look.fails}")
        form = QFormLayout()
        self.rows: dict[str, QWidget] = {
            "frequency": self.frequency,
            "impedance": self.impedance,
            "feeder cable": self.feeder,
            "match cable": self.match,
        }
        names = ("Frequency", "Each antenna", "Feeder and legs", "Quarter waves")
        for words, field in zip(names, self.rows.values(), strict=True):
            field.setAccessibleName(words)
            form.addRow(f"{words}:", field)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel)
        self.begin = buttons.button(QDialogButtonBox.StandardButton.Ok)
        self.begin.setText("Begin")
        buttons.accepted.connect(self.accept)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.addWidget(QLabel("A small harness, cut for your frequency and cables, to go on from."))
        layout.addWidget(self.starters, 1)
        layout.addLayout(form)
        layout.addWidget(self.refusal)
        layout.addWidget(buttons)
        self.starters.currentRowChanged.connect(self._chosen)
        self.starters.itemDoubleClicked.connect(self.accept)
        self.starters.setCurrentRow(0)
        self.resize(440, 520)

    def starter(self) -> Starter:
        """The chosen one."""
        return STARTERS[max(0, self.starters.currentRow())]

    def accept(self) -> None:
        try:
            self.plan = self.starter().build(
                read_quantity(self.frequency.text(), unit="Hz", bare_unit="MHz"),
                read_quantity(self.impedance.text(), unit="ohm"),
                feeder_cable=_named(self.feeder),
                match_cable=_named(self.match),
                measure=self._measure,
            )
        except (EntryError, PlanError) as error:
            self.refusal.setText(f"✗ {error}")
            return
        super().accept()

    def _chosen(self) -> None:
        asks = self.starter().asks
        for name, field in self.rows.items():
            field.setEnabled(name in asks)
        self.refusal.clear()


def _cables(first: str) -> QComboBox:
    """A choice of the catalogue's cables that have loss data, grouped by impedance."""
    box = QComboBox()
    for impedance, types in by_impedance():
        for cable in types:
            if cable.offered:
                box.addItem(f"{impedance}  {offer(cable)}", cable.type)
    box.setCurrentIndex(max(0, box.findData(first)))
    return box


def _named(box: QComboBox) -> NamedCable:
    name = str(box.currentData())
    return name, stocked(new_plan(), name).cables[name]

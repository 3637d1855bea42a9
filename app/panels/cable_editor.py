"""The choice of a coax's cable: those in the plan, then the catalogue's types. Changes no plan."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import Qt
from PySide6.QtGui import QStandardItemModel

from app.panels.around import Around
from app.panels.controls import ChoiceBox
from app.panels.editors import FieldEditor
from app.panels.shelf import by_impedance, caution, figures_text, offer
from app.panels.style import tooltip
from feedlib.catalogue import quality_sentence


class CableEditor(FieldEditor):
    """A cable by name; a name of the catalogue may be entered that the plan does not have yet."""

    def __init__(self, label: str) -> None:
        self.box = ChoiceBox(label)
        super().__init__(label, self.box, wide=True)
        self._listed: tuple[str, ...] | None = None
        self.box.activated.connect(self._chosen)
        self.box.restored.connect(self._drop)

    def show_value(self, value: Any, around: Around) -> None:
        names = tuple(around.plan.cables)
        listed = names if value in names else (*names, value)
        if listed != self._listed:
            self._list(listed, around)
        self.box.setCurrentIndex(self.box.findData(value))
        cable = around.plan.cables.get(value)
        if cable is None:
            self.say("This cable is not in the plan.")
        else:
            self.say("\n".join(filter(None, (figures_text(cable, around.frequency_hz), caution(value, cable)))))

    def _list(self, names: tuple[str, ...], around: Around) -> None:
        self._listed = names
        self.box.clear()
        for name in names:
            self.box.addItem(name, name)
        for impedance, types in by_impedance():
            self._head(f"{impedance}, from the catalogue")
            for cable in types:
                if cable.type in names:
                    continue
                self.box.addItem(offer(cable), cable.type)
                last = self.box.count() - 1
                self.box.setItemData(last, tooltip(quality_sentence(cable)), Qt.ItemDataRole.ToolTipRole)
                if not cable.offered:
                    self._disable(last)
        self.box.view().setMinimumWidth(self.box.view().sizeHintForColumn(0) + 24)

    def _head(self, text: str) -> None:
        self.box.addItem(text)
        self._disable(self.box.count() - 1)

    def _disable(self, index: int) -> None:
        model = self.box.model()
        assert isinstance(model, QStandardItemModel)
        model.item(index).setEnabled(False)

    def _chosen(self, index: int) -> None:
        self._enter(self.box.itemData(index))

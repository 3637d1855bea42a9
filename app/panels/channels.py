"""The plan's channels as a list: a name and a frequency each."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QVBoxLayout, QWidget

from app.editing import edits
from app.editing.entry import EntryError, read_quantity
from app.editing.wording import editable_quantity, field_unit
from app.look import SIGNS
from app.panels.controls import LineField
from app.panels.style import plain_label, set_text
from app.store import Store
from feedlib.errors import PlanError
from feedlib.plan import Channel, Plan
from feedlib.schema import specs


class ChannelList(QWidget):
    """The channels, each in a row, and a button for one more at the mark."""

    def __init__(self, store: Store) -> None:
        super().__init__()
        self._store = store
        self._rows: list[ChannelRow] = []
        self._add = QPushButton("Add a channel at the mark")
        self._add.setAccessibleName("Add a channel at the mark")
        self._add.clicked.connect(self._added)
        self._list = QVBoxLayout()
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(6)
        layout.addLayout(self._list)
        layout.addWidget(self._add)

    def fill(self, plan: Plan) -> None:
        """Show a plan's channels."""
        while len(self._rows) < len(plan.channels):
            row = ChannelRow()
            row.renamed.connect(partial(self._change, row))
            row.retuned.connect(partial(self._change, row))
            row.removed.connect(partial(self._remove, row))
            self._rows.append(row)
            self._list.addWidget(row)
        for number, row in enumerate(self._rows):
            row.setVisible(number < len(plan.channels))
            if number < len(plan.channels):
                row.fill(plan.channels[number])

    def _change(self, row: ChannelRow, channel: Channel) -> None:
        number = self._rows.index(row)
        channels = self._store.plan.channels
        self._try(row, f"Change channel {channel.name}", (*channels[:number], channel, *channels[number + 1 :]))

    def _remove(self, row: ChannelRow) -> None:
        number = self._rows.index(row)
        channels = self._store.plan.channels
        self._try(row, f"Take away channel {channels[number].name}", channels[:number] + channels[number + 1 :])

    def _added(self) -> None:
        plan = self._store.plan
        taken = {c.name for c in plan.channels}
        name = next(n for n in (f"channel {k}" for k in range(1, len(taken) + 2)) if n not in taken)
        channel = Channel(name=name, hz=plan.band.marked_hz)
        self._store.edit(f"Add {name}", replace(plan, channels=(*plan.channels, channel)))

    def _try(self, row: ChannelRow, text: str, channels: tuple[Channel, ...]) -> None:
        try:
            plan = replace(self._store.plan, channels=channels)
        except PlanError as error:
            row.refuse(error.reason[:1].upper() + error.reason[1:] + ".")
        else:
            self._store.edit(text, plan)


class ChannelRow(QWidget):
    """One channel; each signal carries what it would be."""

    renamed = Signal(object)
    retuned = Signal(object)
    removed = Signal()

    def __init__(self) -> None:
        super().__init__()
        self._channel: Channel | None = None
        self.name, self.frequency = LineField("Channel name"), LineField("Channel frequency")
        self.frequency.setFixedWidth(100)
        self.remove = QPushButton("×")
        self.remove.setFixedWidth(26)
        self.remove.setProperty("role", "icon")
        self._fault = plain_label(role="fault")
        self._fault.hide()
        line = QHBoxLayout()
        line.setSpacing(4)
        line.addWidget(self.name, 1)
        line.addWidget(self.frequency)
        line.addWidget(self.remove)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(2)
        layout.addLayout(line)
        layout.addWidget(self._fault)
        self.name.typed.connect(self._name_typed)
        self.frequency.typed.connect(self._frequency_typed)
        self.remove.clicked.connect(self.removed)
        for field in (self.name, self.frequency):
            field.restored.connect(self._restore)

    def fill(self, channel: Channel) -> None:
        """Show a channel; what is being typed, and what was refused, stays."""
        same, self._channel = channel == self._channel, channel
        typing = any(f.hasFocus() and f.isModified() for f in (self.name, self.frequency))
        if not typing and not (same and not self._fault.isHidden()):
            self._restore()

    def refuse(self, sentence: str) -> None:
        """Say why the plan did not take it."""
        set_text(self._fault, f"{SIGNS['fails']} {sentence}")
        self._fault.show()

    def _restore(self) -> None:
        if self._channel is None:
            return
        self._fault.hide()
        self.name.show_text(self._channel.name)
        self.frequency.show_text(editable_quantity(self._channel.hz, unit="Hz"))
        self.frequency.setAccessibleName(f"Frequency of {self._channel.name}")
        self.remove.setAccessibleName(f"Take away {self._channel.name}")

    def _name_typed(self, text: str) -> None:
        assert self._channel is not None
        self._fault.hide()
        name = edits.plain_text(text).strip()
        if name:
            self.renamed.emit(replace(self._channel, name=name))
        else:
            self.refuse("A channel wants a name.")

    def _frequency_typed(self, text: str) -> None:
        assert self._channel is not None
        self._fault.hide()
        try:
            hz = read_quantity(text, unit="Hz", bare_unit=field_unit("Hz"))
            self.retuned.emit(replace(self._channel, hz=hz))
        except EntryError as error:
            self.refuse(str(error))
        except PlanError as error:
            self.refuse(f"{specs(Channel)['hz'].label} {error.reason}.")

"""Puts parts on the bench: where they were dropped, into a join, behind the selected part, or at a pulled join."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from pathlib import Path
from typing import Protocol

from PySide6.QtCore import QObject, QPointF
from PySide6.QtWidgets import QWidget

from app.bench.pictures import PICTURES
from app.editing import edits
from app.editing.measured_file import read_touchstone_file
from app.reporting import say
from app.store import Store
from feedlib import FeedError, Plan
from feedlib.parts import Antenna, AntennaImpedance, Measured, Part
from feedlib.plan import Join, Port

APART = 56.0
"""Room between the bodies of two parts that are put side by side."""


class Entry(Protocol):
    """What can be put on the bench."""

    @property
    def label(self) -> str: ...
    @property
    def make(self) -> Callable[[Plan], tuple[Plan, Part]]: ...


class Placing(QObject):
    """Edits that put a part on the bench and tie it up."""

    def __init__(self, store: Store, entries: Mapping[str, Entry], window: QWidget) -> None:
        super().__init__(window)
        self.store, self.entries, self.window = store, entries, window

    def put(self, key: str, at: QPointF, join: Join | None) -> None:
        """Put a new part at a place; on a join it is spliced in."""
        plan, part = self.entries[key].make(self.store.plan)
        self._put(plan, part, at, join)

    def put_file(self, path: Path, at: QPointF, join: Join | None, onto: str | None = None) -> None:
        """Put a measured part, made of a Touchstone file, at a place; on an antenna it becomes its impedance."""
        plan = self.store.plan
        antenna = plan.placed(onto) if onto is not None and isinstance(plan.placed(onto).part, Antenna) else None
        try:
            file = read_touchstone_file(path)
        except FeedError as error:
            say(self.window, "The file cannot be used", str(error))
            return
        if antenna is not None and file.data.ports == 1:
            changed = edits.changed_part(plan, antenna.id, impedance=AntennaImpedance(touchstone=file))
            self.store.edit(f"Measured impedance of {antenna.name}", changed)
            self.store.select((antenna.id,))
        else:
            self._put(plan, Measured(touchstone=file), at, join)

    def put_behind(self, key: str, middle: QPointF) -> None:
        """Put a new part behind the selected one and join it there; in the middle when none is selected."""
        plan, part = self.entries[key].make(self.store.plan)
        chosen = self.store.selected[0] if len(self.store.selected) == 1 else None
        port = self._free_port(chosen) if chosen is not None else None
        join = self._join_behind(chosen) if chosen is not None and port is None and part.ports >= 2 else None
        if join is not None:
            places = [self.store.plan.placed(p.part).at for p in join]
            between = QPointF(sum(x for x, _ in places) / 2, sum(y for _, y in places) / 2)
            self._put(plan, part, between, join)
        elif port is None:
            self._put(plan, part, middle, None)
        else:
            self._put_at_port(plan, part, None, port)

    def put_at_port(self, key: str, at: QPointF, port: Port) -> None:
        """Put a new part where a join was pulled to, joined to the port that it was pulled from."""
        plan, part = self.entries[key].make(self.store.plan)
        self._put_at_port(plan, part, at, port)

    def delete(self, join: Join | None) -> None:
        """Take the selected parts away, or a join when no part is selected."""
        selected = self.store.selected
        if selected:
            plan = self.store.plan
            what = plan.placed(selected[0]).name if len(selected) == 1 else f"{len(selected)} parts"
            self.store.edit(f"Delete {what}", edits.removed(plan, selected))
        elif join is not None:
            self.store.edit(f"Take join {join[0]} – {join[1]} away", edits.unjoined(self.store.plan, join))

    def _put(self, plan: Plan, part: Part, at: QPointF, join: Join | None) -> None:
        plan, part_id = edits.added(plan, part, _snapped(at))
        if join is not None and part.ports >= 2:
            plan = edits.spliced(plan, join, part_id)
        self.store.edit(f"Add {part.LABEL}", plan)
        self.store.select((part_id,))

    def _put_at_port(self, plan: Plan, part: Part, at: QPointF | None, port: Port) -> None:
        plan, part_id = edits.added(plan, part, (0.0, 0.0))
        own = Port(part_id, 1)
        if at is None:
            at = self._beside(plan, part_id, port)
        plan = edits.moved(plan, {part_id: _snapped(at)})
        if edits.why_no_join(plan, port, own) is None:
            plan = edits.joined(plan, port, own)
        self.store.edit(f"Add {part.LABEL}", plan)
        self.store.select((part_id,))

    @staticmethod
    def _beside(plan: Plan, part_id: str, port: Port) -> QPointF:
        """A place for a part at the side to which a port looks."""
        neighbour, placed = plan.placed(port.part), plan.placed(part_id)
        picture = PICTURES[neighbour.part.KIND]
        body, anchor = picture.body(neighbour, plan), picture.ports(neighbour, plan)[port.number - 1]
        own = PICTURES[placed.part.KIND].body(placed, plan)
        side = 1 if anchor.x() >= body.center().x() else -1
        spread = 2.6 * anchor.y() if neighbour.part.ports > 2 else anchor.y()
        x = neighbour.at[0] + anchor.x() + side * (APART + own.width() / 2)
        return QPointF(x, neighbour.at[1] + spread)

    def _join_behind(self, part_id: str) -> Join | None:
        """The join at the far port of a part with one or two ports."""
        ports = self.store.plan.placed(part_id).ports()
        if len(ports) > 2:
            return None
        return next((join for join in self.store.plan.joins if ports[-1] in join), None)

    def _free_port(self, part_id: str) -> Port | None:
        """The first free port away from the radio: the last port of a two-port, else the lowest number above 1."""
        ports = self.store.plan.placed(part_id).ports()
        free = [p for p in (*ports[1:], ports[0]) if self.store.plan.mate(p) is None]
        return free[0] if free else None


def _snapped(at: QPointF) -> tuple[float, float]:
    return round(at.x() / 12) * 12.0, round(at.y() / 12) * 12.0

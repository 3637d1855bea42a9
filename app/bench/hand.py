"""What the hand does with parts that are there: copy, cut, paste, the same leg again, tidy, walk from part to part."""

from __future__ import annotations

from PySide6.QtCore import QObject, QPointF
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QWidget

from app.bench.pictures import PICTURES
from app.editing import edits
from app.editing.legs import Direction, copied_text, neighbour, pasted, same_leg_again
from app.editing.tidy import PortSides, Side, Sizes, tidied
from app.reporting import say
from app.store import Store
from feedlib import Plan, PlanError


class Hand(QObject):
    """Edits of the selected parts; `window` is where refusals are shown."""

    def __init__(self, store: Store, window: QWidget) -> None:
        super().__init__(window)
        self.store, self.window = store, window

    def copy(self) -> None:
        """Put the selected parts on the clipboard as text, which any bench, and any editor, can take."""
        if self.store.selected:
            QGuiApplication.clipboard().setText(copied_text(self.store.plan, self.store.selected))

    def cut(self) -> None:
        """Copy the selected parts and take them away."""
        if self.store.selected:
            self.copy()
            plan, chosen = self.store.plan, self.store.selected
            what = plan.placed(chosen[0]).name if len(chosen) == 1 else f"{len(chosen)} parts"
            self.store.edit(f"Cut {what} out", edits.removed(plan, chosen))

    def paste(self, at: QPointF) -> None:
        """Put the clipboard's parts about a place on the bench."""
        text = QGuiApplication.clipboard().text()
        if not text.strip():
            return
        try:
            plan, new = pasted(self.store.plan, text, (at.x(), at.y()))
        except PlanError as error:
            say(self.window, "Nothing to paste", f"What is on the clipboard cannot be pasted: {error}.")
            return
        self.store.edit(f"Paste {len(new)} parts" if len(new) != 1 else "Paste a part", plan)
        self.store.select(new)

    def again(self) -> None:
        """The selected leg once more, on a free port of the junction that it hangs at."""
        if not self.store.selected:
            return
        try:
            plan, new = same_leg_again(self.store.plan, self.store.selected)
        except PlanError as error:
            say(self.window, "No leg to repeat", f"{error}.")
            return
        self.store.edit("The same leg again", plan)
        self.store.select(new)

    def tidy(self) -> None:
        """Lay the harness out from the radio to the antennas."""
        self.store.edit("Tidy the bench", tidied(self.store.plan, *drawn(self.store.plan)))

    def walk(self, direction: Direction) -> None:
        """Select the next part along the signal path, or the radio when nothing is selected."""
        plan, selected = self.store.plan, self.store.selected
        if not selected:
            first = next((p.id for p in plan.parts if p.part.KIND == "radio"), plan.parts[0].id if plan.parts else None)
        else:
            first = neighbour(plan, selected[0], direction)
        if first is not None:
            self.store.select((first,))


def drawn(plan: Plan) -> tuple[Sizes, PortSides]:
    """How large each part of a plan is drawn, and where its ports are."""
    sizes, sides = {}, {}
    for placed in plan.parts:
        picture = PICTURES[placed.part.KIND]
        body = picture.body(placed, plan)
        sizes[placed.id] = (body.width(), body.height())
        for port, anchor in zip(placed.ports(), picture.ports(placed, plan), strict=True):
            side: Side = "left" if anchor.x() < 0 else "right"
            sides[port] = (side, anchor.y())
    return sizes, sides

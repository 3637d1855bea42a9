"""The bench's view: turns the mouse, the wheel, keys and drops into gestures and edits."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QPoint, QPointF, QRectF, Qt, Signal
from PySide6.QtGui import (
    QDragEnterEvent,
    QDragMoveEvent,
    QDropEvent,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QResizeEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QGraphicsView, QWidget

from app.bench.gestures import BoxSelect, Gesture, MoveParts, PullJoin, TurnEnd, hover_join
from app.bench.items import PartItem
from app.bench.pictures.coax import WIDEST
from app.bench.scene import BenchScene
from app.editing import edits
from app.editing.drags import PART_MIME
from app.editing.wording import wheel_step_m
from app.look import Look
from app.store import Store
from feedlib.parts import Coax
from feedlib.plan import Join, Port

SMALLEST, LARGEST = 0.08, 4.0
WALKS = {
    Qt.Key.Key_Left: "left",
    Qt.Key.Key_Right: "right",
    Qt.Key.Key_Up: "up",
    Qt.Key.Key_Down: "down",
}


class BenchView(QGraphicsView):
    """Shows the bench and lets people work on it.

    part_dropped(key, point, join or None): an entry of the parts drawer was dropped. offer_asked(port, point, screen
    point): a join was pulled into the empty bench. walked(direction): an arrow key. field_asked(): Enter.
    """

    part_dropped = Signal(str, QPointF, object)
    files_dropped = Signal(list, QPointF)
    offer_asked = Signal(object, QPointF, QPoint)
    walked = Signal(str)
    field_asked = Signal()

    def __init__(self, store: Store, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.store = store
        self.bench = BenchScene(store, look, self)
        self.setScene(self.bench)
        self.setRenderHint(QPainter.RenderHint.Antialiasing)
        self.setFrameShape(QGraphicsView.Shape.NoFrame)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setTransformationAnchor(QGraphicsView.ViewportAnchor.NoAnchor)
        self.setViewportUpdateMode(QGraphicsView.ViewportUpdateMode.FullViewportUpdate)
        self.setSceneRect(QRectF(-50_000, -50_000, 100_000, 100_000))
        self.setCacheMode(QGraphicsView.CacheModeFlag.CacheBackground)
        self.setMouseTracking(True)
        self.setAcceptDrops(True)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName("Bench")
        self.setAccessibleDescription("The harness: parts, joins and what the wave does in them")
        self._gesture: Gesture | None = None
        self._pan: QPoint | None = None
        self._fitted = True
        store.file_changed.connect(self.fit)
        store.plan_changed.connect(self._drop_gesture)

    def set_look(self, look: Look) -> None:
        """Draw in another theme."""
        self.bench.set_look(look)
        self.resetCachedContent()

    def fit(self) -> None:
        """Show the whole harness, at 100 % at most."""
        self._fit_rect(self.bench.contents())
        self._fitted = True

    def fit_selection(self) -> None:
        """Show what is selected as large as is sensible."""
        rect = QRectF()
        for part_id in self.store.selected:
            rect = rect.united(self.bench.parts[part_id].sceneBoundingRect())
        if not rect.isEmpty():
            self._fit_rect(rect)
            self._fitted = False

    def _fit_rect(self, rect: QRectF) -> None:
        room = self.viewport().size()
        rect = rect.adjusted(-20, -16, 20, 16)
        scale = min(room.width() / rect.width(), room.height() / rect.height(), 1.25)
        self.resetTransform()
        self.scale(max(scale, SMALLEST), max(scale, SMALLEST))
        self.centerOn(rect.center())

    def zoom(self, factor: float, at: QPointF | None = None) -> None:
        """Zoom about a point of the viewport (its middle by default)."""
        at = at if at is not None else QPointF(self.viewport().rect().center())
        now = self.transform().m11()
        factor = min(max(now * factor, SMALLEST), LARGEST) / now
        before = self.mapToScene(at.toPoint())
        self.scale(factor, factor)
        after = self.mapToScene(at.toPoint())
        self.translate(after.x() - before.x(), after.y() - before.y())
        self._fitted = False

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        if self._fitted:
            self.fit()

    # --- the mouse ---

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if self._gesture is not None:
            self._cancel_gesture()
            return
        if event.button() == Qt.MouseButton.MiddleButton:
            self._pan = event.position().toPoint()
            self.viewport().setCursor(Qt.CursorShape.ClosedHandCursor)
        elif event.button() == Qt.MouseButton.LeftButton:
            more = bool(event.modifiers() & (Qt.KeyboardModifier.ShiftModifier | Qt.KeyboardModifier.ControlModifier))
            self._begin(self.mapToScene(event.position().toPoint()), more)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        self.mousePressEvent(event)  # fast clicking is clicking

    def _cancel_gesture(self) -> None:
        gesture, self._gesture = self._gesture, None
        if gesture is not None:
            gesture.cancel()

    def _drop_gesture(self) -> None:
        """The plan was changed by something else than the gesture."""
        gesture, self._gesture = self._gesture, None
        if gesture is not None:
            gesture.drop()

    def _begin(self, at: QPointF, more: bool) -> None:
        port = self.bench.port_under(at)
        part = self.bench.part_under(at)
        if port is not None and (self.store.plan.mate(port) is None or part is None):
            self._gesture = PullJoin(self.bench, at, port, self._offer)
            return
        if part is not None:
            part_id = part.shown.placed.id
            selected = self.store.selected
            at_end = part.selected and self._on_swell_end(part, at)
            if more:
                chosen = tuple(s for s in selected if s != part_id) if part_id in selected else (*selected, part_id)
                self.store.select(chosen)
            elif part_id not in selected:
                self.store.select((part_id,))
            if at_end and part.selected:
                self._gesture = TurnEnd(self.bench, at, part_id)
            elif part_id in self.store.selected:
                self._gesture = MoveParts(self.bench, at, part_id)
            return
        join = self.bench.join_under(at)
        if join is not None:
            self.store.select(())
            self.bench.select_join(join)
            return
        keep = self.store.selected if more else ()
        self._gesture = BoxSelect(self.bench, at, keep)  # before what was selected is let go
        self.store.select(keep)
        self.bench.select_join(None)

    @staticmethod
    def _on_swell_end(part: PartItem, at: QPointF) -> bool:
        """Whether a point is on the end of a coax, where its length can be dragged; the longest are not to scale."""
        if not isinstance(part.shown.placed.part, Coax) or part.body.width() >= WIDEST:
            return False
        here = part.mapFromScene(at)
        end = min(12.0, part.body.width() / 4)
        return abs(here.y()) <= part.body.height() / 2 and abs(here.x()) >= part.body.width() / 2 - end

    def _offer(self, port: Port, at: QPointF, screen: QPoint) -> None:
        self.offer_asked.emit(port, at, screen)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        here = event.position().toPoint()
        at = self.mapToScene(here)
        if self._pan is not None:
            shift = here - self._pan
            self._pan = here
            self.translate(shift.x() / self.transform().m11(), shift.y() / self.transform().m22())
            self._fitted = False
        elif self._gesture is not None and not event.buttons() & Qt.MouseButton.LeftButton:
            self._cancel_gesture()  # the release went to another window
        elif self._gesture is not None:
            gesture, self._gesture = self._gesture, None  # its own edits do not end it
            gesture.move(at, bool(event.modifiers() & Qt.KeyboardModifier.AltModifier))
            self._gesture = gesture
        else:
            part = self.bench.part_under(at)
            self.store.hover(part.shown.placed.id if part is not None else None)
            hover_join(self.bench, at)
            port = self.bench.port_under(at)
            over = Qt.CursorShape.CrossCursor if port is not None else Qt.CursorShape.ArrowCursor
            if port is None and part is not None and part.selected and self._on_swell_end(part, at):
                over = Qt.CursorShape.SizeHorCursor
            self.viewport().setCursor(over)

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.MiddleButton:
            self._pan = None
            self.viewport().unsetCursor()
        elif self._gesture is not None and event.button() == Qt.MouseButton.LeftButton:
            gesture, self._gesture = self._gesture, None
            at = self.mapToScene(event.position().toPoint())
            gesture.release(at, event.globalPosition().toPoint())

    def leaveEvent(self, event: QEvent) -> None:
        self.store.hover(None)
        super().leaveEvent(event)

    def wheelEvent(self, event: QWheelEvent) -> None:
        notches = event.angleDelta().y() / 120 or event.angleDelta().x() / 120  # Alt turns the wheel sideways
        part = self.bench.part_under(self.mapToScene(event.position().toPoint()))
        if part is not None and part.selected and isinstance(part.shown.placed.part, Coax):
            self.turn_length(notches, event.modifiers())
        else:
            self.zoom(1.2**notches, event.position())
        event.accept()

    def turn_length(self, notches: float, modifiers: Qt.KeyboardModifier = Qt.KeyboardModifier.NoModifier) -> None:
        """Turn the selected coax by notches: Shift ten times as far, Alt a tenth."""
        plan = self.store.plan
        chosen = [p for p in plan.parts if p.id in self.store.selected and isinstance(p.part, Coax)]
        if not chosen:
            return
        assert isinstance(chosen[0].part, Coax)
        cable = plan.cables.get(chosen[0].part.cable)
        factor = cable.velocity_factor if cable is not None else 1.0
        step_m = wheel_step_m(frequency_hz=plan.band.marked_hz, velocity_factor=factor)
        if modifiers & Qt.KeyboardModifier.ShiftModifier:
            step_m *= 10
        if modifiers & Qt.KeyboardModifier.AltModifier:
            step_m /= 10
        ids = [p.id for p in chosen]
        what = chosen[0].name if len(chosen) == 1 else f"{len(chosen)} sections"
        verb = "Lengthen" if notches > 0 else "Shorten"
        plan = edits.turned_length(plan, ids, notches * step_m)
        self.store.edit(f"{verb} {what}", plan, merge=f"length {' '.join(ids)}")

    # --- keys ---

    def keyPressEvent(self, event: QKeyEvent) -> None:
        key = event.key()
        if key == Qt.Key.Key_Escape:
            if self._gesture is not None:
                self._cancel_gesture()
            else:
                self.store.select(())
                self.bench.select_join(None)
        elif key in WALKS and not event.modifiers() & ~Qt.KeyboardModifier.KeypadModifier:
            self.walked.emit(WALKS[Qt.Key(key)])
        elif key in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.field_asked.emit()
        elif key in (Qt.Key.Key_Plus, Qt.Key.Key_Equal):
            self.turn_length(1, event.modifiers() & Qt.KeyboardModifier.AltModifier)
        elif key in (Qt.Key.Key_Minus, Qt.Key.Key_Underscore):
            self.turn_length(-1, event.modifiers() & Qt.KeyboardModifier.AltModifier)
        else:
            super().keyPressEvent(event)

    # --- drops from the parts drawer ---

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        if event.mimeData().hasFormat(PART_MIME) or event.mimeData().hasUrls():
            event.acceptProposedAction()

    def dragMoveEvent(self, event: QDragMoveEvent) -> None:
        hover_join(self.bench, self.mapToScene(event.position().toPoint()))
        event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        at = self.mapToScene(event.position().toPoint())
        if event.mimeData().hasFormat(PART_MIME):
            key = bytes(event.mimeData().data(PART_MIME).data()).decode(errors="replace")
            join: Join | None = self.bench.join_under(at)
            self.part_dropped.emit(key, at, join)
        else:
            self.files_dropped.emit([u.toLocalFile() for u in event.mimeData().urls() if u.isLocalFile()], at)
        event.acceptProposedAction()

"""What every plot is: a header, a surface that follows the store, and the pointer on it; must not know any figure."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from matplotlib.artist import Artist
from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtWidgets import QHBoxLayout, QLabel, QSizePolicy, QVBoxLayout, QWidget

from app.look import Look, font, palette_of
from app.plots.canvas import Canvas, Pixel
from app.plots.letters import Letters
from app.plots.readout import Readout
from app.plots.words import Corners, Words
from app.store import Store
from feedlib import Answer, Plan

SETTLED_MS = 150


class Plot(QWidget):
    """One plot. A kind of plot says what it shows in `build`, `fill`, `artists`, `arrange` and `recolour`.

    pointer : where it is on the surface. whole_asked : the plot shall have the whole row, or give it back.
    """

    whole_asked = Signal()

    def __init__(self, store: Store, look: Look, *, title: str, words: Sequence[str] = ()) -> None:
        super().__init__()
        self.store, self.look, self.title = store, look, title
        self.word = words[0] if words else ""
        self._behind = True
        self.pointer: Pixel | None = None
        self._dragging = False
        self._hovering: str | None = None
        self.canvas = Canvas(self)
        self.canvas.setAccessibleName(title)
        self.figure = self.canvas.figure
        self.message = Letters(self.figure)
        self.message.set_anchor(0.5, 0.5)
        self.readout = Readout(self.figure, look)
        self._settle = QTimer(self)
        self._settle.setSingleShot(True)
        self._settle.setInterval(SETTLED_MS)
        self._settle.timeout.connect(self.settle)
        self._build_header(words)
        self.build()
        self._wear()
        self._listen()

    # What a kind of plot says

    def build(self) -> None:
        """Make the artists."""
        raise NotImplementedError

    def fill(self, plan: Plan, answer: Answer | None, *, settled: bool) -> bool:
        """Put the answer into the artists (none: empty them); whether what stands still has changed.

        settled : nothing has changed for a while, so that axes may give back room.
        """
        raise NotImplementedError

    def artists(self) -> Iterable[Artist]:
        """What moves, in the order in which it is drawn."""
        raise NotImplementedError

    def arrange(self, width_px: float, height_px: float) -> None:
        """Place what stands still for a size in screen pixels at 100 %."""
        raise NotImplementedError

    def recolour(self) -> None:
        """Wear `self.look`."""
        raise NotImplementedError

    def part_at(self, at: Pixel) -> str | None:
        """The part whose curve is at a point (device pixels)."""
        return None

    def read_at(self, at: Pixel) -> list[str]:
        """The lines of the readout at a point (device pixels); none where there is nothing to read."""
        return []

    def may_drag(self, at: Pixel) -> bool:
        """Whether a press there, beside any curve, begins a drag."""
        return False

    def drag_to(self, at: Pixel) -> None:
        """Someone drags to that place."""

    # What every plot does

    def set_look(self, look: Look) -> None:
        """Wear another look."""
        self.look = look
        self._wear()

    def show_whole(self, whole: bool) -> None:
        """Tell the header whether the plot has the whole row."""
        self.corners.setChecked(whole)

    def follow(self) -> None:
        """Bring the artists up to date when the plot is drawn next."""
        self._behind = True
        self.canvas.refresh()

    def settle(self) -> None:
        """Do at once what is put off until nothing has changed for a while."""
        self._settle.stop()
        if self._fill(settled=True):
            self.canvas.redraw()

    def prepare(self) -> bool:
        """Bring the artists up to date; whether what stands still has changed."""
        if not self._behind:
            return False
        self._behind = False
        self._settle.start()
        return self._fill(settled=False)

    def moving(self) -> Iterable[Artist]:
        """The animated artists, in the order in which they are drawn."""
        if self.message.get_text():
            self.message.set_position((self.figure.bbox.width / 2, self.figure.bbox.height / 2))
            yield self.message
            return
        yield from self.artists()
        if self.pointer is not None and (lines := self.read_at(self.pointer)):
            yield self.readout.beside(self.pointer, lines, self.canvas.scale)

    def names(self) -> dict[str, str]:
        """What people call the parts now, by id; the answer may still know a part by an older id."""
        return {placed.id: placed.name for placed in self.store.plan.parts}

    def nothing_to_show(self, why: str | None) -> None:
        """Say in the middle of the plot why it is empty; None: it is not."""
        self.message.set_text("" if why is None else f"Nothing to show: {why}")

    def pressed(self, at: Pixel) -> None:
        """The left button went down: select the part whose curve is there, or begin to drag."""
        part_id = self.part_at(at)
        if part_id is not None:
            self.store.select((part_id,))
        elif self.may_drag(at):
            self._dragging = True
            self.drag_to(at)

    def moved(self, at: Pixel) -> None:
        """The pointer is there: drag, or hover over the part whose curve is there."""
        self.pointer = at
        if self._dragging:
            self.drag_to(at)
        else:
            self._hover(self.part_at(at))
        self.canvas.refresh()

    def released(self) -> None:
        """The left button went up."""
        self._dragging = False

    def left(self) -> None:
        """The pointer is gone."""
        self.pointer = None
        self._hover(None)
        self.canvas.refresh()

    def _build_header(self, words: Sequence[str]) -> None:
        self.heading = QLabel(self.title)
        self.heading.setFont(font("head", bold=True))
        self.words = Words(words)
        self.words.show_chosen((self.word,))
        self.note = QLabel()
        self.note.setFont(font("small"))
        self.note.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.note.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
        self.corners = Corners("Take the whole row", "Give the row back")
        header = QHBoxLayout()
        header.setContentsMargins(14, 6, 8, 0)
        header.setSpacing(8)
        header.addWidget(self.heading)
        header.addWidget(self.words)
        header.addWidget(self.note, 1)
        header.addWidget(self.corners)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addLayout(header)
        column.addWidget(self.canvas, 1)
        self.setMinimumSize(240, 150)

    def _listen(self) -> None:
        self.store.answer_changed.connect(self.follow)
        self.store.held_changed.connect(self.follow)
        self.store.plan_changed.connect(self._renamed)
        self.store.selection_changed.connect(self.follow)
        self.store.hover_changed.connect(self.follow)
        self.words.chosen.connect(self._chosen)
        self.corners.clicked.connect(self._whole_asked)

    def _fill(self, *, settled: bool) -> bool:
        answer = self.store.answer
        self.nothing_to_show("cannot be solved yet" if answer is None else None)
        return self.fill(self.store.plan if answer is None else answer.plan, answer, settled=settled)

    def _wear(self) -> None:
        palette = palette_of(self.look)
        self.setPalette(palette)
        palette.setColor(palette.ColorRole.WindowText, self.look.soft)
        self.note.setPalette(palette)
        self.figure.set_facecolor(self.look.paper)
        self.message.set_color(self.look.soft)
        self.message.set_card(self.look.paper, self.look.paper)
        self.readout.recolour(self.look)
        self.recolour()
        self._behind = True
        self.canvas.redraw()

    def _renamed(self, old: Plan, new: Plan) -> None:
        """Names are not part of an answer; a plan that only has other ones is followed at once."""
        if [p.name for p in old.parts] != [p.name for p in new.parts]:
            self.follow()

    def _chosen(self, word: str) -> None:
        self.word = word
        self.words.show_chosen((word,))
        self.follow()

    def _whole_asked(self) -> None:
        self.corners.setChecked(not self.corners.isChecked())  # the row says what it leads to
        self.whole_asked.emit()

    def _hover(self, part_id: str | None) -> None:
        if part_id != self._hovering:
            self._hovering = part_id
            self.store.hover(part_id)

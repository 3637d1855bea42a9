"""Taking away from the bench, and putting on it: parts from the drawer and files, at the pointer and on joins."""

from __future__ import annotations

from pathlib import Path

import pytest
from PySide6.QtCore import QMimeData, QPointF, Qt, QUrl
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QFileDialog, QMenu, QMessageBox, QWidget
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.editing.drags import PART_MIME
from app.window import Window
from feedlib import write_plan
from feedlib.parts import KINDS, Antenna, Measured
from feedlib.plan import Port
from tests.app.bench_screen import PLACES, plan, undone_by, window
from tests.hands import CONTROL, LEFT, PLAIN, Hands, answering


@pytest.fixture
def whole(qtbot: QtBot) -> tuple[Window, Hands]:
    return window(qtbot, plan())


# Taking away


def between(hands: Hands, a: str, b: str) -> QPointF:
    """The middle of a join."""
    return (hands.place(a) + hands.place(b)) / 2


def test_delete_takes_a_part_away_and_heals_the_chain(whole: tuple[Window, Hands]) -> None:
    _, hands = whole
    hands.click("leg A")
    hands.key(Qt.Key.Key_Delete)
    assert "leg A" not in hands.scene.parts
    assert hands.store.plan.mate(Port("A", 1)) == Port("T1", 2)
    assert (undone_by(hands), hands.store.selected) == ((1, "Delete leg A"), ())
    hands.key(Qt.Key.Key_Z, CONTROL)
    assert hands.store.plan == plan()
    hands.key(Qt.Key.Key_Delete)
    assert hands.store.plan == plan()


def test_delete_takes_several_parts_away_in_one_act(whole: tuple[Window, Hands]) -> None:
    _, hands = whole
    hands.drag((270, -200), (560, -60))
    hands.key(Qt.Key.Key_Delete)
    assert set(hands.scene.parts) == set(PLACES) - {"leg A", "A"}
    assert undone_by(hands) == (1, "Delete 2 parts")


def test_delete_takes_a_join_away(whole: tuple[Window, Hands]) -> None:
    _, hands = whole
    hands.click("pad")
    hands.click(between(hands, "leg A:2", "A:1"))
    assert hands.scene.selected_join == (Port("leg A", 2), Port("A", 1))
    assert hands.store.selected == ()
    hands.key(Qt.Key.Key_Delete)
    assert set(hands.store.plan.joins) == set(plan().joins) - {(Port("leg A", 2), Port("A", 1))}
    assert undone_by(hands) == (1, "Take join leg A:2 – A:1 away")
    assert hands.scene.parts["A"].open_ports == {1}
    hands.key(Qt.Key.Key_Delete)
    assert undone_by(hands)[0] == 1


def test_a_selected_join_is_let_go(whole: tuple[Window, Hands]) -> None:
    _, hands = whole
    for let_go in (lambda: hands.click("pad"), lambda: hands.click((250, 300)), lambda: hands.key(Qt.Key.Key_Escape)):
        hands.click(between(hands, "leg A:2", "A:1"))
        assert hands.scene.selected_join is not None
        let_go()
        assert hands.scene.selected_join is None
        assert not any(item.selected for item in hands.scene.joins.values())


# Dropping


@pytest.mark.parametrize("key", ["coax", "tee", "wilkinson", "branch_line", "antenna", "lumped", "load", "radio"])
def test_a_part_is_dropped_on_the_bench(whole: tuple[Window, Hands], key: str) -> None:
    window, hands = whole
    assert hands.drop(window.drawer.things[key].mime(), (252, 298))
    new = hands.store.plan.parts[-1]
    assert (new.at, new.part.KIND in KINDS) == ((252.0, 300.0), True)
    assert (hands.store.plan.joins, hands.store.selected) == (plan().joins, (new.id,))
    assert undone_by(hands) == (1, f"Add {new.part.LABEL}")


@pytest.mark.parametrize("key", ["coax", "pad", "tee", "transformer", "resistive"])
def test_a_part_dropped_on_a_join_is_spliced_in(whole: tuple[Window, Hands], key: str) -> None:
    window, hands = whole
    hands.drop(window.drawer.things[key].mime(), between(hands, "leg A:2", "A:1"))
    new = hands.store.plan.parts[-1].id
    assert hands.store.plan.mate(Port("leg A", 2)) == Port(new, 1)
    assert hands.store.plan.mate(Port("A", 1)) == Port(new, 2)
    assert len(hands.store.plan.joins) == len(plan().joins) + 1
    hands.key(Qt.Key.Key_Z, CONTROL)
    assert hands.store.plan == plan()


def test_a_part_with_one_port_dropped_on_a_join_stands_beside_it(whole: tuple[Window, Hands]) -> None:
    window, hands = whole
    hands.drop(window.drawer.things["load"].mime(), between(hands, "leg A:2", "A:1"))
    assert (len(hands.store.plan.parts), hands.store.plan.joins) == (len(PLACES) + 1, plan().joins)


def test_a_pulled_join_is_offered_parts_at_the_pointer(whole: tuple[Window, Hands]) -> None:
    _, hands = whole
    seen: list[str] = []

    def choose(menu: QWidget) -> None:
        assert isinstance(menu, QMenu)
        seen.extend(a.text() for a in menu.actions())
        pad = next(a for a in menu.actions() if a.text() == "pad")
        QTest.mouseClick(menu, LEFT, PLAIN, menu.actionGeometry(pad).center())

    with answering(choose):
        hands.drag("T1:4", (240, 240))
    assert "antenna" in seen
    new = hands.store.plan.parts[-1]
    assert (new.part.KIND, new.at) == ("pad", (240.0, 240.0))
    assert hands.store.plan.mate(Port("T1", 4)) == Port(new.id, 1)
    assert undone_by(hands) == (1, "Add pad")
    assert hands.store.selected == (new.id,)
    with answering(lambda menu: QTest.keyClick(menu, Qt.Key.Key_Escape)):
        hands.drag(f"{new.id}:2", (240, 380))
    assert undone_by(hands) == (1, "Add pad")


def files(*paths: Path | str) -> QMimeData:
    """What a file manager drags."""
    data = QMimeData()
    data.setUrls([QUrl(p) if isinstance(p, str) else QUrl.fromLocalFile(str(p)) for p in paths])
    return data


ONE_PORT = "# MHz S RI R 50\n800 0.1 0.1\n900 0.2 0\n"
TWO_PORT = "# MHz S RI R 50\n800 0 0 0.5 0 0.5 0 0 0\n900 0 0 0.5 0 0.5 0 0 0\n"


def test_a_measured_file_is_dropped_on_the_bench_and_on_a_join(whole: tuple[Window, Hands], tmp_path: Path) -> None:
    _, hands = whole
    path = tmp_path / "filter.s2p"
    path.write_text(TWO_PORT)
    hands.drop(files(path), (252, 298))
    new = hands.store.plan.parts[-1]
    assert isinstance(new.part, Measured)
    assert (new.part.touchstone.name, new.part.touchstone.text, new.at) == ("filter.s2p", TWO_PORT, (252, 300))
    hands.drop(files(path), between(hands, "leg A:2", "A:1"))
    spliced = hands.store.plan.parts[-1].id
    assert hands.store.plan.mate(Port("A", 1)) == Port(spliced, 2)


def test_a_one_port_file_dropped_on_an_antenna_is_its_impedance(whole: tuple[Window, Hands], tmp_path: Path) -> None:
    _, hands = whole
    path = tmp_path / "dipole.s1p"
    path.write_text(ONE_PORT)
    hands.drop(files(path), "A")
    part = hands.store.plan.placed("A").part
    assert isinstance(part, Antenna)
    assert part.impedance.touchstone is not None
    assert part.impedance.touchstone.text == ONE_PORT
    assert (len(hands.store.plan.parts), hands.store.selected) == (len(PLACES), ("A",))


def test_a_measured_part_from_the_drawer_asks_for_its_file(
    whole: tuple[Window, Hands], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    window, hands = whole
    path = tmp_path / "filter.s2p"
    path.write_text(TWO_PORT)
    answers = iter([("", ""), (str(path), "")])
    monkeypatch.setattr(QFileDialog, "getOpenFileName", lambda *_: next(answers))
    hands.drop(window.drawer.things["measured"].mime(), (252, 298))
    assert hands.store.plan == plan()
    hands.drop(window.drawer.things["measured"].mime(), between(hands, "leg A:2", "A:1"))
    assert hands.store.plan.mate(Port("A", 1)) == Port(hands.store.plan.parts[-1].id, 2)


def test_a_dropped_plan_is_opened(whole: tuple[Window, Hands], tmp_path: Path) -> None:
    _, hands = whole
    other = edits.retitled(plan(), title="another")
    path = tmp_path / "other.feedplan"
    write_plan(other, path)
    hands.drop(files(path), (252, 298))
    assert (hands.store.plan, hands.store.path) == (other, path)


def read(box: QWidget) -> str:
    """What a message says; it is then put away."""
    assert isinstance(box, QMessageBox)
    box.button(QMessageBox.StandardButton.Ok).click()
    return box.text()


@pytest.mark.parametrize("text", [None, "", "\x00\xff", "# MHz S RI R 50\n800 nan 0\n", "hello\n"])
def test_a_file_that_is_no_data_is_refused_in_one_sentence(
    whole: tuple[Window, Hands], tmp_path: Path, text: str | None
) -> None:
    _, hands = whole
    path = tmp_path / "odd.s1p"
    if text is not None:
        path.write_text(text)
    for place in ((252, 298), "A"):
        sentences: list[str] = []
        with answering(lambda box, said=sentences: said.append(read(box))):
            hands.drop(files(path), place)
        assert len(sentences) == 1
        assert sentences[0].strip('"').startswith("odd.s1p")
        assert sentences[0].endswith(".")
        assert len(sentences[0].splitlines()) == 1
    assert hands.store.plan == plan()


def garbage(kind: str, data: bytes) -> QMimeData:
    made = QMimeData()
    made.setData(kind, data)
    return made


@pytest.mark.parametrize(
    "data",
    [
        garbage("text/plain", b"coax"),
        garbage("image/png", b"\x89PNG"),
        garbage(PART_MIME, b""),
        garbage(PART_MIME, b"no such part"),
        garbage(PART_MIME, b"\xff\xfe\x00coax"),
        files(),
        files("https://example.org/filter.s2p"),
    ],
)
def test_what_is_no_part_and_no_file_changes_nothing(whole: tuple[Window, Hands], data: QMimeData) -> None:
    _, hands = whole
    for place in ((252, 298), "A", between(hands, "leg A:2", "A:1")):
        hands.drop(data, place)
    assert (hands.store.plan, undone_by(hands)) == (plan(), (0, ""))

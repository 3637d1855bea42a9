"""Work on the bench under a real mouse: joining, turning lengths, deleting, dropping parts and files."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest
from PySide6.QtCore import QMimeData, QPointF, Qt, QTimer, QUrl
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QFileDialog, QMenu, QMessageBox
from pytestqt.qtbot import QtBot

from app.bench.view import PART_MIME
from app.editing import edits
from app.window import Window
from feedlib import write_plan
from feedlib.parts import KINDS, Antenna, Measured, Tee
from feedlib.plan import Port
from tests.app.bench_screen import PLACES, at, bench, length_m, plan, shown, undone_by, window, words
from tests.hands import ALT, CONTROL, LEFT, PLAIN, RIGHT, SHIFT, Hands

NOTCH_M = 2e-4
"""One notch at 868 MHz in air: 0.2 degrees are 0.192 mm; the nearest of 1, 2, 5 is 0.2 mm."""


@pytest.fixture
def hands(qtbot: QtBot) -> Iterator[Hands]:
    made = bench(qtbot, plan())
    yield made
    made.store.close()


@pytest.fixture
def whole(qtbot: QtBot) -> tuple[Window, Hands]:
    return window(qtbot, plan())


# Joining


def test_a_join_is_pulled_from_port_to_port(hands: Hands) -> None:
    before = shown(hands)
    hands.drag("pad:1", "T1:4", drop=False)
    assert words(hands) == ["join pad:1 to T1:4"]
    hands.release("T1:4")
    assert hands.store.plan.joins == (*plan().joins, (Port("pad", 1), Port("T1", 4)))
    assert undone_by(hands) == (1, "Join pad:1 to T1:4")
    assert shown(hands) >= before + 1
    assert words(hands) == []


def test_a_refused_join_says_why_and_changes_nothing(hands: Hands) -> None:
    before = shown(hands)
    hands.drag("pad:2", "radio:1", drop=False)
    assert words(hands) == ["radio:1 is joined already; a branching point is a T joint"]
    hands.release("radio:1")
    assert hands.store.plan == plan()
    assert (undone_by(hands), shown(hands), words(hands)) == ((0, ""), before, [])


def test_a_join_pulled_on_to_a_t_takes_its_free_port_or_one_more(hands: Hands) -> None:
    hands.drag("pad:1", (156, -8))
    assert hands.store.plan.mate(Port("pad", 1)) == Port("T1", 4)
    hands.drag("pad:2", (156, -8))
    assert hands.store.plan.mate(Port("pad", 2)) == Port("T1", 5)
    assert hands.store.plan.placed("T1").part == Tee(ports=5)
    assert undone_by(hands) == (2, "Join pad:2 to T1:5")
    hands.store.stack.undo()
    assert hands.store.plan.placed("T1").part == Tee(ports=4)


def test_a_part_can_be_tied_to_itself(hands: Hands) -> None:
    hands.drag("pad:1", "pad:2")
    assert hands.store.plan.mate(Port("pad", 1)) == Port("pad", 2)


def test_a_join_pulled_into_the_empty_bench_asks_for_what_fits(qtbot: QtBot, hands: Hands) -> None:
    with qtbot.waitSignal(hands.view.offer_asked) as asked:
        hands.drag("T1:4", (240, 240))
    port, place, screen = asked.args
    assert port == Port("T1", 4)
    assert place == QPointF(240, 240)
    assert screen == hands.view.viewport().mapToGlobal(hands.pixel((240, 240)))
    assert hands.store.plan == plan()


def test_a_click_on_a_port_or_a_pull_taken_back_asks_nothing(qtbot: QtBot, hands: Hands) -> None:
    before = shown(hands)
    with qtbot.assertNotEmitted(hands.view.offer_asked):
        hands.click("T1:4")
        hands.drag("T1:4", (240, 240), drop=False)
        hands.key(Qt.Key.Key_Escape)
        hands.release((240, 240))
        hands.drag("T1:4", (240, 240), drop=False)
        hands.press((240, 240), button=RIGHT)
        hands.release((240, 240), button=RIGHT)
        hands.release((240, 240))
    assert (hands.store.plan, shown(hands), words(hands)) == (plan(), before, [])


# Lengths


@pytest.mark.parametrize(("keys", "times"), [(Qt.KeyboardModifier.NoModifier, 1), (SHIFT, 10), (ALT, 0.1)])
def test_the_wheel_over_a_selected_swell_turns_its_length(
    hands: Hands, keys: Qt.KeyboardModifier, times: float
) -> None:
    hands.click("leg A")
    scale = hands.view.transform().m11()
    hands.wheel("leg A", 1, keys=keys)
    hands.wheel("leg A", 2, keys=keys)
    assert length_m(hands, "leg A") == pytest.approx(0.1 + 3 * times * NOTCH_M, abs=1e-12)
    assert undone_by(hands) == (1, "Lengthen leg A")
    hands.wheel("leg A", -3, keys=keys)
    assert (hands.store.plan, undone_by(hands)) == (plan(), (0, ""))
    assert hands.view.transform().m11() == scale


def test_the_wheel_turns_all_selected_sections_alike(hands: Hands) -> None:
    for part_id in ("leg A", "A", "leg B"):
        hands.click(part_id, keys=SHIFT)
    hands.wheel("leg B", -2)
    assert [length_m(hands, i) for i in ("leg A", "leg B")] == [pytest.approx(0.1 - 2 * NOTCH_M)] * 2
    assert undone_by(hands) == (1, "Shorten 2 sections")


@pytest.mark.parametrize("over", ["leg B", "A", (250, 300)])
def test_the_wheel_elsewhere_zooms_about_the_pointer(hands: Hands, over: str | tuple[float, float]) -> None:
    hands.click("leg A")
    hands.click("A", keys=SHIFT)
    here = hands.pixel(over)
    place = hands.view.mapToScene(here)
    hands.wheel(place, 2)
    assert hands.view.transform().m11() == pytest.approx(1.2**2)
    assert (hands.view.mapToScene(here) - place).manhattanLength() < 1.5
    assert hands.store.plan == plan()


@pytest.mark.parametrize("key", [Qt.Key.Key_Plus, Qt.Key.Key_Equal])
def test_plus_and_minus_turn_the_selected_length(hands: Hands, key: Qt.Key) -> None:
    hands.key(key)
    assert hands.store.plan == plan()
    hands.click("leg B")
    hands.key(key)
    hands.key(key)
    assert length_m(hands, "leg B") == pytest.approx(0.1 + 2 * NOTCH_M)
    hands.key(key, ALT)
    assert length_m(hands, "leg B") == pytest.approx(0.1 + 2.1 * NOTCH_M)
    hands.key(Qt.Key.Key_Minus, ALT)
    hands.key(Qt.Key.Key_Minus)
    assert length_m(hands, "leg B") == pytest.approx(0.1 + NOTCH_M)
    assert undone_by(hands)[0] == 1


def test_no_length_is_turned_below_zero(hands: Hands) -> None:
    hands.click("leg A")
    hands.wheel("leg A", -100, keys=SHIFT)
    assert length_m(hands, "leg A") == 0


def test_a_swells_end_is_dragged_in_one_act(hands: Hands) -> None:
    """0.1 m in air at 868 MHz are 104.2 degrees, drawn 44 + 78 log2(1 + 104.2/45) = 178.9 wide; 40 more are 167.9."""
    end = hands.place("leg A") + QPointF(86, 0)
    hands.click("leg A")
    hands.drag(end, end + QPointF(20, 0), drop=False)
    assert length_m(hands, "leg A") == pytest.approx(0.1611, abs=NOTCH_M)
    assert words(hands) == [f"{length_m(hands, 'leg A') * 1000:.1f} mm  {length_m(hands, 'leg A') * 1042.34:.1f}°"]
    hands.release(end + QPointF(20, 0))
    assert undone_by(hands) == (1, "Turn leg A")
    assert (at(hands, "leg A"), words(hands)) == (PLACES["leg A"], [])
    hands.store.stack.undo()
    assert hands.store.plan == plan()


def test_escape_takes_a_dragged_end_back(hands: Hands) -> None:
    end = hands.place("leg A") + QPointF(86, 0)
    hands.click("leg A")
    hands.drag(end, end + QPointF(40, 0), drop=False)
    hands.key(Qt.Key.Key_Escape)
    assert (hands.store.plan, hands.store.stack.canUndo(), words(hands)) == (plan(), False, [])
    hands.release(end + QPointF(40, 0))
    assert hands.store.plan == plan()


def test_a_click_on_a_swells_end_that_trembles_turns_nothing(hands: Hands) -> None:
    end = hands.place("leg A") + QPointF(86, 0)
    hands.click("leg A")
    hands.press(end)
    hands.move(end + QPointF(2, 1))
    hands.release(end + QPointF(2, 1))
    assert hands.store.plan == plan()


def test_the_end_of_a_section_that_was_not_selected_moves_it(hands: Hands) -> None:
    """The pointer has not said that it would turn the length."""
    end = hands.place("leg A") + QPointF(86, 0)
    hands.drag(end, end + QPointF(0, -48))
    assert length_m(hands, "leg A") == 0.1
    assert at(hands, "leg A") == (312, -156)


def test_the_end_of_a_section_that_is_not_drawn_to_scale_moves_it(hands: Hands) -> None:
    """Else a feeder of some metres would shrink to what can be drawn."""
    hands.store.edit("Lengthen", edits.changed_part(hands.store.plan, "leg A", length_m=2.5))
    hands.click("leg A")
    end = hands.place("leg A") - QPointF(176, 0)
    hands.drag(end, end + QPointF(0, -48))
    assert length_m(hands, "leg A") == 2.5
    assert at(hands, "leg A") == (312, -156)


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

    def choose() -> None:
        menu = QApplication.activePopupWidget()
        assert isinstance(menu, QMenu)
        seen.extend(a.text() for a in menu.actions())
        pad = next(a for a in menu.actions() if a.text() == "pad")
        QTest.mouseClick(menu, LEFT, PLAIN, menu.actionGeometry(pad).center())

    QTimer.singleShot(0, choose)
    hands.drag("T1:4", (240, 240))
    assert "antenna" in seen
    new = hands.store.plan.parts[-1]
    assert (new.part.KIND, new.at) == ("pad", (240.0, 240.0))
    assert hands.store.plan.mate(Port("T1", 4)) == Port(new.id, 1)
    assert undone_by(hands) == (1, "Add pad")
    assert hands.store.selected == (new.id,)
    QTimer.singleShot(0, lambda: QApplication.activePopupWidget().close())
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


def told(sentences: list[str]) -> None:
    """Read the message that is on the screen and press OK."""
    box = QApplication.activeModalWidget()
    assert isinstance(box, QMessageBox)
    sentences.append(box.text())
    box.button(QMessageBox.StandardButton.Ok).click()


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
        QTimer.singleShot(0, lambda said=sentences: told(said))
        hands.drop(files(path), place)
        assert len(sentences) == 1
        assert sentences[0].startswith("odd.s1p: ")
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

"""Plans and their files in the window: nothing is lost unasked, and nothing is said to be saved that is not."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QFileDialog, QMessageBox, QWidget
from pytestqt.qtbot import QtBot

from app.editing import edits
from app.window import Window
from feedlib import Plan, read_plan, write_plan
from feedlib.assets_place import ASSETS
from tests.app.bench_screen import plan, window
from tests.hands import CONTROL, SHIFT, Hands, answering

Button = QMessageBox.StandardButton


@pytest.fixture
def whole(qtbot: QtBot) -> tuple[Window, Hands]:
    return window(qtbot, titled("first"))


def titled(title: str) -> Plan:
    return edits.retitled(plan(), title=title)


@pytest.fixture
def dialogs(monkeypatch: pytest.MonkeyPatch) -> Callable[[Path | str], list[str]]:
    """What a person chooses in the next file dialogs ("" = Cancel); gives the places where they began."""

    def choose(path: Path | str) -> list[str]:
        begun: list[str] = []

        def chosen(parent: QWidget, title: str, start: str, kinds: str) -> tuple[str, str]:
            begun.append(start)
            return str(path), kinds

        monkeypatch.setattr(QFileDialog, "getOpenFileName", chosen)
        monkeypatch.setattr(QFileDialog, "getSaveFileName", chosen)
        return begun

    return choose


def press(button: Button) -> Callable[[QWidget], None]:
    """Answer a question with a button."""

    def act(box: QWidget) -> None:
        assert isinstance(box, QMessageBox)
        box.button(button).click()

    return act


def changed(hands: Hands) -> Plan:
    """Move a part, as an act that is not saved."""
    hands.drag("pad", (252, 300))
    assert not hands.store.stack.isClean()
    return hands.store.plan


def edited(window: Window) -> bool:
    """Whether the window says that there is something to save."""
    assert window.isWindowModified() == window.title.text().endswith("edited")
    return window.isWindowModified()


# Opening


def test_a_plan_is_opened(whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]]) -> None:
    made, hands = whole
    path = tmp_path / "second.feedplan"
    write_plan(titled("second"), path)
    dialogs(path)
    hands.store.select(("A",))
    hands.key(Qt.Key.Key_O, CONTROL)
    assert (hands.store.plan, hands.store.path, hands.store.selected) == (titled("second"), path, ())
    assert made.windowTitle() == "second (second.feedplan)[*] – Feedwright"
    assert not edited(made)
    assert not hands.store.stack.canUndo()
    begun = dialogs("")
    hands.key(Qt.Key.Key_O, CONTROL)
    assert begun == [str(tmp_path)]
    assert hands.store.plan == titled("second")


@pytest.mark.parametrize("text", [None, "", "{", "\x00", '{"format": "feedwright-plan", "version": 2}'])
def test_a_file_that_is_no_plan_is_refused_and_the_plan_stays(
    whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]], text: str | None
) -> None:
    _, hands = whole
    path = tmp_path / "odd.feedplan"
    if text is not None:
        path.write_text(text)
    dialogs(path)
    said: list[str] = []
    with answering(lambda box: (said.append(box.text()), press(Button.Ok)(box))):
        hands.key(Qt.Key.Key_O, CONTROL)
    assert said[0].startswith("odd.feedplan: ")
    assert (hands.store.plan, hands.store.path) == (titled("first"), None)


def test_an_example_opens_without_a_file(
    whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]]
) -> None:
    made, hands = whole
    examples = next(a.menu() for a in made.menus["File"].actions() if a.menu() is not None)
    example = ASSETS / "examples" / "two-dipole-gateway.feedplan"
    before = example.read_bytes()
    next(a for a in examples.actions() if a.text() == "Two dipole gateway").trigger()
    assert hands.store.plan == read_plan(example)
    assert hands.store.path is None
    path = tmp_path / "mine"
    begun = dialogs(path)
    hands.store.edit("Title", edits.retitled(hands.store.plan, title="Mine"))
    hands.key(Qt.Key.Key_S, CONTROL)
    assert len(begun) == 1
    assert read_plan(tmp_path / "mine.feedplan") == hands.store.plan
    assert example.read_bytes() == before


def test_an_example_given_to_the_window_has_no_file_either(qtbot: QtBot) -> None:
    example = ASSETS / "examples" / "two-dipole-gateway.feedplan"
    made = Window(read_plan(example), example, remember=False)
    qtbot.addWidget(made)
    assert made.store.path is None


def test_a_new_plan_is_a_radio(whole: tuple[Window, Hands]) -> None:
    made, hands = whole
    hands.key(Qt.Key.Key_N, CONTROL)
    assert list(hands.scene.parts) == ["radio"]
    assert hands.store.path is None
    assert not edited(made)


# Saving


def test_a_plan_is_saved_where_it_was(qtbot: QtBot, tmp_path: Path) -> None:
    path = tmp_path / "a.feedplan"
    made, hands = window(qtbot, titled("first"))
    hands.store.open(titled("first"), path)
    changed(hands)
    assert edited(made)
    hands.key(Qt.Key.Key_S, CONTROL)
    assert read_plan(path) == hands.store.plan
    assert not edited(made)
    hands.key(Qt.Key.Key_Z, CONTROL)
    assert edited(made)
    hands.key(Qt.Key.Key_Z, CONTROL | SHIFT)
    assert not edited(made)


@pytest.mark.parametrize(
    ("typed", "saved"),
    [
        ("b.feedplan", "b.feedplan"),
        ("b", "b.feedplan"),
        ("b.json", "b.json"),
        ("2.4 GHz pair", "2.4 GHz pair.feedplan"),
        ("v1.2", "v1.2.feedplan"),
        ("天線", "天線.feedplan"),
    ],
)
def test_a_plan_is_saved_under_another_name(
    whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]], typed: str, saved: str
) -> None:
    made, hands = whole
    changed(hands)
    dialogs(tmp_path / typed)
    hands.key(Qt.Key.Key_S, CONTROL | SHIFT)
    assert [p.name for p in tmp_path.iterdir()] == [saved]
    assert read_plan(tmp_path / saved) == hands.store.plan
    assert hands.store.path == tmp_path / saved
    assert saved in made.windowTitle()
    assert not edited(made)


@pytest.mark.parametrize("title", ["", "   ", "a/b\\c\n*?", "x" * 5000, "../../etc"])
def test_the_name_that_is_offered_is_a_name(
    whole: tuple[Window, Hands], dialogs: Callable[..., list[str]], title: str
) -> None:
    _, hands = whole
    hands.store.edit("Title", edits.retitled(hands.store.plan, title=title))
    begun = dialogs("")
    hands.key(Qt.Key.Key_S, CONTROL)
    offered = Path(begun[0])
    assert offered.parent == Path.home()
    assert offered.suffix == ".feedplan"
    assert 1 <= len(offered.stem) <= 60
    assert not hands.store.stack.isClean()


@pytest.mark.parametrize(("button", "replaced"), [(Button.No, False), (Button.Yes, True)])
def test_a_file_whose_name_was_not_typed_in_full_is_not_replaced_unasked(
    whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]], button: Button, replaced: bool
) -> None:
    """The file dialog has asked about "a", not about "a.feedplan"."""
    made, hands = whole
    path = tmp_path / "a.feedplan"
    write_plan(titled("old"), path)
    changed(hands)
    dialogs(tmp_path / "a")
    with answering(press(button)):
        hands.key(Qt.Key.Key_S, CONTROL)
    assert read_plan(path) == (hands.store.plan if replaced else titled("old"))
    assert edited(made) != replaced


def test_a_save_that_is_given_up_saves_nothing(
    whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]]
) -> None:
    made, hands = whole
    changed(hands)
    dialogs("")
    hands.key(Qt.Key.Key_S, CONTROL)
    assert edited(made)
    assert hands.store.path is None


def below_a_file(tmp_path: Path) -> Path:
    (tmp_path / "file").write_text("x")
    return tmp_path / "file" / "a.feedplan"


def vanished(tmp_path: Path) -> Path:
    return tmp_path / "gone" / "a.feedplan"


def a_folder(tmp_path: Path) -> Path:
    (tmp_path / "a.feedplan" / "inside").mkdir(parents=True)
    return tmp_path / "a.feedplan"


@pytest.mark.parametrize("place", [below_a_file, vanished, a_folder])
def test_a_plan_that_cannot_be_written_stays_and_is_said_to_be_unsaved(
    whole: tuple[Window, Hands], tmp_path: Path, place: Callable[[Path], Path]
) -> None:
    made, hands = whole
    path = place(tmp_path)
    hands.store.open(titled("first"), path)
    kept = changed(hands)
    before = sorted(tmp_path.rglob("*"))
    said: list[str] = []
    with answering(lambda box: (said.append(box.text()), press(Button.Ok)(box))):
        hands.key(Qt.Key.Key_S, CONTROL)
    assert str(path) in said[0]
    assert said[0].endswith("The plan is still here, unsaved.")
    assert hands.store.plan is kept
    assert edited(made)
    assert sorted(tmp_path.rglob("*")) == before


# The question


@pytest.mark.parametrize("key", [Qt.Key.Key_N, Qt.Key.Key_O])
def test_what_is_not_saved_is_asked_about(
    whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]], key: Qt.Key
) -> None:
    _, hands = whole
    other = tmp_path / "other.feedplan"
    write_plan(titled("other"), other)
    begun = dialogs(other)
    kept = changed(hands)
    with answering(press(Button.Cancel)):
        hands.key(key, CONTROL)
    assert hands.store.plan is kept
    with answering(lambda box: QTest.keyClick(box, Qt.Key.Key_Escape)):
        hands.key(key, CONTROL)
    assert (hands.store.plan, begun) == (kept, [])
    with answering(press(Button.Discard)):
        hands.key(key, CONTROL)
    assert hands.store.plan == (titled("other") if key == Qt.Key.Key_O else edits.new_plan())


def test_save_in_the_question_saves_first(
    whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]]
) -> None:
    _, hands = whole
    kept = changed(hands)
    dialogs(tmp_path / "kept.feedplan")
    with answering(press(Button.Save)):
        hands.key(Qt.Key.Key_N, CONTROL)
    assert read_plan(tmp_path / "kept.feedplan") == kept
    assert list(hands.scene.parts) == ["radio"]


def test_save_in_the_question_that_comes_to_nothing_keeps_the_plan(
    whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]]
) -> None:
    made, hands = whole
    kept = changed(hands)
    dialogs("")
    with answering(press(Button.Save)):
        hands.key(Qt.Key.Key_N, CONTROL)
    assert hands.store.plan is kept
    hands.store.path = vanished(tmp_path)
    with answering(press(Button.Save), press(Button.Ok)):
        made.close()
    assert made.isVisible()
    assert hands.store.plan is kept


def test_closing_asks_too(whole: tuple[Window, Hands], tmp_path: Path, dialogs: Callable[..., list[str]]) -> None:
    made, hands = whole
    changed(hands)
    with answering(press(Button.Cancel)):
        assert not made.close()
    assert made.isVisible()
    kept = hands.store.plan
    dialogs(tmp_path / "last.feedplan")
    with answering(press(Button.Save)):
        assert made.close()
    assert not made.isVisible()
    assert read_plan(tmp_path / "last.feedplan") == kept


def test_closing_without_changes_asks_nothing(whole: tuple[Window, Hands]) -> None:
    made, hands = whole
    changed(hands)
    hands.key(Qt.Key.Key_Z, CONTROL)
    made.actions_by_id["quit"].trigger()
    assert not made.isVisible()


def test_a_discarded_plan_closes(whole: tuple[Window, Hands]) -> None:
    made, hands = whole
    changed(hands)
    with answering(press(Button.Discard)):
        made.close()
    assert not made.isVisible()

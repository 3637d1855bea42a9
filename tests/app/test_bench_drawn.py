"""What the bench draws: swells against closed forms, dials and flags against hand figures, names as they are."""

from __future__ import annotations

import json
import math
from collections.abc import Callable, Iterator

import numpy as np
import pytest
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QImage, QPainter
from PySide6.QtWidgets import QApplication, QStyleOptionGraphicsItem
from pytestqt.qtbot import QtBot

from app.bench.items import PartItem
from app.bench.pictures import PICTURES, Shown
from app.bench.pictures.antenna import RADIUS
from app.bench.pictures.base import Dial
from app.bench.pictures.coax import UNIT_HEIGHT, CoaxPicture
from app.editing import edits
from app.look import DARK, LIGHT, Look
from feedlib import Plan, solve
from feedlib.conventions import SPEED_OF_LIGHT_M_PER_S
from feedlib.parts import KINDS
from feedlib.plan import Port
from feedlib.plan_file import parse_plan
from tests.app.bench_screen import bench, plan
from tests.feedlib.plan_documents import LEAST, plan_document
from tests.hands import Hands, settled
from tests.plans import Sketch

MARK_HZ = 868e6
WAVE_M = SPEED_OF_LIGHT_M_PER_S / MARK_HZ
LEAST_HEIGHT = 0.75
"""What is left of a swell where the voltage is zero."""


@pytest.fixture
def show(qtbot: QtBot) -> Iterator[Callable[..., Hands]]:
    made: list[Hands] = []

    def on_screen(plan: Plan, look: Look = LIGHT) -> Hands:
        made.append(bench(qtbot, plan, look))
        return made[-1]

    yield on_screen
    for hands in made:
        hands.store.close()


# Swells


def heights(sketch: Sketch, part_id: str = "line") -> np.ndarray:
    """|V| along a coax as it is drawn, in units of the forward wave at its entry."""
    plan = sketch.plan()
    shown = Shown(plan.placed(part_id), plan, solve(plan), LIGHT)
    return (CoaxPicture._heights(shown) - LEAST_HEIGHT) / UNIT_HEIGHT


def line(length_m: float, *, turned: bool = False, z0_ohm: float = 50, skin_db_per_100m: float = 0) -> Sketch:
    """A radio and a coax; what it ends in is still to be tied to its far port."""
    sketch = Sketch(MARK_HZ)
    sketch.add("radio", "radio", impedance_ohm=40 + 7j)
    sketch.coax(length_m, z0_ohm, "line", skin_db_per_100m=skin_db_per_100m)
    sketch.join("radio:1", f"line:{2 if turned else 1}")
    return sketch


@pytest.mark.parametrize("length_wl", [0.1, 0.25, 0.6, 0.97])
@pytest.mark.parametrize("turned", [False, True])
def test_an_open_stub_is_a_standing_wave(length_wl: float, turned: bool) -> None:
    """|V(x)| = 2 |cos(beta (l - x))|, x from the entry."""
    drawn = heights(line(length_wl * WAVE_M, turned=turned))
    x = np.linspace(0, 1, drawn.size)
    expected = 2 * np.abs(np.cos(2 * math.pi * length_wl * (1 - x)))
    assert drawn.size > 30
    assert drawn == pytest.approx(expected[::-1] if turned else expected, abs=1e-9)


def test_a_shorted_stub_begins_where_the_open_one_ends() -> None:
    """|V(x)| = 2 |sin(beta (l - x))|."""
    sketch = line(0.4 * WAVE_M)
    sketch.join("line:2", f"{sketch.add('load', impedance_ohm=0j)}:1")
    drawn = heights(sketch)
    x = np.linspace(0, 1, drawn.size)
    assert drawn == pytest.approx(2 * np.abs(np.sin(2 * math.pi * 0.4 * (1 - x))), abs=1e-9)


def test_a_matched_line_is_straight() -> None:
    sketch = line(0.7 * WAVE_M)
    sketch.join("line:2", f"{sketch.antenna(50)}:1")
    assert heights(sketch) == pytest.approx([1, 1], abs=1e-9)


@pytest.mark.parametrize("turned", [False, True])
def test_a_matched_line_falls_with_its_loss(turned: bool) -> None:
    """2 m of 2 dB/m at the mark: the voltage falls by 4 dB, to 0.631, on an exponential."""
    sketch = line(2.0, turned=turned, skin_db_per_100m=200 / math.sqrt(868))
    sketch.join(f"line:{1 if turned else 2}", f"{sketch.antenna(50)}:1")
    drawn = heights(sketch)
    x = np.linspace(0, 1, drawn.size)
    expected = 10 ** (-4 * x / 20)
    assert drawn == pytest.approx(expected[::-1] if turned else expected, abs=1e-9)


def test_a_quarter_wave_match_tapers() -> None:
    """75 ohm into 50 ohm: reflection -0.2, so 1.2 at the entry and 0.8 at the load."""
    sketch = line(0.25 * WAVE_M, z0_ohm=75)
    sketch.join("line:2", f"{sketch.antenna(50)}:1")
    drawn = heights(sketch)
    x = np.linspace(0, 1, drawn.size)
    assert drawn == pytest.approx(np.abs(1 - 0.2 * np.exp(-1j * math.pi * (1 - x))), abs=1e-9)
    assert drawn[[0, -1]] == pytest.approx([1.2, 0.8])


def test_a_long_open_line_still_ripples_between_nothing_and_twice() -> None:
    """Twenty waves: 40 minima and maxima have to be seen, not a moire of too few samples."""
    drawn = heights(line(20 * WAVE_M))
    turns = np.diff(np.sign(np.diff(drawn)))
    assert np.count_nonzero(turns > 0) == pytest.approx(40, abs=2)
    assert drawn.min() < 0.35
    assert drawn.max() > 1.9


def test_a_section_that_is_not_reached_or_not_solved_is_straight() -> None:
    sketch = line(0.3 * WAVE_M)
    sketch.coax(0.1, part_id="loose")
    assert heights(sketch, "loose") * UNIT_HEIGHT + LEAST_HEIGHT == pytest.approx([UNIT_HEIGHT] * 2)
    plan = sketch.plan()
    shown = Shown(plan.placed("line"), plan, None, LIGHT)
    assert CoaxPicture._heights(shown) == pytest.approx([UNIT_HEIGHT] * 2)


def test_swells_follow_while_the_mark_moves(show: Callable[..., Hands]) -> None:
    """An open quarter wave at 868 MHz is half a wave at twice the mark: the entry goes from a node to a crest."""
    sketch = line(WAVE_M / 4)
    sketch.top["sweep"] = {"start_hz": 800e6, "stop_hz": 1800e6, "points": 3}
    hands = show(sketch.plan())
    item = hands.scene.parts["line"]
    assert CoaxPicture._heights(item.shown)[0] == pytest.approx(LEAST_HEIGHT, abs=1e-6)
    width = item.body.width()
    hands.store.edit("Mark", edits.marked(hands.store.plan, 2 * MARK_HZ))
    settled(hands.store)
    assert CoaxPicture._heights(item.shown)[0] == pytest.approx(2 * UNIT_HEIGHT + LEAST_HEIGHT, abs=1e-6)
    assert item.body.width() > width
    assert hands.place("line:2").x() == pytest.approx(item.body.width() / 2 + 6)


# Dials


def unequal(by_deg: float, limit_deg: float | None = 10.0) -> Plan:
    """Two matched legs of which B is longer by some electrical degrees."""
    limits = {} if limit_deg is None else {"phase_balance_deg": limit_deg}
    sketch = Sketch(MARK_HZ, limits=limits)
    sketch.add("radio", "radio")
    sketch.add("tee", "T1")
    sketch.join("radio:1", "T1:1")
    for n, (name, degrees) in enumerate((("A", 100.0), ("B", 100.0 + by_deg)), start=2):
        sketch.coax(degrees / 360 * WAVE_M, part_id=f"leg {name}")
        sketch.antenna(50, name)
        sketch.join(f"T1:{n}", f"leg {name}:1", f"leg {name}:2", f"{name}:1")
    return sketch.plan()


@pytest.mark.parametrize(
    ("by_deg", "limit_deg", "state"), [(9.8, 10.0, "holds"), (10.2, 10.0, "fails"), (10.2, None, "")]
)
def test_needles_stand_as_far_from_the_middle_as_the_currents(
    show: Callable[..., Hands], by_deg: float, limit_deg: float | None, state: str
) -> None:
    """The longer leg lags. Each takes 4/9 of the power: 25 ohm on 50 ohm reflects 1/9."""
    hands = show(unequal(by_deg, limit_deg))
    for antenna, side, sign in (("A", 1, "+"), ("B", -1, "−")):
        shown = hands.scene.parts[antenna].shown
        assert shown.dial is not None
        assert shown.dial.from_middle_deg == pytest.approx(side * by_deg / 2)
        assert shown.dial.of_largest == pytest.approx(1)
        assert shown.dial.share == pytest.approx(4 / 9)
        assert shown.dial.share == hands.store.answer.mark.antenna_share[0]["AB".index(antenna)]
        picture = PICTURES["antenna"]
        assert picture.state(shown) == state
        assert picture.detail(shown) == f"44.4 %  {sign}{by_deg / 2:.1f}°"
    holds = [v.holds for v in hands.store.answer.verdicts if v.limit == "phase_balance_deg"]
    assert holds == ([] if limit_deg is None else [state == "holds"])


def test_a_needle_is_as_long_as_its_current(show: Callable[..., Hands]) -> None:
    """100 ohm beside 50 ohm on one joint: the same voltage, half the current."""
    sketch = Sketch(MARK_HZ)
    sketch.add("radio", "radio")
    sketch.add("tee", "T1")
    sketch.join("radio:1", "T1:1", "T1:2", f"{sketch.antenna(50, 'A')}:1", "T1:3", f"{sketch.antenna(100, 'B')}:1")
    hands = show(sketch.plan())
    dials = [hands.scene.parts[i].shown.dial for i in ("A", "B")]
    assert [d.of_largest for d in dials] == pytest.approx([1, 0.5])
    hands.store.edit("Open", edits.unjoined(hands.store.plan, (Port("T1", 3), Port("B", 1))))
    settled(hands.store)
    assert PICTURES["antenna"].detail(hands.scene.parts["B"].shown) == "not driven"


@pytest.mark.parametrize(("degrees", "x", "y"), [(0, 1, 0), (90, 0, -1), (-90, 0, 1), (180, -1, 0)])
def test_a_needle_turns_against_the_clock_from_the_right(degrees: float, x: int, y: int) -> None:
    plan = unequal(0, 10.0)
    shown = Shown(plan.placed("A"), plan, None, LIGHT, dial=Dial(degrees, 1.0, 0.5))
    image = QImage(100, 100, QImage.Format.Format_ARGB32)
    image.fill(QColor(LIGHT.card))
    painter = QPainter(image)
    painter.translate(50, 50)
    PICTURES["antenna"].paint(painter, shown)
    painter.end()
    tips = {(dx, dy): image.pixelColor(50 + dx * 30, 50 + dy * 30) for dx, dy in ((1, 0), (0, -1), (0, 1), (-1, 0))}
    ink = [place for place, colour in tips.items() if colour == QColor(LIGHT.fails)]
    assert RADIUS > 31
    assert ink == ([(x, y)] if degrees else [])
    assert (tips[1, 0] == QColor(LIGHT.holds)) == (degrees == 0)


# Flags


def flags(hands: Hands) -> dict[str, str]:
    """What the flags say, by the join's first port."""
    return {str(join[0]): item._words for join, item in hands.scene.flags.items()}


def test_flags_tell_what_the_wave_sees(show: Callable[..., Hands]) -> None:
    """Two matched 50 ohm legs: 50 ohm into each, 25 ohm into the joint; a selected part's joins carry flags too."""
    hands = show(plan())
    assert flags(hands) == {"radio:1": "25 + j0 Ω", "T1:2": "50 + j0 Ω", "T1:3": "50 + j0 Ω"}
    hands.store.select(("A",))
    assert flags(hands)["leg A:2"] == "50 + j0 Ω"
    hands.store.select(())
    assert "leg A:2" not in flags(hands)
    hands.store.edit("Short", edits.removed(hands.store.plan, ["A"]))
    settled(hands.store)
    deg = 360 * 0.1 / WAVE_M  # the open leg is -j 50 cot of its length, beside 50 ohm
    both = 1 / (1 / 50 + 1 / (-50j / math.tan(math.radians(deg))))
    assert flags(hands)["radio:1"] == f"{round(both.real, 1):g} + j{round(both.imag, 1):g} Ω"
    assert hands.store.answer.mark.port_impedance_ohm["radio:1"][0] == pytest.approx(both)


def test_a_flag_stands_at_its_join_and_follows(show: Callable[..., Hands]) -> None:
    hands = show(plan())
    flag = hands.scene.flags[Port("T1", 2), Port("leg A", 1)]
    assert flag.pos() == hands.place("leg A:1")
    hands.drag("leg A", (408, -228))
    assert flag.pos() == hands.place("leg A:1")


def test_unsolved_and_unreached_joins_carry_no_flags(show: Callable[..., Hands]) -> None:
    hands = show(edits.unjoined(plan(), (Port("T1", 3), Port("leg B", 1))))
    hands.store.select(("leg B",))
    assert "leg B:2" not in flags(hands)
    hands.store.edit("Spoil", edits.changed_part(hands.store.plan, "leg A", cable="none such"))
    settled(hands.store)
    assert flags(hands) == {}


# Problems


def test_a_problem_marks_its_part(show: Callable[..., Hands]) -> None:
    hands = show(edits.changed_part(plan(), "leg A", cable="<b>none</b>"))
    assert [i for i, item in hands.scene.parts.items() if item.trouble] == ["leg A"]
    tip = hands.scene.parts["leg A"].toolTip()
    assert "&lt;b&gt;none&lt;/b&gt;" in tip
    assert "<b>" not in tip
    assert hands.scene.parts["leg B"].toolTip() == ""
    assert PICTURES["coax"].detail(hands.scene.parts["leg A"].shown).startswith("no cable <b>none</b>")
    hands.store.edit("Mend", plan())
    settled(hands.store)
    assert not any(item.trouble for item in hands.scene.parts.values())


def test_open_ports_are_marked(show: Callable[..., Hands]) -> None:
    hands = show(plan())
    found = {i: item.open_ports for i, item in hands.scene.parts.items() if item.open_ports}
    assert found == {"T1": {4}, "pad": {1, 2}}
    assert "Port 4 is tied to nothing." in hands.scene.parts["T1"].toolTip()
    hands.drag("pad:1", "T1:4")
    assert (hands.scene.parts["T1"].open_ports, hands.scene.parts["pad"].open_ports) == (set(), {2})


# Paint


NAMES = {
    "markup": "<b>bold</b><img src='x'/>&amp;",
    "long": "left-hand dipole of the upper bay, " * 6,
    "control": "a\nb\tc\x00d\x1b[31m\u2028e\u202ef",
    "no words": "\u0301\u200d📡",
}


def all_kinds(name: str = "") -> Plan:
    """Every kind of part, tied to nothing, with a problem at one of them."""
    parts = [
        {"id": kind, "kind": kind, "label": name, "at": [250 * (n % 4), 160 * (n // 4)], **LEAST[kind]}
        for n, kind in enumerate(KINDS)
    ]
    return parse_plan(json.dumps(plan_document(*parts)).encode())


@pytest.mark.parametrize("look", [LIGHT, DARK], ids=lambda look: look.name)
def test_every_kind_is_painted_in_both_themes(show: Callable[..., Hands], look: Look) -> None:
    hands = show(all_kinds(), look)
    hands.store.select(tuple(KINDS))
    hands.view.fit()
    image = hands.view.grab().toImage()
    assert image.pixelColor(3, 3) == QColor(look.paper)
    for kind in KINDS:
        where = QRectF(hands.pixel(kind), hands.pixel(kind)).adjusted(-30, -25, 30, 25).toRect()
        colours = {
            image.pixel(x, y) for x in range(where.left(), where.right()) for y in range(where.top(), where.bottom())
        }
        assert len(colours) > 10, f"nothing is drawn for {kind}"


@pytest.mark.parametrize("name", NAMES.values(), ids=NAMES.keys())
@pytest.mark.parametrize("kind", KINDS)
def test_no_name_is_drawn_outside_its_part_or_as_markup(qapp: QApplication, kind: str, name: str) -> None:
    plan = all_kinds(name)
    item = PartItem(Shown(plan.placed(kind), plan, None, LIGHT))
    item.selected = item.trouble = True
    item.open_ports = frozenset({1})
    assert item.shown.name == "".join(c if c.isprintable() else " " for c in name)
    bounds = item.boundingRect().toAlignedRect()
    for scale in (1.0, 0.3):
        image = QImage(bounds.width() + 200, bounds.height() + 200, QImage.Format.Format_ARGB32_Premultiplied)
        image.fill(Qt.GlobalColor.transparent)
        painter = QPainter(image)
        painter.scale(scale, scale)
        painter.translate(QPointF(100 - bounds.left(), 100 - bounds.top()))
        item.paint(painter, QStyleOptionGraphicsItem())
        painter.end()
        painted = np.frombuffer(image.constBits(), np.uint8).reshape(image.height(), image.width(), 4)[..., 3] > 0
        inside = np.zeros_like(painted)
        low, right, bottom = round(100 * scale), (100 + bounds.width()) * scale, (100 + bounds.height()) * scale
        inside[low - 1 : math.ceil(bottom) + 1, low - 1 : math.ceil(right) + 1] = True
        assert painted[inside].any()
        assert not painted[~inside].any()


def test_another_theme_repaints_everything(show: Callable[..., Hands]) -> None:
    hands = show(plan())
    hands.view.grab()
    hands.view.set_look(DARK)
    image = hands.view.grab().toImage()
    assert image.pixelColor(3, 3) == QColor(DARK.paper)
    assert {item.shown.look.name for item in hands.scene.parts.values()} == {"dark"}
    looks = {item.look.name for item in (*hands.scene.joins.values(), *hands.scene.flags.values())}
    assert looks == {"dark"}
    light = {QColor(c).rgb() for c in (LIGHT.paper, LIGHT.ink)}
    seen = {image.pixel(x, y) for x in range(0, image.width(), 3) for y in range(0, image.height(), 3)}
    assert not seen & light

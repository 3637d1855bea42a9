"""Plans for tests: a small builder, random plans for Hypothesis, and changes that must not change the answer."""

from __future__ import annotations

import dataclasses
import json
from collections.abc import Sequence
from typing import Any

import numpy as np
from hypothesis import strategies as st

from feedlib.parts import Coax, Tee
from feedlib.plan import Placed, Plan, Port
from feedlib.plan_file import parse_plan

LOW_HZ, HIGH_HZ = 1e8, 1e9
"""Random plans stay between these; random measured data covers a little more."""


class Sketch:
    """A plan under construction: parts by kind and fields as in the plan file, joins by port names."""

    def __init__(self, start_hz: float = 868e6, stop_hz: float | None = None, points: int = 1, **top: Any) -> None:
        band = {"start_hz": start_hz, "stop_hz": stop_hz or start_hz, "points": points}
        if "mark_hz" in top:
            band["mark_hz"] = top.pop("mark_hz")
        self.top: dict[str, Any] = {"format": "feedwright-plan", "version": 1, "band": band, "cables": {}, **top}
        self.parts: list[dict[str, Any]] = []
        self.joins: list[list[str]] = []

    def add(self, kind: str, part_id: str | None = None, **fields: Any) -> str:
        """The id of a new part; complex fields are given as complex."""
        part_id = part_id or f"{kind} {len(self.parts)}"
        self.parts.append({"id": part_id, "kind": kind, **{k: _json(v) for k, v in fields.items()}})
        return part_id

    def coax(
        self,
        length_m: float,
        z0_ohm: float = 50,
        part_id: str | None = None,
        velocity_factor: float = 1,
        skin_db_per_100m: float = 0,
        dielectric_db_per_100m: float = 0,
        **fields: Any,
    ) -> str:
        """A coax with a cable of its own; lossless unless told otherwise."""
        part_id = part_id or f"coax {len(self.parts)}"
        self.top["cables"][part_id] = {
            "z0_ohm": z0_ohm,
            "velocity_factor": velocity_factor,
            "skin_db_per_100m": skin_db_per_100m,
            "dielectric_db_per_100m": dielectric_db_per_100m,
        }
        return self.add("coax", part_id, cable=part_id, length_m=length_m, **fields)

    def antenna(self, z_ohm: complex = 50, part_id: str | None = None, **fields: Any) -> str:
        """An antenna of fixed impedance."""
        return self.add("antenna", part_id, impedance={"fixed_ohm": _json(complex(z_ohm))}, **fields)

    def join(self, *ports: str) -> None:
        """Tie ports two by two, in the order given: first to second, third to fourth ..."""
        self.joins.extend([a, b] for a, b in zip(ports[::2], ports[1::2], strict=True))

    def plan(self) -> Plan:
        """The plan, read as from a file."""
        return parse_plan(json.dumps({**self.top, "parts": self.parts, "joins": self.joins}).encode())


def _json(value: Any) -> Any:
    return [value.real, value.imag] if isinstance(value, complex) else value


def touchstone(frequency_hz: Sequence[float], s: np.ndarray, reference_ohm: Sequence[float]) -> dict[str, str]:
    """A version 2 file of s (F, P, P) as the plan file holds it."""
    ports = s.shape[-1]
    head = ["[Version] 2.0", "# Hz S RI R 50", f"[Number of Ports] {ports}"]
    if ports == 2:
        head.append("[Two-Port Data Order] 12_21")
    head += [
        f"[Number of Frequencies] {len(frequency_hz)}",
        "[Reference] " + " ".join(repr(float(r)) for r in reference_ohm),
        "[Network Data]",
    ]
    rows = []
    for f, matrix in zip(frequency_hz, s, strict=True):
        lines = [" ".join(f"{float(x.real)!r} {float(x.imag)!r}" for x in row) for row in matrix]
        if ports < 3:
            lines = [" ".join(lines)]
        rows += [f"{float(f)!r} {lines[0]}", *lines[1:]]
    return {"name": f"random.s{ports}p", "text": "\n".join([*head, *rows, "[End]", ""])}


def passive_s(seed: int, ports: int, count: int, largest: float, symmetric: bool) -> np.ndarray:
    """Random matrices (count, P, P) whose largest singular value is `largest`."""
    random = np.random.default_rng(seed)
    s = random.normal(size=(count, ports, ports)) + 1j * random.normal(size=(count, ports, ports))
    if symmetric:
        s = s + s.transpose(0, 2, 1)
    return s * (largest / np.linalg.norm(s, 2, axis=(1, 2)))[:, None, None]


# Random plans


def number(low: float, high: float) -> st.SearchStrategy[float]:
    """Numbers of a range, its ends included, none of them subnormal or strange."""
    return st.floats(low, high, allow_subnormal=False)


def frequency() -> st.SearchStrategy[float]:
    """Whole hertz, so that linspace hits its ends."""
    return st.integers(int(LOW_HZ), int(HIGH_HZ)).map(float)


@st.composite
def complex_ohm(draw: st.DrawFn, low: float = 1.0) -> complex:
    """An impedance with a real part of at least `low`."""
    return complex(draw(number(low, 300)), draw(st.sampled_from([0.0, 1.0])) * draw(number(-200, 200)))


@st.composite
def data_file(draw: st.DrawFn, ports: int, *, reciprocal: bool = False) -> dict[str, str]:
    """A passive measured N-port with references of its own."""
    points = draw(st.sampled_from([[9e7, 1.1e9], [8e7, 3.3e8, 1e9], [1e8, 2e8, 5.5e8, 1.2e9]]))
    s = passive_s(
        draw(st.integers(0, 10**6)),
        ports,
        len(points),
        draw(number(0.2, 0.98)),
        reciprocal or draw(st.booleans()),
    )
    return touchstone(points, s, [draw(st.sampled_from([50.0, 75.0, 12.5])) for _ in range(ports)])


def add_coax(draw: st.DrawFn, sketch: Sketch, *, tie: bool = False) -> str:
    """A random coax; a tie has a length and some loss, so that it may close a loop."""
    lossy = tie or draw(st.booleans())
    length = draw(number(0.02, 2.0)) if tie else draw(st.one_of(st.just(0.0), number(0, 2.0), number(0, 30.0)))
    end = st.one_of(
        st.none(),
        st.builds(
            lambda z, vf, length: {"z0_ohm": z, "velocity_factor": vf, "length_m": length},
            number(10, 150),
            number(0.5, 1),
            st.one_of(st.just(0.0), number(0, 0.02)),
        ),
    )
    ends = [draw(end), draw(end)] if draw(st.booleans()) else [None, None]
    return sketch.coax(
        length,
        draw(st.sampled_from([50, 75, 93, 25.5])),
        velocity_factor=draw(number(0.5, 1)),
        skin_db_per_100m=draw(number(0.5, 20)) if lossy else 0,
        dielectric_db_per_100m=draw(number(0, 0.05)) if lossy else 0,
        ends=ends,
    )


def add_lumped(draw: st.DrawFn, sketch: Sketch) -> str:
    """R, L, C in any number, place and wiring; never a dead short."""
    fields = {"r_ohm": number(1, 500), "l_h": number(1e-9, 1e-7), "c_f": number(1e-13, 2e-11)}
    chosen = draw(st.lists(st.sampled_from(list(fields)), min_size=1, max_size=3, unique=True))
    return sketch.add(
        "lumped",
        place=draw(st.sampled_from(["series", "shunt"])),
        wiring=draw(st.sampled_from(["series", "parallel"])),
        **{name: draw(fields[name]) for name in chosen},
    )


def add_splitter(draw: st.DrawFn, sketch: Sketch) -> tuple[str, int]:
    """Any form: (id, ports)."""
    form = draw(st.sampled_from(["wilkinson", "resistive", "branch_line", "rat_race"]))
    fields: dict[str, Any] = {"form": form, "z0_ohm": draw(st.sampled_from([50, 75])), "centre_hz": draw(frequency())}
    ports = 4
    if form in ("wilkinson", "resistive"):
        fields["outputs"] = draw(st.integers(2, 4))
        ports = fields["outputs"] + 1
    return sketch.add("splitter", **fields), ports


GROWTH = ("coax", "coax", "coax", "tee", "tee", "splitter", "lumped", "pad", "transformer", "measured")


def add_part(draw: st.DrawFn, sketch: Sketch, *, reciprocal: bool) -> tuple[str, int]:
    """A random part with two ports or more: (id, ports)."""
    kind = draw(st.sampled_from(GROWTH))
    if kind == "coax":
        return add_coax(draw, sketch), 2
    if kind == "tee":
        ports = draw(st.integers(3, 6))
        return sketch.add("tee", ports=ports), ports
    if kind == "splitter":
        return add_splitter(draw, sketch)
    if kind == "lumped":
        return add_lumped(draw, sketch), 2
    if kind == "pad":
        return sketch.add("pad", loss_db=draw(number(0, 12)), z0_ohm=draw(st.sampled_from([50, 75]))), 2
    if kind == "transformer":
        return sketch.add("transformer", ratio=draw(st.sampled_from([-1, 1])) * draw(number(0.3, 3))), 2
    ports = draw(st.integers(2, 3))
    return sketch.add("measured", touchstone=draw(data_file(ports, reciprocal=reciprocal))), ports


def add_antenna(draw: st.DrawFn, sketch: Sketch) -> str:
    """An antenna of any kind with a random target."""
    how = draw(st.sampled_from(["fixed_ohm", "resonant", "touchstone"]))
    impedance: Any
    if how == "fixed_ohm":
        impedance = _json(draw(complex_ohm()))
    elif how == "resonant":
        impedance = {"r_ohm": draw(number(5, 200)), "f0_hz": draw(frequency()), "q": draw(number(0, 20))}
    else:
        impedance = draw(data_file(1))
    target = {"amplitude": draw(number(0.1, 4)), "phase_deg": draw(number(-400, 400))}
    return sketch.add("antenna", impedance={how: impedance}, target=target)


def joined(draw: st.DrawFn, sketch: Sketch, a: str, b: str) -> None:
    """A join written in either order."""
    sketch.join(*((a, b) if draw(st.booleans()) else (b, a)))


def grow(draw: st.DrawFn, sketch: Sketch, start: str, steps: int, *, reciprocal: bool) -> list[str]:
    """Hang parts on a port, each on a random open port by a random port of its own: the ports left open."""
    open_ports = [start]
    for _ in range(steps):
        if not open_ports:
            break
        at = open_ports.pop(draw(st.integers(0, len(open_ports) - 1)))
        part, ports = add_part(draw, sketch, reciprocal=reciprocal)
        mine = draw(st.integers(1, ports))
        joined(draw, sketch, at, f"{part}:{mine}")
        open_ports += [f"{part}:{n}" for n in range(1, ports + 1) if n != mine]
    return open_ports


def finish(draw: st.DrawFn, sketch: Sketch, open_ports: list[str], antennas: int) -> int:
    """Put antennas, loads, measured one-ports, or nothing at the open ports: how many antennas there are."""
    short_left = True
    for port in open_ports:
        wanted = ["antenna"] * 5 if antennas < 8 else []
        end = draw(st.sampled_from([*wanted, "nothing", "load", "measured", *(["short"] * short_left)]))
        if end == "antenna":
            joined(draw, sketch, port, f"{add_antenna(draw, sketch)}:1")
            antennas += 1
        elif end == "load":
            joined(draw, sketch, port, f"{sketch.add('load', impedance_ohm=draw(complex_ohm()))}:1")
        elif end == "measured":
            joined(draw, sketch, port, f"{sketch.add('measured', touchstone=draw(data_file(1)))}:1")
        elif end == "short":
            joined(draw, sketch, port, f"{sketch.add('load', impedance_ohm=0j)}:1")
            short_left = False  # a second one could close a loop of shorts, which is refused
    return antennas


@st.composite
def random_plans(draw: st.DrawFn, *, rings: bool = True, reciprocal: bool = False, loose: bool = True) -> Plan:
    """Any plan that can be solved: a random tree, up to three ties that close rings, and pieces hanging loose.

    reciprocal : measured parts of two ports and more are reciprocal.
    """
    start, stop = sorted([draw(frequency()), draw(frequency())])
    points = draw(st.integers(1, 5))
    sketch = Sketch(
        start,
        start if points == 1 else stop,
        points,
        mark_hz=draw(frequency()),
        channels=[{"name": f"channel {n}", "hz": draw(frequency())} for n in range(draw(st.integers(0, 2)))],
        reference_ohm=draw(st.sampled_from([50, 75, 30.5])),
    )
    if draw(st.booleans()):
        sketch.top["sweep"] = {"start_hz": LOW_HZ, "stop_hz": HIGH_HZ, "points": draw(st.integers(2, 4))}
    impedance = draw(st.one_of(st.just(50 + 0j), complex_ohm(5)))
    radio = sketch.add("radio", impedance_ohm=impedance, power_w=draw(number(0.01, 100)))
    steps = draw(st.sampled_from([5, 0, 1, 2, 3, 4, 6, 7, 8, 9, 10, 12]))
    open_ports = grow(draw, sketch, f"{radio}:1", steps, reciprocal=reciprocal)
    for _ in range(draw(st.sampled_from([2, 0, 1, 3])) if rings else 0):
        if len(open_ports) < 2:
            break
        a, b = (open_ports.pop(draw(st.integers(0, len(open_ports) - 1))) for _ in range(2))
        tie = add_coax(draw, sketch, tie=True)
        joined(draw, sketch, a, f"{tie}:1")
        joined(draw, sketch, b, f"{tie}:2")
    antennas = finish(draw, sketch, open_ports, 0)
    if loose and antennas < 6 and draw(st.booleans()):
        add_antenna(draw, sketch)
        first = add_antenna(draw, sketch)
        rest = grow(draw, sketch, f"{first}:1", draw(st.integers(0, 3)), reciprocal=reciprocal)
        finish(draw, sketch, rest, antennas + 2)
    plan = sketch.plan()
    parts = draw(st.permutations(plan.parts)) if draw(st.booleans()) else plan.parts
    return dataclasses.replace(plan, parts=tuple(parts))


# The same harness in another way


def with_parts(plan: Plan, parts: list[Placed], joins: list[tuple[Port, Port]]) -> Plan:
    """The plan with other parts and joins."""
    return dataclasses.replace(plan, parts=tuple(parts), joins=tuple(joins))


def plain_coaxes(plan: Plan) -> list[str]:
    """Ids of the sections without ends that have a length."""
    return [
        p.id for p in plan.parts if isinstance(p.part, Coax) and p.part.ends == (None, None) and p.part.length_m > 0
    ]


def moved(port: Port, moves: dict[Port, Port]) -> Port:
    """Where a port has gone."""
    return moves.get(port, port)


def turned(plan: Plan, part_id: str) -> Plan:
    """The plan with a two-port turned end for end."""
    swap = {Port(part_id, 1): Port(part_id, 2), Port(part_id, 2): Port(part_id, 1)}
    return with_parts(plan, list(plan.parts), [(moved(a, swap), moved(b, swap)) for a, b in plan.joins])


def cut(plan: Plan, part_id: str, fraction: float) -> Plan:
    """The plan with a coax cut in two; the new piece is called "cut" and has what was port 2."""
    whole = plan.placed(part_id)
    length = whole.part.length_m
    pieces = {
        part_id: dataclasses.replace(whole.part, length_m=length * fraction),
        "cut": dataclasses.replace(whole.part, length_m=length * (1 - fraction)),
    }
    parts = [dataclasses.replace(p, part=pieces[part_id]) if p.id == part_id else p for p in plan.parts]
    moves = {Port(part_id, 2): Port("cut", 2)}
    joins = [(moved(a, moves), moved(b, moves)) for a, b in plan.joins]
    return with_parts(plan, [*parts, Placed("cut", pieces["cut"])], [*joins, (Port(part_id, 2), Port("cut", 1))])


def doubled(plan: Plan, part_id: str) -> Plan:
    """The plan with a coax replaced by two of twice its impedance side by side between two tees: a ring."""
    placed = plan.placed(part_id)
    cable = plan.cables[placed.part.cable]
    twice = dataclasses.replace(placed.part, cable="twice")
    tee = Tee()
    parts = [dataclasses.replace(p, part=twice) if p.id == part_id else p for p in plan.parts]
    parts += [Placed("beside", twice), Placed("split 1", tee), Placed("split 2", tee)]
    moves = {Port(part_id, n): Port(f"split {n}", 1) for n in (1, 2)}
    joins = [(moved(a, moves), moved(b, moves)) for a, b in plan.joins]
    joins += [(Port(f"split {n}", arm), Port(name, n)) for n in (1, 2) for arm, name in ((2, part_id), (3, "beside"))]
    cables = {**plan.cables, "twice": dataclasses.replace(cable, z0_ohm=2 * cable.z0_ohm)}
    return dataclasses.replace(with_parts(plan, parts, joins), cables=cables)

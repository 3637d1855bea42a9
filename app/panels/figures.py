"""The figures of one part at the marked frequency, as rows of words. Knows no widgets."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from app.editing.wording import (
    format_angle,
    format_current,
    format_db,
    format_impedance,
    format_share,
    format_voltage,
)
from app.panels.around import mates_of
from feedlib import Answer, Plan
from feedlib.conventions import guided_wavelength_m
from feedlib.graph import joins_away
from feedlib.parts import Antenna, Coax, Part, Radio
from feedlib.plan import Placed, Port

MOST_PORTS = 8
SWELL_STEP_DEG = 5.0
MOST_SWELL_POINTS = 4001


class Row(NamedTuple):
    """One figure; meaning : what its name stands for, where a word is not enough."""

    name: str
    value: str
    meaning: str = ""


def figure_rows(answer: Answer, part_id: str) -> list[Row]:
    """The figures of a part; none for a part that the answer does not know."""
    placed = next((p for p in answer.plan.parts if p.id == part_id), None)
    if placed is None:
        return []
    special = _SPECIAL.get(type(placed.part))
    if special is not None:
        return special(answer, placed)
    return _BY_PORTS.get(placed.part.ports, _branching)(answer, placed)


def near_port(plan: Plan, part_id: str) -> int | None:
    """The number of the port through which the radio reaches a part, or None."""
    radio = next((p.id for p in plan.parts if isinstance(p.part, Radio)), None)
    away = joins_away(plan, radio) if radio is not None else {}
    for number, mate in mates_of(plan, part_id).items():
        if mate.part in away and away[mate.part] < away[part_id]:
            return number
    return None


def _radio(answer: Answer, placed: Placed) -> list[Row]:
    return_loss_db = float(answer.mark.return_loss_db[0])
    return [
        _impedance(answer, "sees", Port(placed.id, 1), "Impedance that it is loaded with"),
        Row("return loss", format_db(return_loss_db)),
        Row("VSWR", _vswr(return_loss_db)),
        Row("reflected", format_share(float(answer.mark.reflected_share[0])), "Share of the available power"),
    ]


def _antenna(answer: Answer, placed: Placed) -> list[Row]:
    current_a = complex(answer.mark.current_a(f"{placed.id}:1")[0])
    share = float(answer.mark.antenna_share[0, answer.antenna_ids.index(placed.id)])
    phase = format_angle(math.degrees(math.atan2(current_a.imag, current_a.real))) if current_a else "—"
    return [
        _impedance(answer, "impedance", Port(placed.id, 1)),
        Row("current", format_current(abs(current_a)), "Into the antenna, rms"),
        Row("phase", phase, "Of the current, against the radio's open-circuit voltage"),
        Row("takes", f"{format_share(share)} of the power", "Share of the available power"),
    ]


def _end(answer: Answer, placed: Placed) -> list[Row]:
    share = float(answer.mark.part_loss_share[placed.id][0])
    return [
        _impedance(answer, "impedance", Port(placed.id, 1)),
        Row("takes", f"{format_share(share)} of the power", "Share of the available power"),
    ]


def _through(answer: Answer, placed: Placed) -> list[Row]:
    near = near_port(answer.plan, placed.id)
    if near is None:
        return [Row("from the radio", "not reached")]
    return [
        _impedance(answer, "sees", Port(placed.id, 3 - near), "Impedance that its far end is loaded with"),
        _impedance(answer, "shows", Port(placed.id, near), "Impedance at its end towards the radio"),
        *_loss(answer, placed, near),
    ]


def _coax(answer: Answer, placed: Placed) -> list[Row]:
    rows = _through(answer, placed)
    part, plan = placed.part, answer.plan
    assert isinstance(part, Coax)
    wavelength_m = guided_wavelength_m(plan.band.marked_hz, plan.cables[part.cable].velocity_factor)
    points = min(max(33, math.ceil(360 / SWELL_STEP_DEG * part.length_m / wavelength_m)), MOST_SWELL_POINTS)
    swell = answer.swell(placed.id, points)
    if swell is not None:
        highest_v = float(np.abs(swell[1]).max())
        rows.insert(2, Row("highest voltage", format_voltage(highest_v), "Along the cable, rms"))
    return rows


def _branching(answer: Answer, placed: Placed) -> list[Row]:
    near = near_port(answer.plan, placed.id)
    if near is None:
        return [Row("from the radio", "not reached")]
    rows = [_impedance(answer, "sees", Port(placed.id, near), "Impedance at its port towards the radio")]
    others = [port for port in placed.ports() if port.number != near]
    rows += [_impedance(answer, f"at port {port.number}", port) for port in others[:MOST_PORTS]]
    if len(others) > MOST_PORTS:
        rows.append(Row("", f"and {len(others) - MOST_PORTS} ports more"))
    return rows + _loss(answer, placed, near)


def _loss(answer: Answer, placed: Placed, near: int) -> list[Row]:
    """What a part takes out of the power that enters it; nothing where no part of it can lose any."""
    lost = float(answer.mark.part_loss_share[placed.id][0])
    if abs(lost) < 1e-12:
        return []
    port = f"{placed.id}:{near}"
    entering_w = float((answer.mark.voltage_v(port) * answer.mark.current_a(port).conj()).real[0])
    rest = 1 - lost * _available_w(answer.plan) / entering_w if entering_w > 0 else math.nan
    loss_db = -10 * math.log10(rest) if rest > 0 else math.inf if rest <= 0 else math.nan
    return [
        Row("loses", format_db(loss_db), "Of the power that enters it"),
        Row("", f"{format_share(lost)} of the power", "Share of the available power"),
    ]


def _available_w(plan: Plan) -> float:
    return next(p.part.power_w for p in plan.parts if isinstance(p.part, Radio))


def _impedance(answer: Answer, name: str, port: Port, meaning: str = "") -> Row:
    return Row(name, format_impedance(complex(answer.mark.impedance_ohm(str(port))[0])), meaning)


def _vswr(return_loss_db: float) -> str:
    """(1 + |gamma|)/(1 - |gamma|) in words."""
    gamma = 10 ** (-return_loss_db / 20)
    if not gamma < 1:
        return "—" if math.isnan(gamma) else "∞"
    vswr = (1 + gamma) / (1 - gamma)
    return f"{vswr:.2f}" if vswr < 10 else f"{vswr:.4g}"


_SPECIAL: dict[type[Part], Callable[[Answer, Placed], list[Row]]] = {Radio: _radio, Antenna: _antenna, Coax: _coax}
_BY_PORTS: dict[int, Callable[[Answer, Placed], list[Row]]] = {1: _end, 2: _through}

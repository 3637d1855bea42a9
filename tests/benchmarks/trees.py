"""Plans for the benchmarks: binary trees of T joints with quarter-wave sections, a feeder and antenna legs."""

from __future__ import annotations

from feedlib import Plan
from feedlib.parts import Antenna, AntennaImpedance, Coax, Part, Radio, Tee
from feedlib.plan import Band, Cable, Join, Limits, Placed, Port

CABLES = {
    "feeder": Cable(z0_ohm=50.0, velocity_factor=0.695, skin_db_per_100m=3.16),
    "match": Cable(z0_ohm=75.0, velocity_factor=0.695, skin_db_per_100m=2.9, dielectric_db_per_100m=0.005),
}


def tree(antennas: int, points: int = 401) -> Plan:
    """Feeder, then levels of T joints with a matching section in each arm, then a leg and an antenna on each."""
    parts: list[tuple[str, Part, tuple[float, float]]] = [("radio", Radio(), (0.0, 0.0))]
    joins: list[Join] = []

    def add(part: Part, behind: Port, x: float, y: float) -> str:
        name = f"{part.KIND} {len(parts)}"
        parts.append((name, part, (x, y)))
        joins.append((behind, Port(name, 1)))
        return name

    def grow(behind: Port, count: int, x: float, y: float) -> None:
        if count == 1:
            leg = add(Coax(cable="feeder", length_m=0.3), behind, x, y)
            add(Antenna(impedance=AntennaImpedance(fixed_ohm=50 + 0j)), Port(leg, 2), x + 280, y)
            return
        joint = add(Tee(), behind, x, y)
        for arm, side in ((2, -1), (3, 1)):
            at = y + side * 75 * count / 2
            match = add(Coax(cable="match", length_m=0.06), Port(joint, arm), x + 190, at)
            grow(Port(match, 2), count // 2, x + 400, at)

    feeder = add(Coax(cable="feeder", length_m=1.25), Port("radio", 1), 250.0, 0.0)
    grow(Port(feeder, 2), antennas, 520.0, 0.0)
    return Plan(
        title=f"{antennas} antennas",
        band=Band(start_hz=860e6, stop_hz=870e6, points=points),
        limits=Limits(return_loss_db=10.0, amplitude_balance_db=0.5, phase_balance_deg=5.0, harness_loss_db=3.0),
        cables=CABLES,
        parts=tuple(Placed(*p) for p in parts),
        joins=tuple(joins),
    )

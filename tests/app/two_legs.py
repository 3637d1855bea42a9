"""The plan that tests of the drawer, the strip and the rail share."""

from __future__ import annotations

import json
from typing import Any

from app.store import Store
from feedlib.plan_file import parse_plan

C = 299_792_458.0


def store(**changes: Any) -> Store:
    """A radio, a T joint and two antennas at 50 ohm cables, the second a tenth of a wave longer at 868 MHz."""
    wave_m = C / 868e6
    antenna = {"kind": "antenna", "impedance": {"fixed_ohm": [50, 0]}}
    data: dict[str, Any] = {
        "format": "feedwright-plan",
        "version": 1,
        "band": {"start_hz": 860e6, "stop_hz": 880e6, "points": 21, "mark_hz": 868e6},
        "limits": {"return_loss_db": 9, "amplitude_balance_db": 0.5, "phase_balance_deg": 40},
        "cables": {"50": {"z0_ohm": 50, "velocity_factor": 1}},
        "parts": [
            {"id": "radio", "kind": "radio"},
            {"id": "T1", "kind": "tee"},
            {"id": "leg A", "kind": "coax", "cable": "50", "length_m": wave_m},
            {"id": "leg B", "kind": "coax", "cable": "50", "length_m": 1.1 * wave_m},
            {"id": "A", **antenna},
            {"id": "B", **antenna},
        ],
        "joins": [
            ["radio:1", "T1:1"],
            ["T1:2", "leg A:1"],
            ["T1:3", "leg B:1"],
            ["leg A:2", "A:1"],
            ["leg B:2", "B:1"],
        ],
        **changes,
    }
    return Store(parse_plan(json.dumps(data).encode()))

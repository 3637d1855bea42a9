"""The cable catalogue: types of coax, their figures, how far to trust them; knows no plan and no screen."""

import csv
import functools
import re
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal

from feedlib.assets_place import ASSETS
from feedlib.errors import FeedError
from feedlib.loss_fit import LossFit, fit_loss

CATALOGUE_FILE = ASSETS / "cables" / "coax.csv"


@dataclass(frozen=True, slots=True)
class CatalogueCable:
    """One type of coax; None where nothing is known.

    ``attenuation_points`` are (f_hz, db_per_100m), ``power_points`` (f_hz, w), both by rising frequency.
    ``max_voltage_v`` is rms. ``from_memory`` names the fields that no document stands behind, attenuation as
    soon as one point is such; ``attenuation_from_memory_hz`` says which points.
    """

    type: str
    m17_sheet: str | None
    z0_ohm: float
    z0_tolerance_ohm: float | None
    velocity_factor: float
    capacitance_f_per_m: float | None
    dielectric: str
    inner_conductor: str
    inner_diameter_m: float | None
    dielectric_diameter_m: float | None
    outer_diameter_m: float | None
    min_bend_radius_m: float | None
    mass_kg_per_m: float | None
    max_temperature_c: float | None
    max_voltage_v: float | None
    attenuation_points: tuple[tuple[float, float], ...]
    power_points: tuple[tuple[float, float], ...]
    max_frequency_hz: float | None
    source_ids: tuple[str, ...]
    notes: str
    from_memory: frozenset[str]
    attenuation_from_memory_hz: frozenset[float]
    fit: LossFit | None

    @property
    def offered(self) -> bool:
        """Whether the type can be put in a plan; without attenuation it would pass for lossless."""
        return self.fit is not None


@functools.cache
def load_catalogue() -> tuple[CatalogueCable, ...]:
    """All types of the catalogue file, in its order."""
    with CATALOGUE_FILE.open(encoding="utf-8", newline="") as file:
        return tuple(_cable(row) for row in csv.DictReader(file))


def figures(cable: CatalogueCable) -> dict[str, float]:
    """The four figures of ``cable`` that a plan keeps, the loss coefficients to 4 significant digits."""
    if cable.fit is None:
        raise FeedError(f"The catalogue has no attenuation for {cable.type}; enter its loss by hand.")
    return {
        "z0_ohm": cable.z0_ohm,
        "velocity_factor": cable.velocity_factor,
        "skin_db_per_100m": float(f"{cable.fit.skin_db_per_100m:.4g}"),
        "dielectric_db_per_100m": float(f"{cable.fit.dielectric_db_per_100m:.4g}"),
    }


# -- from the file's row to a cable ----------------------------------------------------------------

# The notes column marks cells by the file's column names; these are the fields that they became.
_FIELD_OF_MARK = {
    "m17_sheet": "m17_sheet",
    "z0_ohm": "z0_ohm",
    "z0_tol_ohm": "z0_tolerance_ohm",
    "velocity_factor": "velocity_factor",
    "capacitance_pf_per_m": "capacitance_f_per_m",
    "dielectric": "dielectric",
    "inner_conductor": "inner_conductor",
    "inner_diameter_mm": "inner_diameter_m",
    "dielectric_diameter_mm": "dielectric_diameter_m",
    "outer_diameter_mm": "outer_diameter_m",
    "min_bend_radius_mm": "min_bend_radius_m",
    "mass_g_per_m": "mass_kg_per_m",
    "max_temperature_c": "max_temperature_c",
    "max_voltage_v_rms": "max_voltage_v",
    "max_frequency_ghz": "max_frequency_hz",
    "power": "power_points",
}


def _cable(row: dict[str, str]) -> CatalogueCable:
    attenuation = _pairs(row["att_f_mhz"], row["att_db_per_100m"])
    from_memory, attenuation_from_memory_hz = _marks(row["notes"], [f_hz for f_hz, _ in attenuation])
    return CatalogueCable(
        type=row["type"],
        m17_sheet=row["m17_sheet"] or None,
        z0_ohm=_scaled(row["z0_ohm"]),
        z0_tolerance_ohm=_known(row["z0_tol_ohm"]),
        velocity_factor=_scaled(row["velocity_factor"]),
        capacitance_f_per_m=_known(row["capacitance_pf_per_m"], -12),
        dielectric=row["dielectric"],
        inner_conductor=row["inner_conductor"],
        inner_diameter_m=_known(row["inner_diameter_mm"], -3),
        dielectric_diameter_m=_known(row["dielectric_diameter_mm"], -3),
        outer_diameter_m=_known(row["outer_diameter_mm"], -3),
        min_bend_radius_m=_known(row["min_bend_radius_mm"], -3),
        mass_kg_per_m=_known(row["mass_g_per_m"], -3),
        max_temperature_c=_known(row["max_temperature_c"]),
        max_voltage_v=_known(row["max_voltage_v_rms"]),
        attenuation_points=attenuation,
        power_points=_pairs(row["power_f_mhz"], row["power_w"]),
        max_frequency_hz=_known(row["max_frequency_ghz"], 9),
        source_ids=tuple(row["source_id"].split(";")),
        notes=row["notes"],
        from_memory=from_memory,
        attenuation_from_memory_hz=attenuation_from_memory_hz,
        fit=fit_loss(attenuation),
    )


def _scaled(text: str, power_of_ten: int = 0) -> float:
    # Shifting the decimal point before rounding to binary: 12.7 mm is 0.0127 m, without a tail of digits.
    return float(Decimal(text).scaleb(power_of_ten))


def _known(text: str, power_of_ten: int = 0) -> float | None:
    return _scaled(text, power_of_ten) if text else None


def _pairs(frequencies_mhz: str, values: str) -> tuple[tuple[float, float], ...]:
    if not frequencies_mhz:
        return ()
    in_step = zip(frequencies_mhz.split(";"), values.split(";"), strict=True)
    return tuple((_scaled(f_mhz, 6), _scaled(value)) for f_mhz, value in in_step)


def _marks(notes: str, point_hz: Sequence[float]) -> tuple[frozenset[str], frozenset[float]]:
    """The fields, and the frequencies of the attenuation points, that ``notes`` declares unverified."""
    fields: set[str] = set()
    frequencies_hz: set[float] = set()
    for listed in re.findall(r"unverified: ([^.]+)\.", notes):
        for mark in listed.split(", "):
            if mark == "attenuation (all points)":
                frequencies_hz.update(point_hz)
            elif some := re.fullmatch(r"attenuation at ([\d/]+) MHz", mark):
                frequencies_hz.update(_scaled(f_mhz, 6) for f_mhz in some[1].split("/"))
            else:
                fields.add(_FIELD_OF_MARK[mark])
    if frequencies_hz:
        fields.add("attenuation_points")
    return frozenset(fields), frozenset(frequencies_hz)


# -- words for the screen --------------------------------------------------------------------------

# What a builder acts on is named; the rest is counted.
_NAMED = {
    "z0_ohm": "impedance",
    "velocity_factor": "velocity factor",
    "attenuation_points": "attenuation",
    "min_bend_radius_m": "bend radius",
    "max_voltage_v": "voltage",
    "power_points": "power",
}


def quality_sentence(cable: CatalogueCable) -> str:
    """What to think of the figures of ``cable``: how well the loss fits, and what is from memory."""
    if cable.fit is None:
        return "No attenuation data: not offered."
    from_memory = _from_memory_words(cable)
    return _fit_words(cable.fit) + (f"; from memory: {_listed(from_memory)}." if from_memory else ".")


def _fit_words(fit: LossFit) -> str:
    at = f"at {_mhz(fit.worst_frequency_hz)} MHz"
    if fit.points == 1:
        return f"Weak fit: loss known {at} only"
    if fit.weak:
        side = "low" if fit.worst_deviation < 0 else "high"
        return f"Weak fit: loss reads {100 * fit.worst_error:.0f} % {side} {at}"
    return f"Loss fitted to {fit.points} points, worst error {100 * fit.worst_error:.1f} % {at}"


def _from_memory_words(cable: CatalogueCable) -> list[str]:
    words = [name for field, name in _NAMED.items() if field in cable.from_memory]
    recalled_hz, points = sorted(cable.attenuation_from_memory_hz), len(cable.attenuation_points)
    if 0 < len(recalled_hz) < points:
        few = _listed([_mhz(f_hz) for f_hz in recalled_hz]) + " MHz"
        which = few if len(recalled_hz) <= 3 else f"{len(recalled_hz)} of {points} points"
        words[words.index("attenuation")] = f"attenuation at {which}"
    if unnamed := len(cable.from_memory - _NAMED.keys()):
        words.append(f"{unnamed} minor figure{'s' if unnamed > 1 else ''}")
    return words


def _listed(words: Sequence[str]) -> str:
    return " and ".join(filter(None, [", ".join(words[:-1]), words[-1]]))


def _mhz(frequency_hz: float) -> str:
    return f"{frequency_hz / 1e6:g}"

"""Rig files: writing them, reading them back with every default filled in, and what they resolve to.

Knows the TOML layout and the arithmetic of rate, block and hop. Knows no samples and no spectra.
Only what the reference cases use is read, and that is without decimation. Whatever else a rig file
holds stops the run.
"""

import math
import tomllib
from dataclasses import dataclass

# 1 g in m/s², exact by definition (3rd General Conference on Weights and Measures, 1901).
STANDARD_GRAVITY = 9.80665

# Relative slack of every comparison in the arithmetic of rate, spacing and lines.
SLACK = 1e-9

ALLOWED = {
    "source": {"kind", "device", "rate", "full_scale", "channels", "limit"},
    "analysis": {"max_frequency", "min_frequency", "line_spacing", "window", "overlap",
                 "excitation", "averaging", "memory", "estimator"},
    "burst": {"period_s", "trigger_force", "trigger_level", "pre_trigger_s"},
    "periodic": {"period", "settle_periods", "keep_periods"},
    "target": {"random_error", "share", "depth_db"},
    "watch": {"on_fault"},
}
TABLES = ("source", "analysis", "burst", "periodic", "target", "watch")
CHANNEL_REQUIRED = {"channel", "name", "point", "axis", "sensitivity"}
CHANNEL_ALLOWED = CHANNEL_REQUIRED | {"unit", "full_scale", "limit"}
AXES = {sign + letter for sign in "+-" for letter in "xyz"}


@dataclass
class Channel:
    index: int           # 0-based; the file counts from 1
    name: str
    point: str
    axis: str
    unit: str
    sensitivity: float   # volts per unit
    full_scale_v: float
    limit_v: float

    def sign(self):
        return -1.0 if self.axis[0] == "-" else 1.0

    def place(self):
        """Point and axis letter: what a force and its driving-point response share."""
        return self.point, self.axis[1]

    def engineering(self, digital):
        """N or m/s² of digital samples: digital * full_scale / sensitivity, g turned into m/s²."""
        value = digital * self.full_scale_v / self.sensitivity
        return value * STANDARD_GRAVITY if self.unit == "g" else value

    def digital(self, value):
        """The inverse of engineering."""
        if self.unit == "g":
            value = value / STANDARD_GRAVITY
        return value * self.sensitivity / self.full_scale_v


@dataclass
class Rig:
    rate_hz: float
    max_frequency_hz: float
    min_frequency_hz: float
    excitation: str
    window: str
    averaging: str
    memory: int          # 0 with linear averaging
    estimator: str
    decimation: int
    block: int
    hop: int             # 0 with burst and periodic excitation
    burst: dict          # the table with its defaults; empty with another excitation
    periodic: dict       # likewise
    depth_db: float
    forces: list
    responses: list

    def channels(self):
        return self.forces + self.responses

    def spacing_hz(self):
        return self.rate_hz / self.decimation / self.block

    def lines(self):
        """From 0 Hz to the highest line that is not above max_frequency."""
        return math.floor(self.max_frequency_hz / self.spacing_hz() * (1 + SLACK)) + 1

    def judged_lines(self):
        """The lines that can be of interest: from min_frequency on, and beyond those into which
        the window smears what stands at 0 Hz."""
        smear = {"hann": 2, "flattop": 5, "rectangular": 1}[self.window]
        bottom = math.ceil(self.min_frequency_hz / self.spacing_hz() * (1 - SLACK))
        return range(max(bottom, smear + 1), self.lines())

    def driving_points(self):
        """Index of each force's driving-point response, the first in file order; None without."""
        places = [r.place() for r in self.responses]
        return [places.index(f.place()) if f.place() in places else None for f in self.forces]

    def reciprocity_pairs(self):
        """(a, b), a < b, of the forces that both have a driving-point response."""
        with_point = [i for i, o in enumerate(self.driving_points()) if o is not None]
        return [(a, b) for a in with_point for b in with_point if a < b]


def smallest_smooth(wanted):
    """The smallest 2^a 3^b 5^c that is >= wanted; an exact hit is kept."""
    candidate = max(1, math.ceil(wanted * (1 - SLACK)))
    while True:
        rest = candidate
        for prime in (2, 3, 5):
            while rest % prime == 0:
                rest //= prime
        if rest == 1:
            return candidate
        candidate += 1


def resolve(rate_hz, max_frequency_hz, line_spacing_hz, overlap):
    """Decimation, block and hop, the last two in analysis samples."""
    lowest = 2.56 * max_frequency_hz * (1 - SLACK)
    decimation = max(d for d in range(1, 257) if rate_hz / d >= lowest)
    block = smallest_smooth(rate_hz / decimation / line_spacing_hz)
    hop = max(1, math.floor(block * (1 - overlap) + 0.5))
    return decimation, block, hop


def resolve_periodic(rate_hz, max_frequency_hz, period):
    """Decimation and block: a period is a block, so the decimation divides it."""
    lowest = 2.56 * max_frequency_hz * (1 - SLACK)
    decimation = max(d for d in range(1, 257) if period % d == 0 and rate_hz / d >= lowest)
    return decimation, period // decimation


def _burst(table, forces):
    """The table [burst] with its defaults."""
    assert ("period_s" in table) != ("trigger_force" in table), table
    if "period_s" in table:
        assert table.keys() == {"period_s"}, table
        return dict(table)
    result = {"trigger_level": 0.1, "pre_trigger_s": 0.0, **table}
    assert result["trigger_force"] in {f.name for f in forces}, table
    assert 0 < result["trigger_level"] < 1 and result["pre_trigger_s"] >= 0, table
    return result


def _periodic(table):
    """The table [periodic] with its defaults."""
    result = {"settle_periods": 8, "keep_periods": 2, **table}
    assert result["period"] >= 1 and result["settle_periods"] >= 0, table
    assert result["keep_periods"] >= 2, table
    return result


def _literal(value):
    if isinstance(value, str):
        assert '"' not in value and "\\" not in value, value
        return f'"{value}"'
    return repr(value)


def to_toml(rig, heading):
    """The text of a rig file; heading is its comment, one line an item."""
    lines = ["# " + text for text in heading]
    lines += [f"title = {_literal(rig['title'])}"]
    for table in TABLES:
        if table in rig:
            lines += ["", f"[{table}]"]
            lines += [f"{key} = {_literal(value)}" for key, value in rig[table].items()]
    for table in ("force", "response"):
        for channel in rig[table]:
            lines += ["", f"[[{table}]]"]
            lines += [f"{key} = {_literal(value)}" for key, value in channel.items()]
    return "\n".join(lines) + "\n"


def _channel(table, source, default_unit, units):
    assert CHANNEL_REQUIRED <= table.keys() <= CHANNEL_ALLOWED, table
    assert table["axis"] in AXES, table
    assert table["channel"] >= 1, table
    unit = table.get("unit", default_unit)
    assert unit in units, table
    sensitivity = float(table["sensitivity"])
    assert sensitivity != 0 and math.isfinite(sensitivity), table
    full_scale = float(table.get("full_scale", source.get("full_scale", 1.0)))
    limit = float(table.get("limit", source.get("limit", full_scale)))
    assert full_scale > 0 and limit > 0, table
    return Channel(table["channel"] - 1, table["name"], table["point"], table["axis"], unit,
                   sensitivity, full_scale, limit)


def read(path):
    """Reads a rig file. Stops on whatever formats would refuse and on what the cases do not use."""
    with open(path, "rb") as file:
        tables = tomllib.load(file)
    assert tables.keys() <= ALLOWED.keys() | {"title", "force", "response"}, tables.keys()
    for name, allowed in ALLOWED.items():
        assert tables.get(name, {}).keys() <= allowed, tables[name]
    source, analysis = tables["source"], tables["analysis"]
    assert tables.get("watch", {}).get("on_fault", "hold") in ("hold", "carry-on")

    excitation = analysis.get("excitation", "random")
    assert excitation in ("random", "burst", "periodic")
    bounded = excitation != "random"
    for table in ("burst", "periodic"):
        assert (table in tables) == (table == excitation), table
    window = analysis.get("window", "rectangular" if bounded else "hann")
    averaging = analysis.get("averaging", "linear")
    estimator = analysis.get("estimator", "h1")
    overlap = float(analysis.get("overlap", 0.0 if bounded else 0.5))
    assert window in ("hann", "rectangular", "flattop")
    assert averaging in ("linear", "exponential")
    assert ("memory" in analysis) == (averaging == "exponential")
    assert analysis.get("memory", 2) >= 2
    assert estimator in ("h1", "h2", "hv")
    assert 0 <= overlap < 1
    assert not bounded or (window, overlap) == ("rectangular", 0)
    assert excitation != "periodic" or estimator == "h1"
    max_frequency = float(analysis["max_frequency"])
    min_frequency = float(analysis.get("min_frequency", 0.0))
    assert 0 <= min_frequency < max_frequency
    rate = float(source["rate"])

    forces = [_channel(t, source, "N", {"N"}) for t in tables["force"]]
    responses = [_channel(t, source, "m/s^2", {"m/s^2", "g"}) for t in tables["response"]]
    everything = forces + responses
    assert forces and responses
    assert len({c.index for c in everything}) == len(everything), "a channel is used twice"
    assert len({c.name for c in everything}) == len(everything), "a name is used twice"
    highest = max(c.index for c in everything) + 1
    assert source.get("channels", highest) >= highest, "a channel beyond the source's"
    assert estimator != "h2" or len(forces) == len(responses)

    burst = _burst(tables["burst"], forces) if excitation == "burst" else {}
    periodic = _periodic(tables["periodic"]) if excitation == "periodic" else {}
    if periodic:
        decimation, block = resolve_periodic(rate, max_frequency, periodic["period"])
    else:
        decimation, block, hop = resolve(rate, max_frequency, float(analysis["line_spacing"]),
                                         overlap)
    assert decimation == 1, "the references hold for recordings that are not decimated"
    assert not burst or block <= burst.get("period_s", math.inf) * rate / decimation
    return Rig(rate_hz=rate, max_frequency_hz=max_frequency, min_frequency_hz=min_frequency,
               excitation=excitation, window=window, averaging=averaging,
               memory=analysis.get("memory", 0), estimator=estimator, decimation=decimation,
               block=block, hop=0 if bounded else hop, burst=burst, periodic=periodic,
               depth_db=float(tables.get("target", {}).get("depth_db", 20.0)), forces=forces,
               responses=responses)

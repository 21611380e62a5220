"""What a check costs, as ratios against a floor measured in the same run.

    python tests/bench/bench.py [--quick]

The floor is what no checker of YAML specs can do without: the same interpreter imports
PyYAML, jsonschema and numpy, composes the same files with libyaml and validates them
against the same schema. Both run as whole processes, in turns; a line shows the medians,
the median of the paired ratios with the least and the greatest, and the ratio to reach.
Nothing is asserted: seconds belong to a machine, and ratios are for reading.

The specs are invented, seeded and sound, but for a few in a hundred that starve their
Zener. Figures vary freely, so nothing is read from a cache by luck.

The programs compared are the functions under "programs": each is run alone by a fresh
interpreter, so the process that measures imports none of what it measures. It also stays
small: the system counts the memory of a starting process from that of the one it left.
"""

import argparse
import inspect
import json
import os
import statistics
import subprocess
import sys
import tempfile
import threading
import time
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from math import log
from pathlib import Path
from random import Random

ROOT = Path(__file__).resolve().parents[2]
SEED = 20261201
KIND = "zener-shunt"
#: Specs, and pairs of runs: in a full run, and in a quick one (0: left out).
SIZES = {1: (15, 5), 100: (9, 3), 2_000: (5, 3), 10_000: (3, 0)}
#: From this many specs on, a file holds several documents.
MANY, DOCUMENTS = 2_000, 20
#: Seconds after which one program is ended, and after which no further pair is begun.
LIMIT, BUDGET = 300.0, 150.0
#: Seconds the random sampling may take, in a full run and in a quick one.
SAMPLING = (60, 10)
#: The ratios to reach, by specs and measure.
TARGETS = {(1, "wall"): 1.25, (2_000, "wall"): 2.0, (10_000, "peak"): 1.5}

# --- programs: sent to a fresh interpreter as text; imports stand inside on purpose ---


def floor(folder: str, schema: str) -> None:
    """Compose and validate every spec of a folder; sound specs have no errors."""
    import json  # noqa: PLC0415
    import pathlib  # noqa: PLC0415

    import numpy as np  # noqa: F401, PLC0415
    import yaml  # noqa: PLC0415
    from jsonschema import Draft202012Validator  # noqa: PLC0415

    def plain(node: yaml.Node) -> object:
        if isinstance(node, yaml.MappingNode):
            return {key.value: plain(value) for key, value in node.value}
        if isinstance(node, yaml.SequenceNode):
            return [plain(each) for each in node.value]
        return node.value

    validator = Draft202012Validator(json.loads(pathlib.Path(schema).read_text("utf-8")))
    for path in sorted(pathlib.Path(folder).rglob("*.reg.yaml")):
        for root in yaml.compose_all(path.read_bytes(), yaml.CSafeLoader):
            for error in validator.iter_errors(plain(root)):
                raise SystemExit(f"{path}: {error.message}")


def reglint(*arguments: str) -> None:
    """Run the command line as its console script does."""
    import sys  # noqa: PLC0415

    from reglint.cli import main  # noqa: PLC0415

    sys.argv = ["reglint", *arguments]
    main()


def stages(folder: str) -> None:
    """Print the seconds of reading, analysis and report, taken apart inside one process."""
    import datetime  # noqa: PLC0415
    import json  # noqa: PLC0415
    import pathlib  # noqa: PLC0415
    import sys  # noqa: PLC0415
    import time  # noqa: PLC0415

    from reglint import reports  # noqa: PLC0415
    from reglint.finding import Run  # noqa: PLC0415
    from reglint.judge import Wanted, judge  # noqa: PLC0415
    from reglint.project import Project  # noqa: PLC0415

    project = Project(pathlib.Path(folder))
    paths = project.specs([pathlib.Path(folder)])
    project.read(paths[0])  # the knowledge is read with the first spec: that is start-up
    ticks = [time.perf_counter()]
    cases = [case for path in paths for case in project.read(path)[0]]
    ticks.append(time.perf_counter())
    verdicts = judge(cases, Wanted(datetime.date(2026, 12, 1)))
    ticks.append(time.perf_counter())
    reports.renderer("text")(Run(tuple(verdicts), ()), reports.Options())
    ticks.append(time.perf_counter())
    json.dump([end - start for start, end in zip(ticks, ticks[1:], strict=False)], sys.stdout)


def sampling(ranges: str, least_current: str, most_power: str, seconds: str) -> None:
    """Sample until both bounds are reached within 1 %; print when, and how far off they are.

    The circuit's equations stand here a second time: node, soft knee and self-heating,
    solved by Newton's method in the logarithm of the Zener current.
    """
    import json  # noqa: PLC0415
    import sys  # noqa: PLC0415
    import time  # noqa: PLC0415

    import numpy as np  # noqa: PLC0415

    box, at_once = json.loads(ranges), 1 << 16
    i_zt, z_zt, i_zk, z_zk = box["i_zt"], box["z"][1], box["i_zk"], box["z_zk"]
    m = np.log(z_zk / z_zt) / np.log(i_zt / i_zk)
    rng, start = np.random.default_rng(20261201), time.perf_counter()

    def point(p: dict, load: object) -> tuple:
        logarithm = np.log(p["v_s"] / p["r"])
        reference = 25.0 + box["r_th"] * p["v_z"] * i_zt
        for _ in range(40):
            current = np.exp(logarithm)
            x = current / i_zt
            cold = p["v_z"] + i_zt * p["z"] * (x ** (1 - m) - 1) / (1 - m)
            cold += p["s"] * (p["t_a"] - reference)
            warming = 1.0 - p["s"] * box["r_th"] * current
            volts = cold / warming
            excess = (p["v_s"] - volts) / p["r"] - load - current
            rise = p["z"] * x**-m / warming + volts * p["s"] * box["r_th"] / warming
            step = excess / (current * (rise / p["r"] + 1.0))
            logarithm = logarithm + np.clip(step, -2.0, 2.0)
            if np.abs(step).max() < 1e-9:
                break
        return current, volts

    least, most, samples, reached = np.inf, 0.0, 0, {}
    while len(reached) < 2 and time.perf_counter() - start < float(seconds):
        names = ("v_s", "r", "v_z", "z", "s", "t_a", "i_1", "i_2")
        p = {name: rng.uniform(*box[name], at_once) for name in names}
        least = min(least, point(p, p["i_1"] + p["i_2"])[0].min())
        most = max(most, np.multiply(*point(p, 0.0)).max())
        samples += at_once
        off = {"current": least / float(least_current) - 1, "power": 1 - most / float(most_power)}
        now = (samples, time.perf_counter() - start)
        reached |= {name: now for name in off if off[name] <= 0.01 and name not in reached}
    json.dump({"reached": reached, "off": off, "all": now}, sys.stdout)


# --- specs ---

#: V, mA, ohm, mA, ohm: voltage, test point and knee of some rows of the 1N47xxA series.
PARTS = {
    "1N4732A": (4.7, 53.0, 8.0, 1.0, 500.0),
    "1N4733A": (5.1, 49.0, 7.0, 1.0, 550.0),
    "1N4734A": (5.6, 45.0, 5.0, 1.0, 600.0),
    "1N4736A": (6.8, 37.0, 3.5, 1.0, 700.0),
    "1N4738A": (8.2, 31.0, 4.5, 0.5, 700.0),
    "1N4740A": (10.0, 25.0, 7.0, 0.25, 700.0),
}
#: Values of one decade by tolerance in percent: IEC 60063, E24 and E96.
PREFERRED = {
    5: [1.0, 1.1, 1.2, 1.3, 1.5, 1.6, 1.8, 2.0, 2.2, 2.4, 2.7, 3.0]
    + [3.3, 3.6, 3.9, 4.3, 4.7, 5.1, 5.6, 6.2, 6.8, 7.5, 8.2, 9.1],
    1: [round(10 ** (step / 96), 2) for step in range(96)],
}
LOAD_NAMES = ("comparator", "probe", "gauge", "divider", "buzzer", "lamp", "logger", "relay")


def preferred_below(value: float, percent: int) -> float:
    """Return the greatest preferred value that is not above a value."""
    every = [digits * 10**decade for decade in range(5) for digits in PREFERRED[percent]]
    return max(each for each in every if each <= value)


def loads(rng: Random, total: float) -> Iterator[str]:
    """Yield one to four loads that share a current in mA; a few are resistances."""
    names = rng.sample(LOAD_NAMES, rng.randint(1, 4))
    for name in names:
        most = total / len(names) * rng.uniform(0.6, 1.0)
        least = most * rng.uniform(0.0, 0.8)
        if rng.random() < 0.15:
            yield f"  {name}: {{resistance: {12 / most:.4g} kohm ± {rng.choice([1, 5])} %}}"
            continue
        nominal = f"nom: {(least + most) / 2:.4g} mA, " if rng.random() < 0.5 else ""
        removable = rng.choice(["", "", ", removable: true", ", removable: false"])
        ends = f"{{min: {least:.4g} mA, {nominal}max: {most:.4g} mA}}"
        yield f"  {name}: {{current: {ends}{removable}}}"


def zener(rng: Random, index: int, part: str, minimum: float) -> Iterator[str]:
    """Yield a Zener by its part's name or by its figures."""
    volts, test, impedance, knee, knee_impedance = PARTS[part]
    drift = volts * rng.uniform(0.05, 0.25)
    yield f"  ref: D{index}"
    yield f"  minimum_current: {minimum:.4g} mA"
    yield f"  tempco: {{min: {-drift:.4g} mV/K, max: {drift:.4g} mV/K}}"
    if rng.random() < 0.4:
        yield f"  part: {part}"
        return
    yield f"  voltage: {volts * rng.uniform(0.98, 1.02):.4g} V ± {rng.choice([2, 5])} %"
    yield f"  test_current: {test * rng.uniform(0.9, 1.1):.4g} mA"
    yield f"  impedance: {impedance * rng.uniform(0.7, 1.0):.4g} ohm"
    yield f"  knee_current: {knee:.4g} mA"
    yield f"  knee_impedance: {knee_impedance * rng.uniform(0.8, 1.0):.4g} ohm"
    yield f"  thermal_resistance: {rng.uniform(110, 170):.4g} K/W"
    yield f"  test: {rng.choice(['settled', 'settled', 'pulsed'])}"
    yield "  power_rating: 1 W"
    yield f"  derate_above: {rng.uniform(40, 60):.3g} °C"
    yield f"  junction_max: {rng.choice([150, 175])} °C"
    yield f"  current_max: {900 / volts:.4g} mA"


def spec(rng: Random, index: int) -> str:
    """Return a sound spec of about 30 lines; 3 in 100 starve their Zener."""
    part, minimum, current = rng.choice(list(PARTS)), rng.uniform(1.0, 3.0), rng.uniform(1.0, 6.0)
    volts, percent = PARTS[part][0], rng.choice([1, 5])
    supply = volts * rng.uniform(1.9, 2.6)
    least, most = supply * rng.uniform(0.88, 0.96), supply * rng.uniform(1.04, 1.12)
    drop, drawn = 0.93 * least - 1.1 * volts, current + 1.4 * minimum
    starved = rng.random() < 0.03
    ohms = preferred_below(drop / drawn * 1e3 / (1 + percent / 50) * (3 if starved else 1), percent)
    lines = [
        "format: 1",
        f"kind: {KIND}",
        f"name: rail-{index}",
        f"purpose: {volts} V for board {index} (invented)",
        "supply:",
        f"  rail: VBAT{rng.randint(1, 9)}",
        f"  voltage: {{min: {least:.4g} V, nom: {supply:.4g} V, max: {most:.4g} V}}",
        f"  current_limit: {2.0 * most / ohms * 1e3:.4g} mA",
        "output:",
        f"  rail: V{index}",
        f"  voltage: {{min: {0.6 * volts:.4g} V, max: {1.2 * volts:.4g} V}}",
        *([f"  absolute_maximum: {1.1 * most:.4g} V"] if rng.random() < 0.3 else []),
        *([f"  load_regulation: {0.5 * volts:.4g} V"] if rng.random() < 0.3 else []),
        *(["  ripple_rejection: 1.2"] if rng.random() < 0.3 else []),
        "loads:",
        *loads(rng, current),
        f"ambient: {{min: {rng.uniform(-25, 5):.3g} °C, max: {rng.uniform(35, 55):.3g} °C}}",
        "series_resistor:",
        f"  ref: R{index}",
        f"  resistance: {ohms:.4g} ohm ± {percent} %",
        f"  power_rating: {3.0 * most**2 / ohms:.3g} W",
        f"  tempco: {rng.uniform(20, 200):.3g} ppm/K",
        *([f"  ageing: {rng.uniform(0.1, 0.5):.2g} %"] if rng.random() < 0.5 else []),
        "  zero_power_at: 155 °C",
        *(["  voltage_rating: 250 V"] if rng.random() < 0.5 else []),
        "zener:",
        *zener(rng, index, part, minimum),
        *(["derating: half-power"] if rng.random() < 0.15 else []),
    ]
    return "\n".join(lines) + "\n"

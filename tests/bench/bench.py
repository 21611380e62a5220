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
from itertools import pairwise
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
    from reglint.cli import main  # noqa: PLC0415

    sys.argv = ["reglint", *arguments]
    main()


def stages(folder: str) -> None:
    """Print the seconds of reading, analysis and report, taken apart inside one process."""
    import pathlib  # noqa: PLC0415
    import sys  # noqa: PLC0415
    from datetime import date  # noqa: PLC0415
    from itertools import pairwise  # noqa: PLC0415

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
    verdicts = judge(cases, Wanted(date(2026, 12, 1)))
    ticks.append(time.perf_counter())
    reports.renderer("text")(Run(tuple(verdicts), ()), reports.Options())
    ticks.append(time.perf_counter())
    json.dump([end - start for start, end in pairwise(ticks)], sys.stdout)


def sampling(ranges: str, least_current: str, most_power: str, seconds: str) -> None:
    """Sample until both bounds are reached within 1 %; print when, and how far off they are.

    The circuit's equations stand here a second time: node, soft knee and self-heating,
    solved by Newton's method in the logarithm of the Zener current.
    """
    import sys  # noqa: PLC0415

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
E24 = "1 1.1 1.2 1.3 1.5 1.6 1.8 2 2.2 2.4 2.7 3 3.3 3.6 3.9 4.3 4.7 5.1 5.6 6.2 6.8 7.5 8.2 9.1"
PREFERRED = {
    5: [float(digits) for digits in E24.split()],
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


def write_specs(count: int, folder: Path) -> None:
    """Write so many specs into a folder, one or several to a file."""
    folder.mkdir()
    rng, to_a_file = Random(SEED), DOCUMENTS if count >= MANY else 1
    specs = [spec(rng, index) for index in range(count)]
    for start in range(0, count, to_a_file):
        text = "---\n".join(specs[start : start + to_a_file])
        (folder / f"{start:05}.reg.yaml").write_text(text, encoding="utf-8")


# --- measuring ---


@dataclass(frozen=True, slots=True)
class Cost:
    """What one program took as a whole process, and what it wrote."""

    #: Seconds.
    wall: float
    #: Seconds of processor, user and system.
    cpu: float
    #: Largest resident memory in kB (Linux).
    peak: float
    output: str


Program = Callable[[], Cost]


def run(program: Callable[..., None], *arguments: str, accepted: tuple[int, ...] = (0,)) -> Cost:
    """Run a program in a fresh interpreter; end it, and the benchmark, at its time limit."""
    before, call = "import json, sys, time\n", f"\n{program.__name__}(*sys.argv[1:])\n"
    command = [sys.executable, "-c", before + inspect.getsource(program) + call, *arguments]
    paths = os.pathsep.join(filter(None, (str(ROOT), os.environ.get("PYTHONPATH"))))
    with tempfile.TemporaryFile("w+", encoding="utf-8") as output:
        start = time.perf_counter()
        process = subprocess.Popen(command, stdout=output, env={**os.environ, "PYTHONPATH": paths})
        timer = threading.Timer(LIMIT, process.kill)
        timer.start()
        _, status, used = os.wait4(process.pid, 0)
        wall = time.perf_counter() - start
        timer.cancel()
        process.returncode = os.waitstatus_to_exitcode(status)
        if process.returncode not in accepted:
            raise SystemExit(f"{program.__name__} {arguments}: status {process.returncode}")
        output.seek(0)
        return Cost(wall, used.ru_utime + used.ru_stime, used.ru_maxrss, output.read())


def in_turns(one: Program, other: Program, pairs: int) -> list[tuple[Cost, Cost]]:
    """Run two programs in turns, as often as the budget allows; the first pair warms up."""
    begun = time.perf_counter()
    found = [(one(), other())]
    if time.perf_counter() - begun < BUDGET / 3:
        found = []
    while len(found) < pairs and (not found or time.perf_counter() - begun < BUDGET):
        found.append((one(), other()))
    return found


def median(costs: Sequence[Cost], measure: str) -> float:
    """Return the median of one measure."""
    return statistics.median(getattr(each, measure) for each in costs)


# --- the table ---


def say(*columns: str) -> None:
    """Print one line of the table at once: a long run is watched."""
    widths = (34, 11, 11, 8, 13, 8)
    cells = (f"{cell:>{width}}" for cell, width in zip(columns[1:], widths[1:], strict=False))
    sys.stdout.write(f"{columns[0]:<{widths[0]}}{''.join(cells)}".rstrip() + "\n")
    sys.stdout.flush()


def shown(value: float, measure: str) -> str:
    """Return an amount with its unit."""
    if measure == "peak":
        return f"{value / 1024:.0f} MB"
    return f"{value * 1e3:.0f} ms" if value < 1.0 else f"{value:.1f} s"


def compare(title: str, pairs: list[tuple[Cost, Cost]], measure: str, target: float = 0.0) -> None:
    """Print one line: both medians, and the paired ratios."""
    ratios = [getattr(ours, measure) / getattr(other, measure) for ours, other in pairs]
    medians = (shown(median(costs, measure), measure) for costs in zip(*pairs, strict=True))
    extremes = f"{min(ratios):.2f}-{max(ratios):.2f}"
    wanted = f"<= {target:g}" if target else ""
    say(title, *medians, f"{statistics.median(ratios):.2f}", extremes, wanted)


def growth(costs: dict[int, list[tuple[Cost, Cost]]]) -> None:
    """Print how processor time grows: the slope on log-log paper, one spec's cost taken off."""
    sizes = [size for size in costs if size > 1]
    for few, many in pairwise(sizes):
        slopes = []
        for side in (0, 1):
            start, *ends = (
                median([pair[side] for pair in costs[n]], "cpu") for n in (1, few, many)
            )
            slopes.append(log((ends[1] - start) / (ends[0] - start)) / log((many - 1) / (few - 1)))
        say(f"growth exponent, {few:,} to {many:,}", *(f"{slope:.2f}" for slope in slopes))


def whole_processes(home: Path, *, quick: bool) -> dict[int, list[tuple[Cost, Cost]]]:
    """Compare the check of each number of specs with the floor, and print it."""
    schema = str(home / "schema.json")
    run(reglint, "schema", KIND, "--out", schema)
    costs = {}
    for count, repeats in SIZES.items():
        if not repeats[quick]:
            continue
        folder = home / str(count)
        write_specs(count, folder)
        path = str(folder / "00000.reg.yaml" if count == 1 else folder)

        def base(folder: str = str(folder)) -> Cost:
            return run(floor, folder, schema)

        def ours(path: str = path) -> Cost:
            return run(reglint, "check", path, accepted=(0, 1))

        if count == 1:
            starts = in_turns(lambda: run(reglint, "--version"), base, repeats[quick])
            compare("reglint --version, wall", starts, "wall")
        costs[count] = in_turns(ours, base, repeats[quick])
        name = f"{count:,} spec{'s' if count > 1 else ''}"
        for measure, words in (("wall", "wall"), ("cpu", "processor"), ("peak", "peak memory")):
            title = f"{name}, {words} ({len(costs[count])} pairs)"
            compare(title, costs[count], measure, TARGETS.get((count, measure), 0.0))
    return costs


def inside(folder: Path) -> None:
    """Print analysis against reading, taken apart in one process."""
    runs = [json.loads(run(stages, str(folder)).output) for _ in range(3)]
    reading, analysis, report = (statistics.median(each) for each in zip(*runs, strict=True))
    ratios = [each[1] / each[0] for each in runs]
    count = f"{int(folder.name):,} specs"
    figures = (shown(analysis, "wall"), shown(reading, "wall"), f"{statistics.median(ratios):.2f}")
    say(f"{count}, analysis / reading", *figures, f"{min(ratios):.2f}-{max(ratios):.2f}")
    say(f"{count}, report / reading", shown(report, "wall"), "", f"{report / reading:.2f}")


#: The regulator that is sampled: everything that varies, and what does not.
SAMPLED = {
    "v_s": (10.5, 14.4),
    "r": (470 * (1 - 0.05 - 35e-4), 470 * (1 + 0.05 + 35e-4)),  # 5 %, 100 ppm/K over 35 K
    "v_z": (5.1 * 0.95, 5.1 * 1.05),
    "z": (0.0, 7.0),
    "s": (-1.5e-3, 1.5e-3),
    "t_a": (-10.0, 60.0),
    "i_1": (0.4e-3, 1.1e-3),
    "i_2": (0.0, 3e-3),
    "i_zt": 49e-3,
    "i_zk": 1e-3,
    "z_zk": 550.0,
    "r_th": 170.0,
}
SAMPLED_SPEC = """\
format: 1
kind: zener-shunt
name: valve-sense
supply: {voltage: {min: 10.5 V, nom: 12 V, max: 14.4 V}}
output: {voltage: {min: 3.5 V, max: 5.8 V}}
loads:
  comparator: {current: {min: 0.4 mA, nom: 0.7 mA, max: 1.1 mA}}
  probe: {current: {min: 0 mA, max: 3 mA}}
ambient: {min: -10 °C, nom: 25 °C, max: 60 °C}
series_resistor: {resistance: 470 ohm ± 5 %, power_rating: 0.5 W, tempco: 100 ppm/K}
zener:
  {part: 1N4733A, minimum_current: 2 mA, tempco: {min: -1.5 mV/K, max: 1.5 mV/K}}
"""


def against_sampling(home: Path, *, quick: bool) -> None:
    """Print what random sampling takes to come within 1 % of two bounds of one spec."""
    path = home / "sampled.reg.yaml"
    path.write_text(SAMPLED_SPEC, encoding="utf-8")
    ours = run(reglint, "check", str(path), "--report", "json", accepted=(0, 1))
    known = json.loads(ours.output)["specs"][0]["quantities"]
    bounds = (known["zener.current"]["min"], known["zener.power@no_load"]["max"])
    limit = SAMPLING[quick]
    sampled = run(sampling, json.dumps(SAMPLED), *(repr(each) for each in bounds), str(limit))
    found = json.loads(sampled.output)
    say(
        "sampling 1 spec to 1 %, wall",
        shown(ours.wall, "wall"),
        shown(sampled.wall, "wall"),
        f"{ours.wall / sampled.wall:.2f}",
    )
    for name, bound in zip(("current", "power"), ("least current", "greatest power"), strict=True):
        samples, seconds = found["reached"].get(name, found["all"])
        reached = "reached" if name in found["reached"] else "not reached"
        short = f"at the end {found['off'][name]:.1%} short"
        say(f"  {bound}: {reached} after {samples:,} samples in {seconds:.1f} s; {short}")


def main() -> None:
    """Print the table."""
    parser = argparse.ArgumentParser(description=(__doc__ or "").partition("\n")[0])
    parser.add_argument("--quick", action="store_true", help="fewer runs, and no 10,000 specs")
    quick = parser.parse_args().quick
    say("measure", "reglint", "floor", "ratio", "min-max", "to reach")
    with tempfile.TemporaryDirectory() as folder:
        home = Path(folder)
        costs = whole_processes(home, quick=quick)
        growth(costs)
        inside(home / "2000")
        against_sampling(home, quick=quick)


if __name__ == "__main__":
    main()

"""What a check costs, as ratios against a floor measured in the same run.

    python tests/bench/bench.py [--quick]

The floor is what no checker of YAML specs can do without: the same interpreter imports
PyYAML, jsonschema and numpy, composes the same files with libyaml and validates them
against the same schema. Both run as whole processes, in turns; a line shows both medians,
the median of the paired ratios, their least and greatest, and the ratio to reach. Nothing
is asserted: seconds belong to a machine, and ratios are for reading.

The specs are invented, seeded and vary freely, so that no cache helps by luck. The process
that measures imports none of what it measures and stays small: on Linux a process's peak
memory is never below that of the one it was started from.
"""
# ruff: noqa: PLC0415, T201 -- programs run alone: their imports are measured, their output read

import argparse
import inspect
import itertools
import json
import math
import os
import subprocess
import sys
import tempfile
import threading
import time
from collections.abc import Callable, Iterator
from functools import partial
from pathlib import Path
from random import Random
from statistics import median
from typing import Any, NamedTuple, TypeAlias

ROOT = Path(__file__).resolve().parents[2]
#: Numbers of specs, and the pairs of runs: in a full run, and in a quick one.
SIZES = {1: (15, 5), 100: (9, 3), 2_000: (5, 3), 10_000: (3, 0)}
#: Seconds after which one process is ended, and the benchmark with it.
LIMIT = 300.0
#: The ratios to reach, by number of specs and measure.
TARGETS = {(1, "wall"): 1.25, (2_000, "wall"): 2.0, (10_000, "memory"): 1.5}
#: The command line, run as its console script does.
REGLINT = ("-c", "from reglint.cli import main; main()")
CHECK = (*REGLINT, "check", "--gate", "never")


def floor(folder: str, schema: str) -> None:
    """Compose and validate every spec of a folder; specs hold no lists."""
    import numpy as np  # noqa: F401 -- the floor imports it and has no use for it
    import yaml
    from jsonschema import Draft202012Validator

    def plain(node: Any) -> Any:
        if isinstance(node, yaml.MappingNode):
            return {key.value: plain(value) for key, value in node.value}
        return node.value

    validator = Draft202012Validator(json.loads(Path(schema).read_text("utf-8")))
    for path in sorted(Path(folder).rglob("*.reg.yaml")):
        for root in yaml.compose_all(path.read_bytes(), yaml.CSafeLoader):
            validator.validate(plain(root))


def stages(folder: str) -> None:
    """Print the seconds of reading, and of analysing all specs at once, inside one process."""
    from datetime import date

    from reglint.judge import Wanted, judge
    from reglint.project import Project

    project = Project(Path(folder))
    paths = project.specs([project.folder])
    project.read(paths[0])  # the knowledge is read with the first spec: that is start-up
    start = time.perf_counter()
    cases = [case for path in paths for case in project.read(path)[0]]
    read = time.perf_counter()
    judge(cases, Wanted(date(2026, 12, 1)))
    print([read - start, time.perf_counter() - read])


def sampling(least_current: str, most_power: str, seconds: str) -> None:
    """Sample `SAMPLED` until both bounds are met within 1 %; print how near each is, and when.

    The equations of node, soft knee and self-heating stand here a second time; Newton's method.
    """
    import numpy as np

    at_once, rng, start = 1 << 16, np.random.default_rng(20261201), time.perf_counter()
    i_zt, r_th, m = 49e-3, 170.0, np.log(550.0 / 7.0) / np.log(49e-3 / 1e-3)
    bounds = {"least current": float(least_current), "greatest power": float(most_power)}
    best, samples = dict(zip(bounds, (np.inf, 0.0), strict=True)), 0
    met: dict[str, Any] = {}

    def operating_point(load: Any) -> tuple[Any, Any]:
        current = v_s / r
        for _ in range(40):
            cold = v_z + i_zt * z * ((current / i_zt) ** (1 - m) - 1) / (1 - m)
            cold += s * (t_a - 25.0 - r_th * v_z * i_zt)
            warming = 1.0 - s * r_th * current
            volts = cold / warming
            rise = (z * (current / i_zt) ** -m + volts * s * r_th) / warming
            step = ((v_s - volts) / r - load - current) / (current * (rise / r + 1.0))
            current = current * np.exp(np.clip(step, -2.0, 2.0))
            if np.abs(step).max() < 1e-9:
                break
        return current, volts

    while len(met) < 2 and time.perf_counter() - start < float(seconds):
        v_s = rng.uniform(10.5, 14.4, at_once)
        r = 470.0 * (1.0 + rng.uniform(-0.0535, 0.0535, at_once))  # 5 % and 100 ppm/K over 35 K
        v_z, z = 5.1 * rng.uniform(0.95, 1.05, at_once), rng.uniform(0.0, 7.0, at_once)
        s, t_a = rng.uniform(-1.5e-3, 1.5e-3, at_once), rng.uniform(-10.0, 60.0, at_once)
        load = rng.uniform(0.4e-3, 1.1e-3, at_once) + rng.uniform(0.0, 3e-3, at_once)
        found = operating_point(load)[0].min(), np.multiply(*operating_point(0.0)).max()
        best = {n: f(best[n], x) for n, f, x in zip(best, (min, max), found, strict=True)}
        samples += at_once
        off = {name: abs(best[name] / bounds[name] - 1.0) for name in best}
        now = samples, time.perf_counter() - start
        met |= {name: now for name in off if off[name] <= 0.01 and name not in met}
    print(json.dumps({name: (off[name], name in met, *met.get(name, now)) for name in off}))


#: The spec whose figures `sampling` holds; those of the Zener's test are the part's.
SAMPLED = """\
format: 1
kind: zener-shunt
name: valve-sense
supply: {voltage: {min: 10.5 V, nom: 12 V, max: 14.4 V}}
output: {voltage: {min: 3.5 V, max: 5.8 V}}
loads: {comparator: {current: {min: 0.4 mA, max: 1.1 mA}}, probe: {current: {min: 0 A, max: 3 mA}}}
ambient: {min: -10 °C, nom: 25 °C, max: 60 °C}
series_resistor: {resistance: 470 ohm ± 5 %, power_rating: 0.5 W, tempco: 100 ppm/K}
zener: {part: 1N4733A, minimum_current: 2 mA, tempco: {min: -1.5 mV/K, max: 1.5 mV/K}}
"""

#: V, mA, ohm, mA, ohm: voltage, test point and knee of some rows of the 1N47xxA series.
PARTS = {
    "1N4733A": (5.1, 49.0, 7.0, 1.0, 550.0),
    "1N4740A": (10.0, 25.0, 7.0, 0.25, 700.0),
}
#: Values of a decade of E12 (IEC 60063): preferred at 10 % and, being in E24 too, at 5 %.
E12 = (1.0, 1.2, 1.5, 1.8, 2.2, 2.7, 3.3, 3.9, 4.7, 5.6, 6.8, 8.2)
LOADS = ("comparator", "probe", "gauge", "divider", "buzzer", "lamp", "logger", "relay")


def loads(rng: Random, total: float) -> Iterator[str]:
    """Yield one to four loads that share a current in mA; one in seven is a resistance."""
    names = rng.sample(LOADS, rng.randint(1, 4))
    for name in names:
        most = total / len(names) * rng.uniform(0.6, 1.0)
        current = f"current: {{min: {most * rng.uniform(0, 0.8):.4g} mA, max: {most:.4g} mA}}"
        resistance = f"resistance: {12 / most:.4g} kohm ± 5 %"
        removable = rng.choice(("", ", removable: true", ", removable: false"))
        yield f"  {name}: {{{rng.choice([current] * 6 + [resistance])}{removable}}}\n"


def zener(rng: Random, part: str) -> str:
    """Return the figures of a Zener, or in two of five the name of its part."""
    volts, test, impedance, knee, knee_impedance = PARTS[part]
    stated = f"""\
  voltage: {volts * rng.uniform(0.98, 1.02):.4g} V ± {rng.choice((2, 5))} %
  test_current: {test * rng.uniform(0.9, 1.1):.4g} mA
  impedance: {impedance * rng.uniform(0.7, 1.0):.4g} ohm
  knee_current: {knee} mA
  knee_impedance: {knee_impedance * rng.uniform(0.8, 1.0):.4g} ohm
  thermal_resistance: {rng.uniform(110, 170):.4g} K/W
  test: {rng.choice(("settled", "pulsed"))}
  power_rating: 1 W
  derate_above: {rng.uniform(40, 60):.3g} °C
  junction_max: {rng.choice((150, 175))} °C
  current_max: {900 / volts:.4g} mA
"""
    return stated if rng.random() < 0.6 else f"  part: {part}\n"


def spec(rng: Random, index: int) -> str:
    """Return a sound spec of some 30 lines, but 3 in 100 starve their Zener."""
    part, percent, drawn = rng.choice(sorted(PARTS)), rng.choice((5, 10)), rng.uniform(1.0, 6.0)
    volts, minimum = PARTS[part][0], rng.uniform(1.0, 3.0)
    least, most = volts * rng.uniform(1.75, 2.4), volts * rng.uniform(2.5, 2.9)
    ideal = (0.93 * least - 1.1 * volts) / (drawn + 1.4 * minimum) * 1e3 / (1 + percent / 50)
    ideal *= 3.0 if rng.random() < 0.03 else 1.0
    ohms = max(d * 10.0**n for n in range(5) for d in E12 if d * 10.0**n <= ideal)
    limits = f"  absolute_maximum: {1.1 * most:.4g} V\n  load_regulation: {0.5 * volts:.4g} V\n"
    rated = f"  ageing: {rng.uniform(0.1, 0.5):.2g} %\n  voltage_rating: 250 V\n"
    return f"""\
format: 1
kind: zener-shunt
name: rail-{index}
purpose: {volts} V for board {index} (invented)
supply:
  rail: VBAT{rng.randint(1, 9)}
  voltage: {{min: {least:.4g} V, nom: {(least + most) / 2:.4g} V, max: {most:.4g} V}}
  current_limit: {2.0 * most / ohms * 1e3:.4g} mA
output:
  rail: V{index}
  voltage: {{min: {0.6 * volts:.4g} V, max: {1.2 * volts:.4g} V}}
{rng.choice(("", "", limits))}loads:
{"".join(loads(rng, drawn))}ambient:
  {{min: {rng.uniform(-25, 5):.3g} °C, nom: 22 °C, max: {rng.uniform(35, 55):.3g} °C}}
series_resistor:
  ref: R{index}
  resistance: {ohms:.4g} ohm ± {percent} %
  power_rating: {3.0 * most**2 / ohms:.3g} W
  tempco: {rng.uniform(20, 200):.3g} ppm/K
  zero_power_at: 155 °C
{rng.choice(("", rated))}zener:
  ref: D{index}
  minimum_current: {minimum:.4g} mA
  tempco: {{min: {-volts * rng.uniform(0.05, 0.25):.4g} mV/K, max: {volts * 0.2:.4g} mV/K}}
{zener(rng, part)}{rng.choice([""] * 6 + ["derating: half-power"])}
"""


def write_specs(count: int, folder: Path) -> None:
    """Write so many specs into a folder; from 2,000 on, a file holds twenty."""
    folder.mkdir()
    rng, to_a_file = Random(20261201), 20 if count >= 2_000 else 1
    for start in range(0, count, to_a_file):
        specs = (spec(rng, index) for index in range(start, start + to_a_file))
        (folder / f"{start:05}.reg.yaml").write_text("---\n".join(specs), encoding="utf-8")


class Cost(NamedTuple):
    """What a process took (s, s, kB on Linux), and what it wrote."""

    wall: float
    processor: float
    memory: float
    output: str


Pairs: TypeAlias = list[tuple[Cost, Cost]]


def alone(program: Callable[..., None]) -> tuple[str, str]:
    """Return what makes a fresh interpreter run one function of this file."""
    start = "from __future__ import annotations\nimport json, sys, time\nfrom pathlib import Path\n"
    return "-c", f"{start}{inspect.getsource(program)}\n{program.__name__}(*sys.argv[1:])"


def run(*arguments: object) -> Cost:
    """Run a fresh interpreter; where it does not succeed in time, the benchmark ends."""
    command = [sys.executable, *map(str, arguments)]
    with tempfile.TemporaryFile("w+", encoding="utf-8") as output:
        start = time.perf_counter()
        process = subprocess.Popen(command, stdout=output)
        timer = threading.Timer(LIMIT, process.kill)
        timer.start()
        _, status, used = os.wait4(process.pid, 0)
        wall = time.perf_counter() - start
        timer.cancel()
        process.returncode = os.waitstatus_to_exitcode(status)
        if process.returncode:
            raise SystemExit(f"status {process.returncode} with {' '.join(command[3:])}")
        output.seek(0)
        return Cost(wall, used.ru_utime + used.ru_stime, used.ru_maxrss, output.read())


def say(title: str, *columns: str) -> None:
    """Print one line of the table at once: a long run is watched."""
    print(f"{title:<36}{''.join(f'{each:>15}' for each in columns)}".rstrip(), flush=True)


def amount(value: float, measure: str = "wall") -> str:
    """Return a time or a memory with its unit."""
    return f"{value / 1024:.0f} MB" if measure == "memory" else f"{value:#.3g} s"


def compare(title: str, pairs: Pairs, measure: str = "wall", wanted: float | None = None) -> None:
    """Print the medians of pairs of costs, and their ratios."""
    costs = [[getattr(cost, measure) for cost in pair] for pair in pairs]
    ratios = [ours / base for ours, base in costs]
    both = (amount(median(side), measure) for side in zip(*costs, strict=True))
    ends = f"{min(ratios):.2f} - {max(ratios):.2f}", f"<= {wanted}" if wanted else ""
    say(f"{title}, {measure}", *both, f"{median(ratios):.2f}", *ends)


def whole_processes(home: Path, *, quick: bool) -> dict[int, Pairs]:
    """Compare the check of each number of specs with the floor, in turns."""
    schema, costs = home / "schema.json", {}
    run(*REGLINT, "schema", "zener-shunt", "--out", schema)
    for count in (size for size in SIZES if SIZES[size][quick]):
        folder = home / str(count)
        write_specs(count, folder)
        base = partial(run, *alone(floor), folder, schema)
        check = partial(run, *CHECK, folder / "00000.reg.yaml" if count == 1 else folder)
        pairs = range(SIZES[count][quick])
        if count == 1:
            check()  # both find their modules compiled from here on
            base()
            starts = [(run(*REGLINT, "--version"), base()) for _ in pairs]
            compare("--version / floor of 1", starts)
        costs[count] = [(check(), base()) for _ in pairs]
        for measure in ("wall", "processor", "memory"):
            compare(f"check of {count:,}", costs[count], measure, TARGETS.get((count, measure)))
    return costs


def growth(costs: dict[int, Pairs]) -> None:
    """Print the slope of processor time on log-log paper, one spec's taken off."""

    def rise(count: int, side: int) -> float:
        start, end = (min(pair[side].processor for pair in costs[n]) for n in (1, count))
        return max(end - start, 1e-3)

    for few, many in itertools.pairwise(size for size in costs if size > 1):
        ratios = (rise(many, side) / rise(few, side) for side in (0, 1))
        slopes = (math.log(each, (many - 1) / (few - 1)) for each in ratios)
        say(f"growth exponent, {few:,} to {many:,}", *(f"{slope:.2f}" for slope in slopes))


def inside(folder: Path) -> None:
    """Print analysis against reading, timed inside one process."""
    runs = [json.loads(run(*alone(stages), folder).output) for _ in range(3)]
    read, judged = (median(each) for each in zip(*runs, strict=True))
    say("2,000, analysis / reading", amount(judged), amount(read), f"{judged / read:.2f}")


def against_sampling(home: Path, limit: float) -> None:
    """Print what random sampling takes to come within 1 % of two bounds of one spec."""
    path = home / "sampled.reg.yaml"
    path.write_text(SAMPLED, encoding="utf-8")
    known = json.loads(run(*CHECK, path, "--report", "json").output)["specs"][0]["quantities"]
    ends = known["zener.current"]["min"], known["zener.power@no_load"]["max"]
    pairs = [(run(*CHECK, path), run(*alone(sampling), *ends, limit))]
    compare("check of 1 / sampling it", pairs)
    for name, (off, met, samples, seconds) in json.loads(pairs[0][1].output).items():
        when = f"{'after' if met else 'not after'} {samples:,} samples in {seconds:.1f} s"
        say(f"  {name} within 1 %: {when}; {off:.1%} off at the end")


def main() -> None:
    """Print the table."""
    parser = argparse.ArgumentParser(description="Print costs as ratios against a floor.")
    parser.add_argument("--quick", action="store_true", help="fewer runs, and no 10,000 specs")
    quick = parser.parse_args().quick
    say("", "reglint", "floor", "ratio", "min - max", "to reach")
    with tempfile.TemporaryDirectory() as name:
        # Where bytecode may not be written, what is stale would be compiled in every run.
        os.environ |= {"PYTHONDONTWRITEBYTECODE": "", "PYTHONPYCACHEPREFIX": f"{name}/bytecode"}
        os.environ["PYTHONPATH"] = str(ROOT)
        growth(whole_processes(Path(name), quick=quick))
        inside(Path(name, "2000"))
        against_sampling(Path(name), 10.0 if quick else 60.0)


if __name__ == "__main__":
    main()

"""Feed damaged files and configs to basinheat at random, for as long as is asked.

Each case is one of: files that are tables with hostile cells (rows in must be kept, refused or
merged), files damaged down to their bytes, a config of which parts are other YAML. No case may end
in anything but tables or lines that a person can act on, nor take 20 s of work. Cases that do are
written into a folder. One JSON line at the end: cases, refused, mapped, slowest
seconds of work and by the clock, failures by kind.

    python tests/benchmarks/fuzz_inputs.py --minutes 10 --failures /tmp/failures
"""

import argparse
import json
import multiprocessing
import shutil
import signal
import sys
import tempfile
import time
import traceback
import warnings
from collections import Counter
from pathlib import Path

import numpy as np
import yaml

ROOT = Path(__file__).resolve().parents[2]
sys.path[:0] = [str(ROOT / "scripts"), str(ROOT / "tests")]

import config_mutations  # noqa: E402
import input_mutations as mutations  # noqa: E402
import input_promises as promises  # noqa: E402

SECONDS = 20  # of a case, of the processor: a busy machine is no fault of the case
WAITING = 300  # of a case, by the clock: one that only waits uses no processor
AGAIN = 10  # of so many cases one is run twice


class HangError(Exception):
    """A case that took too long."""


def alarm(*_):
    """Turn the signal into an exception."""
    raise HangError(f"longer than {SECONDS} s of work, or {WAITING} s by the clock")


def limit(work, clock):
    """Set how long a case may take, 0 for no limit."""
    signal.setitimer(signal.ITIMER_PROF, work)
    signal.alarm(clock)


def well_formed(below, folder):
    """Tables with hostile cells."""
    inputs = mutations.well_formed(below)
    text = promises.write(inputs, folder)
    made = promises.outcome(text, folder)
    if made.prepared is not None:
        promises.conserved(made, inputs.sheets)
        promises.names_are_text(made, inputs.sheets["wells"])
    if below(AGAIN) == 0:
        promises.same(made, promises.outcome(text, folder))
    return made


def malformed(below, folder):
    """Files damaged down to their bytes."""
    text = promises.write(mutations.malformed(below), folder)
    made = promises.outcome(text, folder)
    if below(AGAIN) == 0:
        promises.same(made, promises.outcome(text, folder))
    return made


def configs(below, folder):
    """Configs with other YAML in them."""
    inputs = mutations.good_inputs()
    good = config_mutations.rich_config() if below(3) else demo()
    inputs.raw = config_mutations.bad_yaml(below, good)
    (folder / "case.yaml").write_text(inputs.raw, encoding="utf-8", errors="backslashreplace")
    return promises.outcome(promises.write(inputs, folder), folder)


def demo():
    """The demo's config."""
    return yaml.safe_load((ROOT / "config" / "config.yaml").read_text(encoding="utf-8"))


KINDS = (well_formed, malformed, configs)


def one(seed, failures):
    """Run the case of a seed; return its kind, what came of it, seconds of work and clock."""
    rng = np.random.default_rng(seed)
    kind = KINDS[rng.integers(len(KINDS))]
    folder = Path(tempfile.mkdtemp(prefix="fuzz-"))
    work, clock = time.process_time(), time.perf_counter()
    limit(SECONDS, WAITING)
    try:
        made = kind(lambda n: int(rng.integers(n)), folder)
        end = "refused" if made.prepared is None else "mapped"
    except Exception as error:
        limit(0, 0)
        end = f"{kind.__name__}: {type(error).__name__}"
        kept = failures / f"{kind.__name__}-{seed}"
        shutil.copytree(folder, kept, dirs_exist_ok=True)
        (kept / "failure.txt").write_text(traceback.format_exc(), errors="backslashreplace")
    finally:
        limit(0, 0)
        shutil.rmtree(folder, ignore_errors=True)
    return kind.__name__, end, time.process_time() - work, time.perf_counter() - clock


def work(number, options):
    """Run cases until the time is over; return how many came to what, and the slowest."""
    for kind in (signal.SIGALRM, signal.SIGPROF):
        signal.signal(kind, alarm)
    warnings.simplefilter("ignore")
    until, ends, kinds = time.monotonic() + 60 * options.minutes, Counter(), Counter()
    slowest = np.zeros(2)
    seed = options.seed + number
    while time.monotonic() < until:
        kind, end, *seconds = one(seed, options.failures)
        ends[end] += 1
        kinds[kind] += 1
        slowest = np.maximum(slowest, seconds)
        seed += options.processes
    return ends, kinds, slowest


def main():
    """Share the time among processes and print the sums."""
    parser = argparse.ArgumentParser(description=__doc__.split("\n")[0])
    parser.add_argument("--minutes", type=float, default=10, help="how long (default: 10)")
    parser.add_argument("--seed", type=int, default=1, help="of the first case (default: 1)")
    parser.add_argument("--processes", type=int, default=1, help="at a time (default: 1)")
    parser.add_argument(
        "--failures", type=Path, default=Path("failures"), help="folder of cases that fail"
    )
    options = parser.parse_args()
    options.failures.mkdir(parents=True, exist_ok=True)
    with multiprocessing.get_context("spawn").Pool(options.processes) as pool:
        parts = pool.starmap(work, [(n, options) for n in range(options.processes)])
    ends = sum((part[0] for part in parts), Counter())
    kinds = sum((part[1] for part in parts), Counter())
    slowest = np.max([part[2] for part in parts], axis=0).tolist()
    refused, mapped = ends.pop("refused", 0), ends.pop("mapped", 0)
    print(
        json.dumps(
            {
                "seed": options.seed,
                "minutes": options.minutes,
                "cases": sum(kinds.values()),
                "kinds": dict(sorted(kinds.items())),
                "refused": refused,
                "mapped": mapped,
                "slowest_work_s": round(slowest[0], 2),
                "slowest_clock_s": round(slowest[1], 2),
                "failures": dict(sorted(ends.items())),
            }
        )
    )
    return 1 if ends else 0


if __name__ == "__main__":
    sys.exit(main())

"""scripts/bench [--json] [--seconds N]: ratios in one run.  N is how long each callback is watched (0: not at all)."""

import argparse
import json

import hog
import timing

TARGETS = {"c": 1.15, "balanced": 3, "driven_balanced": 20, "six_blocks": 20, "overhead_us": 3.0}


def show(results):
    """Print one table for the graphs and one for the callbacks."""
    print(f"ns a sample, {timing.BLOCK} frames a block; the best of rounds that take turns; answers equal to 1e-9")
    print(
        f"{'graph':18}{'native':>9}{'C':>9}{'numpy':>10}{'native/C':>10}{'(wanted)':>10}{'numpy/native':>14}{'(wanted)':>10}"
    )
    for r in results["graphs"]:
        native, c, chain = r["native_ns"], r["c_ns"], r["numpy_ns"]
        wanted = f"{'≤ ' + str(TARGETS['c']):>10}", f"{'≥ ' + str(TARGETS[r['name']]):>10}"
        print(
            f"{r['name']:18}{native:9.1f}{c:9.1f}{chain:10.1f}{native / c:10.2f}{wanted[0]}{chain / native:14.1f}{wanted[1]}"
        )
    print(f"\nthe engine adds {results['overhead_us']} us a block (wanted ≤ {TARGETS['overhead_us']})")
    if "callback" in results:
        print("\ncallbacks missed at 64 frames on JACK's dummy device, a Python loop keeping the interpreter busy")
        for label, text in (("idle", "native, no loop"), ("native", "native"), ("python", "ordinary Python")):
            r = results["callback"][label]
            print(f"{text:18}{r['missed']:7} of {r['of']:7}   lateness p99 {r['late_p99_us']:9.1f} us")


def main():
    parser = argparse.ArgumentParser(prog="scripts/bench", description=__doc__)
    parser.add_argument("--json", action="store_true", help="one JSON object")
    parser.add_argument("--seconds", type=float, default=30.0, help="how long each callback is watched; 0: not at all")
    options = parser.parse_args()
    results = {"graphs": timing.graphs(), "overhead_us": timing.overhead_us()}
    if options.seconds:
        results["callback"] = hog.compare(options.seconds)
    if options.json:
        print(json.dumps(results))
    else:
        show(results)


if __name__ == "__main__":
    main()

"""scripts/bench [--json] [--seconds N]: ratios in one run.  N is how long each callback is watched (0: not at all)."""

import argparse
import json

import hog
import kinds
import timing

TARGETS = {"c": 1.15, "balanced": 3, "driven_balanced": 20, "six_blocks": 20, "overhead_us": 3.0}


def show(results):
    """Print one table for the graphs and one for the callbacks."""
    print(f"ns a sample, {timing.BLOCK} frames a block; the best of rounds that take turns; answers equal to 1e-9")
    row = "{:18}{:>9}{:>9}{:>10}{:>10}{:>10}{:>14}{:>10}"
    print(row.format("graph", "native", "C", "numpy", "native/C", "(wanted)", "numpy/native", "(wanted)"))
    for r in results["graphs"]:
        native, c, chain = r["native_ns"], r["c_ns"], r["numpy_ns"]
        ratios = (f"{native / c:.2f}", f"≤ {TARGETS['c']}", f"{chain / native:.1f}", f"≥ {TARGETS[r['name']]}")
        print(row.format(r["name"], f"{native:.1f}", f"{c:.1f}", f"{chain:.1f}", *ratios))
    print(f"\nthe engine adds {results['overhead_us']} us a block (wanted ≤ {TARGETS['overhead_us']})")
    print("\nns a sample of each kind: at the base rate, and as it usually runs")
    for r in results["kinds"]:
        print(f"{r['kind']:20}{r['base_ns']:9.1f}{r['usual_ns']:9.1f}  {r['factor']}×")
    print("\npresets at 48 kHz: ns a sample, and share of one core (wanted ≤ 25 %)")
    for r in results["presets"]:
        print(f"{r['preset']:20}{r['ns']:9.1f}{r['percent']:8.2f} %")
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
    sound = timing.guitar()
    results |= {"kinds": kinds.kinds(sound), "presets": kinds.presets(sound)}
    if options.seconds:
        results["callback"] = hog.compare(options.seconds)
    if options.json:
        print(json.dumps(results))
    else:
        show(results)


if __name__ == "__main__":
    main()

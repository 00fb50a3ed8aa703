"""scripts/bench: one table; --json gives the same as one object."""

import json
import sys

from graphs import BLOCK, measure


def main():
    results = measure()
    if "--json" in sys.argv[1:]:
        print(json.dumps({"graphs": results}))
        return
    print(f"ns a sample at {BLOCK} frames a block, call included; the best of rounds that take turns")
    print(f"{'graph':18}{'native':>9}{'C':>9}{'numpy':>10}{'native/C':>10}{'numpy/native':>14}")
    for r in results:
        native, c, chain = r["native_ns"], r["c_ns"], r["numpy_ns"]
        print(f"{r['name']:18}{native:9.1f}{c:9.1f}{chain:10.1f}{native / c:10.2f}{chain / native:14.1f}")


if __name__ == "__main__":
    main()

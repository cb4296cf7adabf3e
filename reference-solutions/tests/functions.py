"""Errors of function values in units in the last place, against mpmath with 50 digits.

Reads {name: {"arguments": [[...]], "values": [...], "allowed": ulp}} as JSON; leaves with status 1 if one is above what is allowed.
"""

import json
import math
import sys

import mpmath as mp

mp.mp.dps = 50
SPECIAL = {"pow": mp.power, "atan2": mp.atan2, "sqrt": mp.sqrt}


def main():
    bad = False
    for name, case in json.load(sys.stdin).items():
        function = SPECIAL.get(name) or getattr(mp, name)
        worst, where = 0, None
        for arguments, value in zip(case["arguments"], case["values"]):
            exact = function(*map(mp.mpf, arguments))
            error = abs(mp.mpf(value) - exact) / mp.mpf(math.ulp(float(exact)))
            if not error <= worst:
                worst, where = error, arguments
        print(f"{name}: {float(worst):.3f} ulp at {where}")
        if not worst <= case["allowed"]:
            bad = True
            print(f"ABOVE {case['allowed']} ulp")
    sys.exit(1 if bad else 0)


main()

"""Lax-Wendroff differences for u_t + a u_x = 0 on a periodic grid, with NumPy."""
import base64
import json
import os
import sys

# Keep a copy of stdout for the conversation, and send whatever else prints to stderr: libraries print.
conversation = os.fdopen(os.dup(1), "w")
os.dup2(2, 1)

import numpy as np  # noqa: E402

case = {}


class NotOffered(Exception):
    pass


def read(array):
    """An array of a message: base64 of little-endian doubles, or a list in which null stands for what is not finite."""
    if isinstance(array, str):
        return np.frombuffer(base64.b64decode(array), dtype="<f8")
    return np.array([np.nan if value is None else value for value in array], dtype=float)


def write(array):
    """An array for a message, in the encoding that `prepare` asked for."""
    if case["arrays"] == "base64":
        return base64.b64encode(np.ascontiguousarray(array, dtype="<f8").tobytes()).decode()
    return [value if np.isfinite(value) else None for value in array.tolist()]


def describe(_):
    offer = {"equation": "advection", "operations": ["advance"], "cells": {"minimum": 3}}
    return {"contract": 1, "name": "lax-wendroff in NumPy", "version": "1.0", "arrays": ["text", "base64"], "offers": [offer]}


def prepare(request):
    if request["equation"] != "advection" or request["dimensions"] != 1:
        raise NotOffered(f"equation {request['equation']} in {request['dimensions']} dimension(s)")
    grid = request["grid"]
    case["velocity"] = request["parameters"]["velocity"][0]
    case["spacing"] = (grid["upper"][0] - grid["lower"][0]) / grid["cells"][0]
    case["arrays"] = request["arrays"]
    return {}


def advance(request):
    u = read(request["state"]["u"])
    c = case["velocity"] * request["step"] / case["spacing"]
    for _ in range(request["steps"]):
        left = np.roll(u, 1)
        flux = 0.5 * c * (u + left) - 0.5 * c * c * (u - left)  # through the lower face of each cell
        u = u - (np.roll(flux, -1) - flux)
    return {"state": {"u": write(u)}}


METHODS = {"describe": describe, "prepare": prepare, "advance": advance}

for line in sys.stdin:
    request = json.loads(line)
    answer = {"jsonrpc": "2.0", "id": request["id"]}
    try:
        if request["method"] not in METHODS:
            raise NotOffered(f"method {request['method']}")
        answer["result"] = METHODS[request["method"]](request["params"])
    except NotOffered as error:
        answer["error"] = {"code": -32601, "message": str(error)}
    except Exception as error:  # the conversation goes on; the message is shown to you
        answer["error"] = {"code": -32000, "message": repr(error)}
    print(json.dumps(answer), file=conversation, flush=True)

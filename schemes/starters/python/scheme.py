"""Lax-Wendroff differences for u_t + a u_x = 0 on a periodic grid. Standard library only."""
import json
import os
import sys

# Keep a copy of stdout for the conversation, and send whatever else prints to stderr: libraries print.
conversation = os.fdopen(os.dup(1), "w")
os.dup2(2, 1)

case = {}


class NotOffered(Exception):
    pass


def describe(_):
    offer = {"equation": "advection", "operations": ["advance"], "cells": {"minimum": 3}}
    return {"contract": 1, "name": "lax-wendroff in Python", "version": "1.0", "offers": [offer]}


def prepare(request):
    if request["equation"] != "advection" or request["dimensions"] != 1:
        raise NotOffered(f"equation {request['equation']} in {request['dimensions']} dimension(s)")
    grid = request["grid"]
    case["velocity"] = request["parameters"]["velocity"][0]
    case["spacing"] = (grid["upper"][0] - grid["lower"][0]) / grid["cells"][0]
    return {}


def advance(request):
    u = request["state"]["u"]
    c = case["velocity"] * request["step"] / case["spacing"]
    for _ in range(request["steps"]):
        flux = [0.5 * c * (right + left) - 0.5 * c * c * (right - left) for left, right in zip(u[-1:] + u[:-1], u)]
        u = [u[j] - (flux[(j + 1) % len(u)] - flux[j]) for j in range(len(u))]
    return {"state": {"u": u}}


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

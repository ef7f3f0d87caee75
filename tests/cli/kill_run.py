#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""Stops runs at many moments, by SIGKILL and by SIGTERM; the result folder must always
be a complete one: the previous or the new.

    kill_run.py PROGRAM"""

import hashlib
import json
import os
import shutil
import signal
import subprocess
import sys
import tempfile
import time

GEOMETRY = """evengap: 1
title: {title}
supplies: {{plates: 110 V}}
beam:
  path: {{from: -30 mm, to: 30 mm}}
planes:
  electric_along:
    region: {{z: [-40 mm, 40 mm], x: [-20 mm, 20 mm]}}
    parts:
      upper plate:
        electrode: plates/2
        box: {{z: [-20 mm, 20 mm], x: [6 mm, 9 mm]}}
        rounding: 1 mm
        twin: {{across: x, potential: -plates/2, name: lower plate}}
"""
MOMENTS = 40


def digest(folder):
    """Names and contents of a complete result folder; None if it is not complete."""
    summary = os.path.join(folder, "summary.json")
    if not os.path.exists(summary):
        return None
    with open(summary, encoding="utf-8") as file:
        files = json.load(file)["files"]
    if sorted(files) != sorted(os.listdir(folder)):
        return None
    total = hashlib.sha256()
    for name in sorted(files):
        with open(os.path.join(folder, name), "rb") as file:
            total.update(name.encode() + b"\0" + file.read())
    return total.hexdigest()


def command(program, folder):
    return [program, "run", os.path.join(folder, "f.yaml"), "--fineness", "0.5", "--quiet"]


def write(folder, title):
    with open(os.path.join(folder, "f.yaml"), "w", encoding="utf-8") as file:
        file.write(GEOMETRY.format(title=title))


def staged(folder):
    return [name for name in os.listdir(folder) if name.startswith("f.result.")]


def stop_at(program, folder, delay, signal_number):
    child = subprocess.Popen(command(program, folder))
    try:
        return child.wait(timeout=delay)
    except subprocess.TimeoutExpired:
        child.send_signal(signal_number)
        return child.wait()


def main():
    program = os.path.abspath(sys.argv[1])
    with tempfile.TemporaryDirectory() as folder:
        result = os.path.join(folder, "f.result")
        write(folder, "second")
        subprocess.run(command(program, folder), check=True)
        second = digest(result)
        write(folder, "first")
        began = time.monotonic()
        subprocess.run(command(program, folder), check=True)
        span = time.monotonic() - began
        first = digest(result)
        assert first and second and first != second
        kept = os.path.join(folder, "kept")
        shutil.copytree(result, kept)
        write(folder, "second")
        seen, stopped, while_writing = set(), 0, 0
        for k in range(MOMENTS):
            signal_number = signal.SIGKILL if k % 2 else signal.SIGTERM
            code = stop_at(program, folder, span * (k + 1) / MOMENTS, signal_number)
            assert code in (0, -signal_number), f"moment {k}: exit {code}"
            stopped += code != 0
            found = digest(result)
            assert found in (first, second), f"moment {k}: the result is neither"
            seen.add(found)
            left = staged(folder)
            while_writing += bool(left)
            if signal_number == signal.SIGTERM:
                assert not left, f"moment {k}: SIGTERM left {left}"
            for name in left:
                shutil.rmtree(os.path.join(folder, name))
            if found == second:
                shutil.rmtree(result)
                shutil.copytree(kept, result)
        print(f"{MOMENTS} moments in {span:.2f} s: {stopped} stopped, "
              f"{while_writing} of them while writing, {len(seen)} kinds of result")
        assert stopped > MOMENTS // 4, "hardly any run was stopped: the test says nothing"
        assert first in seen
    return 0


sys.exit(main())

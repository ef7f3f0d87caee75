#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""Runs one command-line case kept as a data file.

    run_case.py PROGRAM CASE

A case is a list of `key: value` lines, run from top to bottom in an empty folder. Blank
lines and lines starting with # are skipped.

    file NAME:          the indented lines below become a file
    copy: SOURCE        copies a file of the project (path from its root)
    folder: NAME        makes an empty folder
    locked: NAME        makes a folder into which nothing can be written
    env: NAME=VALUE     for the commands that follow
    args: WORDS         runs the program; what follows is expected of this run
    exit: N             its exit status (must be given for every run)
    stdout: TEXT        the text occurs in its output; `stdout:` alone: there is none
    stderr: TEXT        the same of its messages
    not stdout: TEXT    the text does not occur
    not stderr: TEXT
    exists: NAME        the file or folder is there afterwards
    absent: NAME
    holds NAME: TEXT    the file holds the text
    only: NAMES         the folder of the case holds these entries and no others
"""

import os
import shlex
import shutil
import subprocess
import sys
import tempfile

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))


def parse(path):
    """(line number, key, value) for every entry; the value of a file is its text."""
    entries, lines = [], open(path, encoding="utf-8").read().split("\n")
    k = 0
    while k < len(lines):
        line, number = lines[k], k + 1
        k += 1
        if not line.strip() or line.startswith("#"):
            continue
        key, colon, value = line.partition(":")
        if not colon or line[0] == " ":
            sys.exit(f"{path}:{number}: not a 'key: value' line")
        if key.startswith("file "):
            block = []
            while k < len(lines) and (lines[k].startswith("    ") or not lines[k]):
                block.append(lines[k][4:])
                k += 1
            value = "\n".join(block).rstrip("\n") + "\n"
        entries.append((number, key, value if key.startswith("file ") else value.strip()))
    return entries


class Case:
    def __init__(self, program, path, folder):
        self.program, self.path, self.folder = program, path, folder
        self.environment = dict(os.environ, LC_ALL="C")
        self.run, self.judged, self.failures = None, True, []

    def inside(self, name):
        return os.path.join(self.folder, name)

    def fail(self, number, text):
        self.failures.append(f"{self.path}:{number}: {text}")

    def start(self, number, words):
        if not self.judged:
            self.fail(number, "the run before has no exit line")
        self.run = subprocess.run([self.program] + shlex.split(words), cwd=self.folder,
                                  env=self.environment, capture_output=True, text=True,
                                  stdin=subprocess.DEVNULL, timeout=600, check=False)
        self.judged = False

    def expect_text(self, number, key, value):
        wanted = not key.startswith("not ")
        text = getattr(self.run, key.split()[-1])
        if not value:
            if text:
                self.fail(number, f"expected no {key}, found:\n{text}")
        elif (value in text) != wanted:
            self.fail(number, f"{key} '{value}' does not hold for:\n{text}")

    def expect_exit(self, number, value):
        self.judged = True
        if self.run.returncode != int(value):
            self.fail(number, f"exit {self.run.returncode}, want {value}\n"
                              f"{self.run.stdout}{self.run.stderr}")

    def expect_file(self, number, name, value):
        try:
            with open(self.inside(name), encoding="utf-8") as file:
                if value not in file.read():
                    self.fail(number, f"{name} does not hold '{value}'")
        except OSError as error:
            self.fail(number, str(error))

    def do(self, number, key, value):
        if key.startswith("file "):
            with open(self.inside(key[5:]), "w", encoding="utf-8") as file:
                file.write(value)
        elif key == "copy":
            shutil.copy(os.path.join(ROOT, value), self.folder)
        elif key == "folder":
            os.makedirs(self.inside(value))
        elif key == "locked":
            os.makedirs(self.inside(value))
            os.chmod(self.inside(value), 0o555)
        elif key == "env":
            name, _, text = value.partition("=")
            self.environment[name] = text
        elif key == "args":
            self.start(number, value)
        elif key == "exit":
            self.expect_exit(number, value)
        elif key in ("stdout", "stderr", "not stdout", "not stderr"):
            self.expect_text(number, key, value)
        elif key in ("exists", "absent"):
            if os.path.lexists(self.inside(value)) != (key == "exists"):
                self.fail(number, f"{value} is not {key}")
        elif key.startswith("holds "):
            self.expect_file(number, key[6:], value)
        elif key == "only":
            if sorted(os.listdir(self.folder)) != sorted(value.split()):
                self.fail(number, f"found {sorted(os.listdir(self.folder))}")
        else:
            self.fail(number, f"unknown key '{key}'")


def main():
    program, path = os.path.abspath(sys.argv[1]), sys.argv[2]
    entries = parse(path)
    if any(key == "locked" for _, key, _ in entries) and os.geteuid() == 0:
        print("skipped: nothing is locked for the superuser")
        return 77
    with tempfile.TemporaryDirectory() as folder:
        case = Case(program, path, folder)
        for number, key, value in entries:
            case.do(number, key, value)
        if case.run is None or not case.judged:
            case.fail(len(entries), "a run without an exit line, or no run at all")
        for name in os.listdir(folder):
            if os.path.isdir(case.inside(name)) and not os.path.islink(case.inside(name)):
                os.chmod(case.inside(name), 0o755)
    print("\n".join(case.failures) or "fine")
    return 1 if case.failures else 0


sys.exit(main())

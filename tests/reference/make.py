#!/usr/bin/env python3
"""Makes `reference.json`: random boards of every topology and what a report must say of them.

Needs numpy alone. `make.py` writes the file; `make.py --check` computes all again and compares.
"""

import json
import pathlib
import random
import sys

import stages
from circuit import Block, axes
from figures import Review

FILE = pathlib.Path(__file__).parent / "reference.json"


def number(value):
    """A number without exponent."""
    return f"{value:.15f}".rstrip("0").rstrip(".") if abs(value) < 1e15 else f"{value:.0f}"


def netlist(board, name):
    lines = [name]
    for net, span in board.signals.items():
        if not net.endswith("@") and board.drawn:
            lines.append(f"V{net} {net} 0 AC 1")
    for part, (a, b, ohms, _) in board.resistors.items():
        if not part.startswith("declared"):
            lines.append(f"{part} {a} {b} {number(ohms)}")
    for amp, (plus, minus, output) in board.amps.items():
        lines.append(f"{amp} {plus} {minus} VCC VEE {output} OPX")
    return "\n".join(lines) + "\n.end\n"


def budget(board):
    lines = [f"temperature: {number(board.temperature[0])} degC .. {number(board.temperature[1])} degC", "rails:"]
    supplies = {"VCC": (board.supply[0], board.supply_deviation[0]), "VEE": (board.supply[1], board.supply_deviation[1])}
    for net, (volts, deviation) in {**supplies, **board.rails}.items():
        lines.append(f"  {net}: {number(volts)} V +/- {number(deviation)} V")
    lines.append(f"tolerance: {{ resistor: {number(100 * board.tolerance)} % }}")
    exceptions = [
        (name, tolerance)
        for name, (_, _, _, tolerance) in board.resistors.items()
        if tolerance != board.tolerance and not name.startswith("declared")
    ]
    if exceptions or board.groups:
        lines.append("parts:")
    for name, tolerance in exceptions:
        lines.append(f"  - {{ match: {name}, tolerance: {number(100 * tolerance)} % }}")
    for names, tolerance, ratio in board.groups.values():
        match = ", ".join(names)
        lines.append(f"  - {{ match: [{match}], tolerance: {number(100 * tolerance)} %, ratio: {number(100 * ratio)} % }}")
    legs = {net for *_, positive, negative in board.pairs.values() for net in (positive, negative)}
    signals = []
    for net, (low, high) in board.signals.items():
        source = board.sources.get(net.rstrip("@"))
        source = f", source: {number(source)} ohm" if source else ""
        if net not in legs:
            signals.append(f"  {net.rstrip('@')}: {{ range: {number(low)} V .. {number(high)} V{source} }}")
    for net, (low, high) in board.currents.items():
        signals.append(f"  {net}: {{ range: {number(low * 1e6)} uA .. {number(high * 1e6)} uA }}")
    if signals:
        lines += ["signals:", *signals]
    if board.pairs:
        lines.append("pairs:")
    for name, (difference, common, positive, negative) in board.pairs.items():
        lines.append(f"  {name}:\n    positive: {positive}\n    negative: {negative}")
        lines.append(f"    difference: {number(difference[0])} V .. {number(difference[1])} V")
        lines.append(f"    common: {number(common[0])} V .. {number(common[1])} V")
    declared = [(part, data) for part, data in board.resistors.items() if part.startswith("declared load")]
    if declared:
        lines.append("loads:")
    for _, (net, _, ohms, _) in declared:
        lines.append(f"  {net}: {{ resistance: {number(ohms)} ohm }}")
    if board.intended:
        lines.append("stages:")
    for amp, gain in board.intended.items():
        lines.append(f"  - {{ match: {amp}, gain: {number(gain)} }}")
    return "\n".join(lines) + "\n"


def profile(board):
    lines = ["- device: OPX", f"  technology: {board.device.technology}", "  sections: 1"]
    lines.append("  pins: [non-inverting, inverting, positive-supply, negative-supply, output]")
    lines += ["  source: made up for a test", "  parameters:"]
    lines += [f"    {key}: {text}" for key, (text, *_) in board.device.parameters.items()]
    return "\n".join(lines) + "\n"


def compute():
    boards = []
    for seed, (name, make) in enumerate(stages.BOARDS):
        board = make(random.Random(1000 + seed))
        boards.append(
            {
                "name": name,
                "netlist": netlist(board, name),
                "budget": budget(board),
                "devices": profile(board),
                "expected": [
                    {"stage": stage, "what": what, "of": of, "value": value}
                    for stage, what, of, value in Review(board).expected
                ],
            }
        )
        most = max(len(axes(Block(board, members))) for members in board.blocks())
        print(f"{name}: {len(boards[-1]['expected'])} numbers, up to {most} parameters", file=sys.stderr)
    return boards


def differs(old, new):
    """Whether two numbers differ by more than a part in a thousand million."""
    return not abs(old - new) <= 1e-9 * max(abs(old), abs(new)) + 1e-15


def check(boards):
    kept = json.loads(FILE.read_text())
    faults = [] if len(kept) == len(boards) else ["another number of boards"]
    for old, new in zip(kept, boards):
        for key in ("name", "netlist", "budget", "devices"):
            if old[key] != new[key]:
                faults.append(f"{old['name']}: another {key}")
        for a, b in zip(old["expected"], new["expected"], strict=True):
            if [a["stage"], a["what"], a["of"]] != [b["stage"], b["what"], b["of"]] or differs(a["value"], b["value"]):
                faults.append(f"{old['name']}: {a} is {b}")
    return faults


def main():
    boards = compute()
    if "--check" in sys.argv:
        faults = check(boards)
        print("\n".join(faults) or "the file agrees")
        sys.exit(bool(faults))
    FILE.write_text(json.dumps(boards, indent=1) + "\n")


if __name__ == "__main__":
    main()

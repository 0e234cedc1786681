"""Boards as plain lists, and their nodal equations, written without a look at the Rust code.

A board is resistors, op amps, held nets and currents. The equations are those of the op-amp model: a
resistance between the inputs and one from each input to ground, a source A (Vp - Vn + error) behind an output
resistance. The twin has V+ = V- and no input current.
"""

import itertools
import numpy as np

IDEAL, REAL = "ideal", "real"


class Board:
    """Resistors `name: (a, b, ohms, tolerance)`; op amps `name: (plus, minus, output)`; held nets."""

    def __init__(self):
        self.resistors, self.amps, self.signals, self.rails = {}, {}, {}, {}
        self.currents, self.pairs, self.groups, self.sources = {}, {}, {}, {}
        self.intended, self.device, self.supply_deviation = {}, None, (0.0, 0.0)
        self.supply, self.temperature = (15.0, -15.0), (25.0, 25.0)

    def held(self):
        """Nets whose voltage no op amp sets, but ground."""
        return list(self.signals) + list(self.rails)

    def outputs(self):
        return {output: name for name, (_, _, output) in self.amps.items()}

    def walk(self, net):
        """Nets reached from an input through resistors, held ones as the edge; and the resistors."""
        fixed = {"0", *self.held(), *self.outputs()}
        # A declared source resistance stands between a signal and its net: that net is free.
        seen, resistors, queue = {net}, set(), [net]
        while queue:
            at = queue.pop()
            if at in fixed:
                continue
            for name, (a, b, *_) in self.resistors.items():
                if at in (a, b):
                    resistors.add(name)
                    other = b if at == a else a
                    if other not in seen:
                        seen.add(other)
                        queue.append(other)
        return seen, resistors

    def feeds(self):
        """For each op amp those whose outputs reach its inputs, through others too."""
        outputs = self.outputs()
        direct = {}
        for name, (plus, minus, _) in self.amps.items():
            reached = self.walk(plus)[0] | self.walk(minus)[0]
            direct[name] = {outputs[net] for net in reached if net in outputs}
            # An input pin on another's network joins it: what it draws is part of that network.
            free = reached - {"0", *self.held(), *outputs}
            direct[name] |= {o for o, pins in self.amps.items() if o != name and free & set(pins[:2])}
        for _ in self.amps:
            for name, known in direct.items():
                direct[name] = known | {far for near in known for far in direct[near]}
        return direct

    def blocks(self):
        """Strongly connected groups of op amps."""
        feeds, found = self.feeds(), []
        for name in self.amps:
            members = [name] + [o for o in self.amps if o != name and o in feeds[name] and name in feeds[o]]
            members.sort(key=list(self.amps).index)
            if members not in found:
                found.append(members)
        return found


class Block:
    """What one block's equations hold: its members live, later op amps too, all other outputs held."""

    def __init__(self, board, members):
        self.board, self.members = board, members
        feeds = board.feeds()
        self.live = [n for n in board.amps if n in members or feeds[n] & set(members)]
        self.network, self.reached = set(), set()
        for name in members:
            for net in board.amps[name][:2]:
                nets, resistors = board.walk(net)
                self.network |= resistors
                self.reached |= nets
        self.loads = self.output_side()
        outputs = board.outputs()
        own = {board.amps[name][2] for name in members}
        self.held = board.held() + [net for net, name in outputs.items() if name not in self.live]
        edge = [net for net in self.reached if net in board.held() or net in outputs]
        order = self.order()
        self.inputs = sorted((net for net in edge if net not in own), key=order.index)
        fixed = {"0", *board.held(), *outputs}
        self.currents = [net for net in board.currents if net in self.reached - fixed]
        free = self.reached - fixed
        self.visitors = [n for n in board.amps if n not in members and free & set(board.amps[n][:2])]

    def order(self):
        nets = []
        for a, b, *_ in self.board.resistors.values():
            nets += [a, b]
        for plus, minus, output in self.board.amps.values():
            nets += [plus, minus, output]
        return list(dict.fromkeys(nets + self.board.held()))

    def output_side(self):
        """Resistors at the members' outputs that lead to no input."""
        board, loads = self.board, set()
        inputs = {net for plus, minus, _ in board.amps.values() for net in (plus, minus)}
        fixed = {"0", *board.held(), *board.outputs()}
        for name in self.members:
            output = board.amps[name][2]
            for resistor, (a, b, *_) in board.resistors.items():
                if output not in (a, b) or resistor in self.network:
                    continue
                other = b if a == output else a
                nets, resistors = ({other}, {resistor}) if other in fixed else board.walk(other)
                if not (nets - fixed) & inputs:
                    loads |= resistors
        return loads


def solve(block, values, mode, held=None, live=None, killed=None):
    """Voltages of all nets for a unit of everything: a dictionary from (kind, name) to {net: array}.

    Kinds: `volt` of a held net, `into` for a current into a net, `error` in series with an op amp's input,
    `source` for one volt of a killed op amp's inner source. `values` holds arrays, one entry a corner.
    """
    board = block.board
    held = block.held if held is None else held
    live = block.live if live is None else live
    nets = [net for net in dict.fromkeys(block.order() + list(board.currents)) if net != "0"]
    at = {net: place for place, net in enumerate(nets)}
    size = len(nets) + len(held) + len(live)
    corners = len(next(iter(values.values())))
    matrix = np.zeros((corners, size, size))

    def conductance(a, b, siemens):
        for x, y in ((a, b), (b, a)):
            if x != "0":
                matrix[:, at[x], at[x]] += siemens
                if y != "0":
                    matrix[:, at[x], at[y]] -= siemens

    for name, (a, b, *_) in board.resistors.items():
        conductance(a, b, 1.0 / values[name])
    if mode == REAL:
        for name, (plus, minus, _) in board.amps.items():
            conductance(plus, minus, values[name, "1/rid"])
            conductance(plus, "0", values[name, "1/rcm"])
            conductance(minus, "0", values[name, "1/rcm"])
    columns = []
    for place, net in enumerate(held):
        row = len(nets) + place
        matrix[:, row, at[net]] = 1.0
        matrix[:, at[net], row] = 1.0
        columns.append((("volt", net), row))
    for place, name in enumerate(live):
        plus, minus, output = board.amps[name]
        row = len(nets) + len(held) + place
        matrix[:, at[output], row] -= 1.0
        # (Vo + Ro Io) / A = Vp - Vn + error; the twin has 1/A = 0. A killed source is one volt behind Ro.
        inverse = values[name, "1/a"] if mode == REAL else 0.0
        inner = 1.0 if name == killed else inverse
        matrix[:, row, at[output]] += inner
        if mode == REAL:
            matrix[:, row, row] += inner * values[name, "ro"]
        if name != killed:
            for net, sign in ((plus, -1.0), (minus, 1.0)):
                if net != "0":
                    matrix[:, row, at[net]] += sign
        columns.append((("source" if name == killed else "error", name), row))
    columns += [(("into", net), at[net]) for net in nets]
    rhs = np.zeros((size, len(columns)))
    for column, (_, row) in enumerate(columns):
        rhs[row, column] = 1.0
    # Refined twice with remainders in long double, so that small errors of large gains keep their digits.
    rhs = np.broadcast_to(rhs, (corners, *rhs.shape))
    inverse = np.linalg.inv(matrix)
    long = matrix.astype(np.longdouble)
    found = np.matmul(inverse, rhs).astype(np.longdouble)
    for _ in range(2):
        found += np.matmul(inverse, (rhs - np.matmul(long, found)).astype(float))
    zero = np.zeros(corners, dtype=np.longdouble)
    return {
        key: {"0": zero, **{net: found[:, place, column] for net, place in at.items()}}
        for column, (key, _) in enumerate(columns)
    }


class Device:
    """Nominal value and range of each parameter, and the text of its profile."""

    def __init__(self, parameters, technology="bipolar"):
        # name -> (text, nominal, low, high)
        self.parameters, self.technology = parameters, technology

    def spread(self, key):
        return self.parameters[key][1:]

    def has(self, key):
        return key in self.parameters


BOUNDS = {"input-resistance": (1e5, np.inf), "common-mode-resistance": (1e7, np.inf), "output-resistance": (20.0, 1e3)}


def linear(device):
    """Nominal, low and high of 1/A, 1/Rid, 1/Rcm, Ro. What the profile doesn't give is ideal at the nominal and
    takes the bounds of a bipolar part in the worst case."""
    _, typical, least = None, *device.spread("open-loop-gain")[:2]
    found = {"1/a": (1 / typical, 1 / device.spread("open-loop-gain")[2], 1 / least)}
    for key, short in (("input-resistance", "1/rid"), ("common-mode-resistance", "1/rcm")):
        if device.has(key):
            typical, low, high = device.spread(key)
            found[short] = (1 / typical, 1 / high, 1 / low)
        else:
            found[short] = (0.0, 0.0, 1 / BOUNDS[key][0])
    if device.has("output-resistance"):
        found["ro"] = device.spread("output-resistance")
    else:
        found["ro"] = (0.0, *BOUNDS["output-resistance"])
    return found


def nominal(board, count=1):
    values = {name: np.full(count, part[2]) for name, part in board.resistors.items()}
    for name in board.amps:
        for short, (typical, _, _) in linear(board.device).items():
            values[name, short] = np.full(count, typical)
    return values


def axes(block, resistors_only=False):
    """Everything that varies: a list of (keys, factors or values, whether they are factors)."""
    board, found = block.board, []
    own = sorted(block.network | block.loads)
    grouped = {name: group for group, (names, *_) in board.groups.items() for name in names}
    for name in own:
        tolerance = board.groups[grouped[name]][2] / 2 if name in grouped else board.resistors[name][3]
        if tolerance > 0:
            found.append(([name], (1 - tolerance, 1 + tolerance), True))
    for names, tolerance, _ in board.groups.values():
        names = [name for name in names if name in own]
        if names and tolerance > 0:
            found.append((names, (1 - tolerance, 1 + tolerance), True))
    if not resistors_only:
        for name in block.members + block.visitors:
            for short, (_, low, high) in linear(board.device).items():
                if name in block.members or short in ("1/rid", "1/rcm"):
                    if low != high:
                        found.append(([(name, short)], (low, high), False))
    return found


def corners(block, resistors_only=False, chunk=4096):
    """Batches of values at all corners, the nominal first."""
    yield nominal(block.board)
    varying = axes(block, resistors_only)
    everything = itertools.product((0, 1), repeat=len(varying))
    while batch := list(itertools.islice(everything, chunk)):
        values = nominal(block.board, len(batch))
        picks = np.array(batch)
        for place, (keys, ends, factors) in enumerate(varying):
            picked = np.array(ends)[picks[:, place]]
            for key in keys:
                values[key] = values[key] * picked if factors else picked
        yield values

"""What a report says of a board, from the nodal equations alone: transfers, pin voltages, figures.

Worst cases are taken over all corners of resistors and op-amp parameters, one by one.
"""

import numpy as np

from circuit import IDEAL, REAL, Block, axes, corners, linear, nominal, solve

BRUTE = 17  # more things that vary than this aren't tried in all combinations
COUNTS = 0.05  # volt by which offsets must move an input before they count in its headroom


def decibel(value):
    return 10 ** (value / 20)


class Review:
    """Everything expected of one board, as a list of (stage, what, of, value)."""

    def __init__(self, board):
        self.board, self.expected = board, []
        self.whole = Whole(board)
        for members in board.blocks():
            block = Block(board, members)
            for name in members:
                Stage(self, block, name).review()


class Whole:
    """The whole board at once, with every op amp live: where signals drive a net."""

    def __init__(self, board):
        self.board = board
        some = Block(board, [next(iter(board.amps))])
        self.response = solve(some, nominal(board), REAL, held=board.held(), live=list(board.amps))
        pairs = {}
        for difference, common, positive, negative in board.pairs.values():
            pairs[positive], pairs[negative] = (difference, common, 0.5), (difference, common, -0.5)
        # Primaries: (range, {key of a unit response: weight}).
        self.primaries = []
        for name, (difference, common, positive, negative) in board.pairs.items():
            self.primaries.append((difference, {("volt", positive): 0.5, ("volt", negative): -0.5}))
            self.primaries.append((common, {("volt", positive): 1.0, ("volt", negative): 1.0}))
        for net, span in board.signals.items():
            if net not in pairs:
                self.primaries.append((span, {("volt", net): 1.0}))
        for net, span in board.currents.items():
            self.primaries.append((span, {("into", net): 1.0}))
        for net, (volts, _) in board.rails.items():
            self.primaries.append(((volts, volts), {("volt", net): 1.0}))

    def row(self, net):
        return [sum(weight * self.response[key][net][0] for key, weight in keys.items()) for _, keys in self.primaries]

    def ends(self, net):
        """Values of the primaries where a net is lowest and highest."""
        low, high = [], []
        for (span, _), entry in zip(self.primaries, self.row(net)):
            down, up = (span[1], span[0]) if entry < 0 else span
            low.append(down)
            high.append(up)
        return low, high

    def rest(self):
        return [sum(span) / 2 for span, _ in self.primaries]

    def state(self, values):
        """Voltages of all nets at values of the primaries."""
        nets = next(iter(self.response.values()))
        rows = {net: self.row(net) for net in nets if net != "0"}
        return {"0": 0.0, **{net: sum(e * v for e, v in zip(row, values)) for net, row in rows.items()}}

    def injected(self, values):
        """The currents at values of the primaries."""
        return {
            key[1]: value
            for (_, keys), value in zip(self.primaries, values)
            for key in keys
            if key[0] == "into"
        }


class Stage:
    def __init__(self, review, block, name):
        self.review_, self.block, self.name = review, block, name
        self.board, self.whole = block.board, review.whole
        self.plus, self.minus, self.output = self.board.amps[name]
        self.one = nominal(self.board)
        self.real = solve(block, self.one, REAL)
        self.twin = solve(block, self.one, IDEAL)

    def expect(self, what, of, value):
        self.review_.expected.append([self.name, what, of, float(value)])

    def review(self):
        self.transfers()
        self.pins()
        self.nominal_figures()
        if len(axes(self.block)) <= BRUTE:
            self.worst_figures()
        if len(axes(self.block, True)) <= BRUTE:
            self.spread()
        self.headrooms()

    # Transfers.

    def inputs(self):
        """Name and weights of every input: pairs, signals and currents; then references and rails."""
        board, found, rest = self.board, [], []
        for name, (_, _, positive, negative) in board.pairs.items():
            if positive in self.block.inputs and negative in self.block.inputs:
                found.append((name, {("volt", positive): 0.5, ("volt", negative): -0.5}))
        for net in self.block.inputs:
            (rest if net in board.rails else found).append((net.rstrip("@"), {("volt", net): 1.0}))
        found += [(net, {("into", net): 1.0}) for net in self.block.currents]
        return found, rest

    @staticmethod
    def read(response, weights, net):
        return sum(weight * response[key][net] for key, weight in weights.items())

    def main(self):
        """The pair; else the largest voltage transfer of the twin, of equals the inverting; else the current."""
        signals = self.inputs()[0]
        for name, weights in signals:
            if name in self.board.pairs:
                return name, weights
        volts = [(n, w) for n, w in signals if next(iter(w))[0] == "volt"] or signals
        size = [self.read(self.twin, weights, self.output)[0] for _, weights in volts]
        largest = max(abs(value) for value in size)
        near = [at for at, value in enumerate(size) if abs(value) >= largest * (1 - 1e-6)]
        return volts[min(near, key=lambda at: (size[at] > 0, at))]

    def transfers(self):
        signals, rest = self.inputs()
        for name, weights in signals + rest:
            ideal = self.read(self.twin, weights, self.output)[0]
            if abs(ideal) > 1e-9:
                self.expect("ideal", name, ideal)
                self.expect("actual", name, self.read(self.real, weights, self.output)[0])

    def pins(self):
        for end, values in zip(("low", "high"), self.whole.ends(self.output)):
            state = self.whole.state(values)
            self.expect(end, "in+", state[self.plus])
            self.expect(end, "in-", state[self.minus])
            self.expect(end, "out", state[self.output])
            driven = sum(state[net] * self.twin["volt", net][self.output][0] for net in self.block.inputs)
            driven += sum(
                amps * self.twin["into", net][self.output][0] for net, amps in self.whole.injected(values).items()
            )
            self.expect(end, "twin_out", driven)

    # Figures.

    def gain_error(self, values, name=None):
        _, weights = self.main()
        actual = self.read(solve(self.block, values, REAL), weights, self.output)
        intended = self.board.intended.get(self.name)
        if intended is not None:
            return actual / intended - 1
        return actual / self.read(solve(self.block, values, IDEAL), weights, self.output) - 1

    def loop_gain(self, values):
        killed = solve(self.block, values, REAL, killed=self.name)["source", self.name]
        return -(killed[self.plus] - killed[self.minus]) / values[self.name, "1/a"]

    def bias(self, values, typical):
        """Sum over every op amp with an input on the block's network."""
        response = solve(self.block, values, REAL)
        return sum(abs(effect) * size for effect, size in self.bias_terms(response, typical, self.output))

    def bias_terms(self, response, typical, net):
        board, device, terms = self.board, self.board.device, []
        growth = 2 ** (max(board.temperature[1] - 25, 0) / 10) if device.technology in ("jfet", "cmos") else 1
        pick = lambda key: device.spread(key)[0 if typical else 2] * growth
        none = np.zeros(1)
        for name in self.block.members + self.block.visitors:
            plus, minus, _ = board.amps[name]
            into = lambda at: response["into", at][net] if at not in ("0", *self.block.held) else none
            zp, zn = into(plus), into(minus)
            if device.has("offset-current"):
                terms += [(zp + zn, pick("bias-current")), ((zp - zn) / 2, pick("offset-current"))]
            else:
                terms += [(zp, pick("bias-current")), (zn, pick("bias-current"))]
        return terms

    def offset_terms(self, response, typical, net):
        board, device, terms = self.board, self.board.device, []
        low, high = board.temperature
        away = max(25 - low, high - 25, 0)
        rest = self.whole.state(self.whole.rest())
        for name in self.block.members:
            plus, minus, _ = board.amps[name]
            common = (rest[plus] + rest[minus]) / 2 - sum(board.supply) / 2
            pick = lambda key, place: device.spread(key)[place]
            place = 0 if typical else 2
            size = [pick("offset-voltage", place)]
            if away > 0:
                size.append(pick("offset-drift", place) * away)
            least = 0 if typical else 1
            size.append(abs(common) / decibel(pick("common-mode-rejection", least)))
            size.append(sum(board.supply_deviation) / decibel(pick("supply-rejection", least)))
            terms += [(response["error", name][net], part) for part in size]
        return terms

    def offset(self, values, typical):
        response = solve(self.block, values, REAL)
        return sum(abs(effect) * size for effect, size in self.offset_terms(response, typical, self.output))

    def nominal_figures(self):
        loop = self.loop_gain(self.one)[0]
        self.expect("nominal", "gain-error", self.gain_error(self.one)[0])
        self.expect("nominal", "loop-gain", abs(loop))
        self.expect("sign", "loop-gain", np.sign(loop))
        self.expect("nominal", "bias-error", self.bias(self.one, True)[0])
        self.expect("nominal", "offset-error", self.offset(self.one, True)[0])

    def worst_figures(self):
        error, loop, bias, offset = [], [], [], []
        for values in corners(self.block):
            found = self.gain_error(values)
            error.append(found[np.argmax(np.abs(found))])
            loop.append(np.min(np.abs(self.loop_gain(values))))
            bias.append(np.max(self.bias(values, False)))
            offset.append(np.max(self.offset(values, False)))
        self.expect("worst", "gain-error", max(error, key=abs))
        self.expect("worst", "loop-gain", min(loop))
        self.expect("worst", "bias-error", max(bias))
        self.expect("worst", "offset-error", max(offset))

    def spread(self):
        _, weights = self.main()
        first, worst = None, 0.0
        for values in corners(self.block, True):
            gain = self.read(solve(self.block, values, REAL), weights, self.output)
            first = gain[0] if first is None else first
            found = gain / first - 1
            worst = max(worst, found[np.argmax(np.abs(found))], key=abs)
        self.expect("worst", "gain-spread", worst)

    # Distances to the rails.

    def headrooms(self):
        nets = (("output-headroom", [self.output]), ("input-headroom", [self.plus, self.minus]))
        for slug, at in nets:
            self.expect("nominal", slug, min(self.distance(slug, net, end)[0] for net in at for end in (0, 1)))
            alone = not any(net in self.board.outputs() for net in self.block.inputs)
            if alone and len(axes(self.block)) <= BRUTE:
                self.expect("worst", slug, min(self.distance(slug, net, end)[1] for net in at for end in (0, 1)))

    def distance(self, slug, net, end):
        """Nominal and worst distance of a net from the low or the high end."""
        board, device = self.board, self.board.device
        key = {
            ("output-headroom", 0): "swing-above-negative",
            ("output-headroom", 1): "swing-below-positive",
            ("input-headroom", 0): "input-above-negative",
            ("input-headroom", 1): "input-below-positive",
        }[slug, end]
        typical, _, most = device.spread(key)
        sign = -1.0 if end else 1.0
        rail, own = board.supply[1 - end], ("VEE", "VCC")[end]
        values = self.whole.ends(net)[end]
        state = self.whole.state(values)
        first = sign * (state[net] - rail) - typical
        if net == "0":
            response = {}
        moved = 0.0
        worst = np.inf
        for batch in corners(self.block):
            response = solve(self.block, batch, REAL)
            terms = self.bias_terms(response, False, net) + self.offset_terms(response, False, net)
            if worst == np.inf:
                moved = sum(abs(effect) * size for effect, size in terms)[0]
            if slug == "input-headroom" and moved <= COUNTS:
                terms = []
            volts = sum(state[held] * response["volt", held][net] for held in self.block.held)
            volts = volts + sum(
                amps * response["into", at][net] for at, amps in self.whole.injected(values).items()
            )
            lost = sum(abs(effect) * size for effect, size in terms)
            supplies = dict(zip(("VCC", "VEE"), board.supply_deviation))
            for supply, deviation in {**supplies, **{at: by for at, (_, by) in board.rails.items()}}.items():
                through = response["volt", supply][net] if supply in self.block.held else 0.0
                direct = 1.0 if supply == own else 0.0
                lost = lost + abs(through - direct) * deviation
            worst = min(worst, np.min(sign * (volts - rail) - most - lost))
            if len(axes(self.block)) > BRUTE:
                break
        return first, worst

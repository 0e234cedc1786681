"""Random boards, one function a topology. Every value is drawn from the generator that is handed in."""

import math

from circuit import Board, Device


def drawn(rng, low, high, digits=3):
    """A value between two, evenly on a logarithmic scale, with few digits."""
    return float(f"{math.exp(rng.uniform(math.log(low), math.log(high))):.{digits}g}")


def plain(value):
    return f"{value:.15f}".rstrip("0").rstrip(".")


def device(rng, gain=(1e3, 1e5), technology="bipolar"):
    """A weak op amp, so that what it lacks shows in every figure."""

    def ranged(key, unit, typical, *, least=None, most=None, scale=1.0):
        ends = {"min": least, "typ": typical, "max": most}
        text = ", ".join(f"{end}: {plain(value)}{unit}" for end, value in ends.items() if value is not None)
        parameters[key] = (
            "{ " + text + " }",
            typical * scale,
            (typical if least is None else least) * scale,
            (typical if most is None else most) * scale,
        )

    def worse(factor):
        return float(f"{factor:.4g}")

    parameters = {}
    typical = drawn(rng, *gain)
    ranged("open-loop-gain", "", typical, least=worse(typical * rng.uniform(0.2, 0.6)))
    typical = drawn(rng, 2e5, 5e6)
    ranged("input-resistance", " ohm", typical, least=worse(typical * rng.uniform(0.2, 0.6)))
    typical = drawn(rng, 2e7, 1e9)
    ranged("common-mode-resistance", " ohm", typical, least=worse(typical * rng.uniform(0.2, 0.6)))
    typical = drawn(rng, 30, 500)
    ranged("output-resistance", " ohm", typical, least=worse(typical * 0.6), most=worse(typical * 1.8))
    typical = drawn(rng, 5, 200)
    ranged("bias-current", " nA", typical, most=worse(typical * 4), scale=1e-9)
    typical = drawn(rng, 1, 20)
    ranged("offset-current", " nA", typical, most=worse(typical * 6), scale=1e-9)
    typical = drawn(rng, 50, 2000)
    ranged("offset-voltage", " uV", typical, most=worse(typical * 3), scale=1e-6)
    typical = drawn(rng, 0.5, 20)
    ranged("offset-drift", " uV/K", typical, most=worse(typical * 3), scale=1e-6)
    ranged("common-mode-rejection", " dB", 90.0, least=72.0)
    ranged("supply-rejection", " dB", 94.0, least=78.0)
    ranged("swing-below-positive", " V", 1.2, most=2.5)
    ranged("swing-above-negative", " V", 0.9, most=2.1)
    ranged("input-below-positive", " V", 1.1, most=1.9)
    ranged("input-above-negative", " V", 0.7, most=1.6)
    return Device(parameters, technology)


def board(rng, tolerance=0.01, **options):
    """An empty board with its supplies."""
    made = Board()
    made.tolerance = tolerance
    made.device = device(rng, **options)
    made.supply = (rng.choice([12.0, 15.0]), rng.choice([-5.0, -12.0, -15.0]))
    made.supply_deviation = (0.6, 0.25)
    made.temperature = (0.0, rng.choice([50.0, 70.0]))
    made.drawn = rng.random() < 0.5
    return made


def resistor(made, name, a, b, ohms, tolerance=None):
    made.resistors[name] = (a, b, ohms, made.tolerance if tolerance is None else tolerance)


def signal(made, net, span, source=None):
    """A signal; a declared source resistance puts a held net behind it."""
    if source is None:
        made.signals[net] = span
        return
    made.sources[net] = source
    made.signals[net + "@"] = span
    resistor(made, f"declared source {net}", net + "@", net, source, 0.0)


def load(made, net, ohms):
    resistor(made, f"declared load {net}", net, "0", ohms, 0.0)


def kilo(rng, low=1, high=100):
    return drawn(rng, low * 1e3, high * 1e3)


# Single stages.


def non_inverting(rng, source=False, loaded=False, intended=False, **options):
    made = board(rng, **options)
    ground, back = kilo(rng, 1, 10), kilo(rng, 10, 200)
    signal(made, "i", (-0.05, 0.12), kilo(rng, 1, 20) if source else None)
    resistor(made, "R1", "m", "0", ground)
    resistor(made, "R2", "o", "m", back)
    if loaded:
        resistor(made, "R3", "o", "0", kilo(rng, 1, 5), 0.05)
    if intended:
        made.intended["XU1"] = float(round(1 + back / ground))
    made.amps["XU1"] = ("i", "m", "o")
    return made


def inverting(rng, source=False, loaded=False, compensated=False, intended=False, **options):
    made = board(rng, **options)
    into, back = kilo(rng, 1, 10), kilo(rng, 10, 200)
    signal(made, "i", (-0.1, 0.2), kilo(rng, 0.1, 2) if source else None)
    resistor(made, "R1", "i", "m", into)
    resistor(made, "R2", "m", "o", back)
    plus = "p" if compensated else "0"
    if compensated:
        resistor(made, "R3", "p", "0", kilo(rng, 1, 10))
    if loaded:
        load(made, "o", kilo(rng, 1, 5))
    if intended:
        made.intended["XU1"] = -float(round(back / into))
    made.amps["XU1"] = (plus, "m", "o")
    return made


def half_supply(rng, **options):
    """Inverting about a divided rail: what is at rest isn't nought."""
    made = inverting(rng, **options)
    made.supply, made.rails = (12.0, -5.0), {"VCC": (12.0, 0.6)}
    made.amps["XU1"] = ("p", "m", "o")
    resistor(made, "R4", "VCC", "p", 22e3)
    resistor(made, "R5", "p", "0", 10e3)
    made.signals = {"i": (2.8, 3.9)}
    return made


def tee(rng, loaded=False, **options):
    made = board(rng, **options)
    signal(made, "i", (-0.02, 0.03))
    resistor(made, "R1", "i", "m", kilo(rng, 20, 200))
    resistor(made, "R2", "m", "x", kilo(rng, 20, 200))
    resistor(made, "R3", "x", "o", kilo(rng, 20, 200))
    resistor(made, "R4", "x", "0", kilo(rng, 1, 10))
    if loaded:
        resistor(made, "RL", "o", "0", kilo(rng, 1, 5))
    made.amps["XU1"] = ("0", "m", "o")
    return made


def follower(rng, source=False, back=False, **options):
    made = board(rng, **options)
    signal(made, "i", (-2.0, 3.0), kilo(rng, 1, 50) if source else None)
    if back:
        resistor(made, "R1", "i", "p", kilo(rng, 1, 100))
        resistor(made, "R2", "o", "m", kilo(rng, 1, 100))
        resistor(made, "R3", "o", "0", kilo(rng, 1, 5))
    made.amps["XU1"] = ("p", "m", "o") if back else ("i", "o", "o")
    return made


def summing(rng, count=3, source=False, **options):
    made = board(rng, **options)
    for at in range(count):
        net = f"i{at + 1}"
        signal(made, net, (-0.3, 0.2 + 0.1 * at), kilo(rng, 0.1, 1) if source and at == 0 else None)
        resistor(made, f"R{at + 1}", net, "m", kilo(rng, 2, 20))
    resistor(made, "RF", "m", "o", kilo(rng, 10, 50))
    made.amps["XU1"] = ("0", "m", "o")
    return made


def summing_non_inverting(rng, count=2, grounded=False, **options):
    made = board(rng, **options)
    for at in range(count):
        signal(made, f"i{at + 1}", (-0.3, 0.2 + 0.1 * at))
        resistor(made, f"R{at + 1}", f"i{at + 1}", "p", kilo(rng, 2, 50))
    if grounded:
        resistor(made, "RP", "p", "0", kilo(rng, 2, 50))
    resistor(made, "RG", "m", "0", kilo(rng, 2, 10))
    resistor(made, "RF", "o", "m", kilo(rng, 10, 50))
    made.amps["XU1"] = ("p", "m", "o")
    return made


def difference(rng, reference=False, pair=False, matched=False, **options):
    made = board(rng, **options)
    into, back = kilo(rng, 2, 20), kilo(rng, 20, 50)
    off = lambda value: value if matched else float(f"{value * rng.uniform(0.97, 1.03):.4g}")
    resistor(made, "R1", "n", "m", into)
    resistor(made, "R2", "m", "o", back)
    resistor(made, "R3", "q", "p", off(into))
    resistor(made, "R4", "p", "REF" if reference else "0", off(back))
    if reference:
        made.rails["REF"] = (2.5, 0.05)
    signal(made, "n", (-0.2, 0.3))
    signal(made, "q", (-0.1, 0.4))
    if pair:
        made.pairs["BRIDGE"] = ((-0.1, 0.2), (1.2, 1.8), "q", "n")
    if matched:
        made.groups["net"] = (["R1", "R2", "R3", "R4"], 0.01, 0.001)
    made.amps["XU1"] = ("p", "m", "o")
    return made


def transimpedance(rng, kind="plain", **options):
    made = board(rng, **options)
    made.currents["m"] = (0.0, 2e-6)
    if kind == "tee":
        resistor(made, "R1", "m", "x", kilo(rng, 100, 500))
        resistor(made, "R2", "x", "o", kilo(rng, 10, 50))
        resistor(made, "R3", "x", "0", kilo(rng, 2, 20))
    else:
        resistor(made, "R1", "m", "o", kilo(rng, 200, 2000))
    plus = "0"
    if kind == "compensated":
        plus = "p"
        resistor(made, "R4", "p", "0", kilo(rng, 200, 2000))
        resistor(made, "R5", "m", "0", kilo(rng, 500, 2000))
    made.amps["XU1"] = (plus, "m", "o")
    return made


def both_ways(rng, **options):
    """Feedback to both inputs, the negative one stronger, into a load at the non-inverting input."""
    made = board(rng, **options)
    signal(made, "i", (-0.5, 0.5))
    resistor(made, "R1", "m", "0", 10e3)
    resistor(made, "R2", "o", "m", 10e3)
    resistor(made, "R3", "i", "p", 10e3)
    resistor(made, "R4", "o", "p", 10e3)
    resistor(made, "RL", "p", "0", kilo(rng, 1, 3))
    made.amps["XU1"] = ("p", "m", "o")
    return made


# Blocks of several op amps, and chains.


def instrumentation(rng, pair=False, **options):
    made = board(rng, **options)
    side, back, into = kilo(rng, 5, 20), kilo(rng, 10, 30), kilo(rng, 5, 20)
    signal(made, "a", (-0.02, 0.03))
    signal(made, "b", (-0.01, 0.02))
    if pair:
        made.pairs["BRIDGE"] = ((-0.02, 0.03), (0.4, 0.6), "a", "b")
    resistor(made, "R1", "x", "f", side)
    resistor(made, "R2", "y", "g", float(f"{side * 1.02:.4g}"))
    resistor(made, "RG", "f", "g", kilo(rng, 0.5, 3))
    resistor(made, "R3", "x", "m", into)
    resistor(made, "R4", "y", "p", into)
    resistor(made, "R5", "m", "o", back)
    resistor(made, "R6", "p", "0", float(f"{back * 0.99:.4g}"))
    made.amps["XU1"] = ("a", "f", "x")
    made.amps["XU2"] = ("b", "g", "y")
    made.amps["XU3"] = ("p", "m", "o")
    return made


def two_op_amps(rng, **options):
    made = board(rng, **options)
    low, high = kilo(rng, 2, 20), kilo(rng, 20, 80)
    signal(made, "a", (-0.05, 0.05))
    signal(made, "b", (-0.02, 0.08))
    resistor(made, "R1", "0", "f", high)
    resistor(made, "R2", "f", "x", low)
    resistor(made, "R3", "x", "g", low)
    resistor(made, "R4", "g", "o", high)
    resistor(made, "RG", "f", "g", kilo(rng, 5, 50))
    made.amps["XU1"] = ("a", "f", "x")
    made.amps["XU2"] = ("b", "g", "o")
    return made


def composite(rng, **options):
    """An op amp whose output is amplified by another inside its loop."""
    made = board(rng, **options)
    signal(made, "i", (-0.1, 0.1))
    resistor(made, "R1", "m", "0", kilo(rng, 1, 10))
    resistor(made, "R2", "o", "m", kilo(rng, 10, 100))
    resistor(made, "R3", "k", "0", kilo(rng, 1, 10))
    resistor(made, "R4", "o", "k", kilo(rng, 2, 20))
    made.amps["XU1"] = ("i", "m", "x")
    made.amps["XU2"] = ("x", "k", "o")
    return made


def chain(rng, **options):
    """Three stages, each loading the one before it."""
    made = board(rng, **options)
    signal(made, "i", (-0.05, 0.08))
    resistor(made, "R1", "m", "0", kilo(rng, 2, 10))
    resistor(made, "R2", "x", "m", kilo(rng, 5, 20))
    resistor(made, "R3", "x", "k", kilo(rng, 1, 5))
    resistor(made, "R4", "k", "y", kilo(rng, 5, 20))
    resistor(made, "R5", "y", "p", kilo(rng, 1, 5))
    resistor(made, "R6", "p", "0", kilo(rng, 1, 5))
    resistor(made, "R7", "h", "0", kilo(rng, 2, 10))
    resistor(made, "R8", "o", "h", kilo(rng, 5, 20))
    made.amps["XU1"] = ("i", "m", "x")
    made.amps["XU2"] = ("0", "k", "y")
    made.amps["XU3"] = ("p", "h", "o")
    return made


def correlated(rng, **options):
    """One signal reaches a difference stage by two ways, one of them inverted."""
    made = board(rng, **options)
    signal(made, "i", (-0.4, 0.3))
    resistor(made, "R1", "i", "m", kilo(rng, 2, 10))
    resistor(made, "R2", "m", "x", kilo(rng, 5, 20))
    resistor(made, "R3", "x", "k", kilo(rng, 2, 10))
    resistor(made, "R4", "k", "o", kilo(rng, 5, 20))
    resistor(made, "R5", "y", "p", kilo(rng, 2, 10))
    resistor(made, "R6", "p", "0", kilo(rng, 5, 20))
    made.amps["XU1"] = ("0", "m", "x")
    made.amps["XU2"] = ("i", "y", "y")
    made.amps["XU3"] = ("p", "k", "o")
    return made


def summed_outputs(rng, **options):
    """Two inverting stages into a summing one, and a load."""
    made = board(rng, **options)
    signal(made, "i", (-0.2, 0.3))
    signal(made, "j", (-0.1, 0.2))
    resistor(made, "R1", "i", "m", kilo(rng, 2, 10))
    resistor(made, "R2", "m", "x", kilo(rng, 5, 20))
    resistor(made, "R3", "j", "n", kilo(rng, 2, 10))
    resistor(made, "R4", "n", "y", kilo(rng, 5, 20))
    resistor(made, "R5", "x", "k", kilo(rng, 2, 10))
    resistor(made, "R6", "y", "k", kilo(rng, 2, 10))
    resistor(made, "R7", "k", "o", kilo(rng, 5, 20))
    load(made, "o", kilo(rng, 1, 5))
    made.amps["XU1"] = ("0", "m", "x")
    made.amps["XU2"] = ("0", "n", "y")
    made.amps["XU3"] = ("0", "k", "o")
    return made


def shared_input(rng, **options):
    """Two stages on one input network: each loads it with what its inputs draw."""
    made = board(rng, **options)
    signal(made, "i", (-0.4, 0.3))
    resistor(made, "R1", "i", "p", kilo(rng, 5, 50))
    resistor(made, "R2", "p", "0", kilo(rng, 5, 50))
    resistor(made, "R3", "m", "0", kilo(rng, 2, 10))
    resistor(made, "R4", "x", "m", kilo(rng, 5, 20))
    made.amps["XU1"] = ("p", "m", "x")
    made.amps["XU2"] = ("p", "y", "y")
    return made


# Profiles that say less.


def typical_alone(rng):
    """Only typical values: the worst case is derated."""
    made = non_inverting(rng, source=True, loaded=True)
    factors = {
        "open-loop-gain": (0.25, 1),
        "input-resistance": (0.2, 1),
        "common-mode-resistance": (1, 1),
        "output-resistance": (0.5, 2),
        "bias-current": (1, 5),
        "offset-current": (1, 10),
        "offset-voltage": (1, 4),
        "offset-drift": (1, 4),
        "swing-below-positive": (1, 2),
        "swing-above-negative": (1, 2),
        "input-below-positive": (1, 1.5),
        "input-above-negative": (1, 1.5),
    }
    for key, (text, typical, _, _) in made.device.parameters.items():
        alone = next(part for part in text.strip("{} ").split(", ") if part.startswith("typ"))
        low, high = factors.get(key, (1, 1))
        ends = (typical - 20, typical) if key.endswith("rejection") else (typical * low, typical * high)
        made.device.parameters[key] = (alone.removeprefix("typ: "), typical, *ends)
    return made


def silent(rng, make, *keys):
    """A profile that leaves parameters out."""
    made = make(rng)
    for key in keys:
        del made.device.parameters[key]
    return made


RESISTANCES = ("input-resistance", "common-mode-resistance", "output-resistance")

BOARDS = [
    ("non-inverting", non_inverting),
    ("non-inverting, very weak", lambda rng: non_inverting(rng, gain=(100, 500))),
    ("non-inverting, source and load", lambda rng: non_inverting(rng, source=True, loaded=True)),
    ("non-inverting, exact resistors", lambda rng: non_inverting(rng, source=True, tolerance=0.0)),
    ("non-inverting, intended gain", lambda rng: non_inverting(rng, intended=True)),
    ("inverting", inverting),
    ("inverting, very weak", lambda rng: inverting(rng, gain=(100, 500))),
    ("inverting, source and load", lambda rng: inverting(rng, source=True, loaded=True)),
    ("inverting, compensated", lambda rng: inverting(rng, compensated=True)),
    ("inverting, exact resistors", lambda rng: inverting(rng, compensated=True, tolerance=0.0)),
    ("inverting, intended gain", lambda rng: inverting(rng, loaded=True, intended=True)),
    ("inverting about half the supply", half_supply),
    ("tee", tee),
    ("tee, loaded", lambda rng: tee(rng, loaded=True)),
    ("tee, exact resistors", lambda rng: tee(rng, tolerance=0.0)),
    ("follower", follower),
    ("follower, source", lambda rng: follower(rng, source=True)),
    ("follower, resistors both ways", lambda rng: follower(rng, back=True)),
    ("summing, two", lambda rng: summing(rng, 2)),
    ("summing, three", lambda rng: summing(rng, 3, source=True)),
    ("summing, five", lambda rng: summing(rng, 5)),
    ("non-inverting summer, two", summing_non_inverting),
    ("non-inverting summer, three", lambda rng: summing_non_inverting(rng, 3, grounded=True)),
    ("difference", difference),
    ("difference, reference", lambda rng: difference(rng, reference=True)),
    ("difference, pair", lambda rng: difference(rng, pair=True)),
    ("difference, matched network", lambda rng: difference(rng, matched=True, reference=True)),
    ("transimpedance", transimpedance),
    ("transimpedance, tee", lambda rng: transimpedance(rng, "tee")),
    ("transimpedance, compensated", lambda rng: transimpedance(rng, "compensated")),
    ("feedback both ways", both_ways),
    ("instrumentation", instrumentation),
    ("instrumentation, pair", lambda rng: instrumentation(rng, pair=True)),
    ("instrumentation, strong", lambda rng: instrumentation(rng, gain=(1e5, 1e6))),
    ("two op amps", two_op_amps),
    ("two op amps, exact resistors", lambda rng: two_op_amps(rng, tolerance=0.0)),
    ("composite", composite),
    ("chain", chain),
    ("chain, strong", lambda rng: chain(rng, gain=(1e5, 1e6))),
    ("correlated", correlated),
    ("summed outputs", summed_outputs),
    ("shared input", shared_input),
    ("difference, wide tolerance", lambda rng: difference(rng, tolerance=0.1)),
    ("difference, wide tolerance and reference", lambda rng: difference(rng, reference=True, tolerance=0.2)),
    ("instrumentation, wide tolerance", lambda rng: instrumentation(rng, tolerance=0.2)),
    ("typical values alone", typical_alone),
    ("resistances not given", lambda rng: silent(rng, lambda r: inverting(r, compensated=True), *RESISTANCES)),
    ("offset current not given", lambda rng: silent(rng, lambda r: inverting(r, compensated=True), "offset-current")),
    ("field-effect, hot", lambda rng: inverting(rng, compensated=True, technology="jfet")),
]

"""Small systems in every state that has no ordinary answer, each made as plainly as it can be."""

from __future__ import annotations

from dataclasses import replace

import builders as b

HOUR = 3600.0
FLOW = [0.0, 20 / HOUR, 40 / HOUR, 60 / HOUR, 80 / HOUR]
FALLING = [40.0, 39.0, 36.0, 31.0, 24.0]  # 40 - 0.0025 Q**2, Q in m3/h
DROOPING = [30.0, 33.0, 34.0, 33.0, 30.0]  # 30 + 0.2 Q - 0.0025 Q**2
PIPE = {"bore": 0.1, "roughness": 4.57e-5}


def pump(tag="P", flow=FLOW, head=FALLING, **options):
    return b.pump(tag, flow, head, **options)


def lift(static, *, head=FALLING, flow=FLOW, length=200.0, running=1, check=True, level=0.0, profile=(), extra=()):
    """Tank T1 - pump P - rising main - tank T2 at ``static``; returns the case."""
    fittings = [b.check_valve()] if check else []
    lines = [b.line("L1", "T1", "P.suction", length=5.0, **PIPE),
             b.line("L2", "P.discharge", "T2", length=length, fittings=fittings, profile=profile, **PIPE), *extra]
    system = b.system([b.tank("T1", level), b.tank("T2", static)], lines, [pump(flow=flow, head=head)])
    return b.case("1", system, running=running)


def static_above_shutoff(check=True):
    return lift(45.0, check=check)


def past_end():
    return lift(5.0, length=20.0)


def below_start():
    return lift(33.0, flow=FLOW[2:], head=FALLING[2:], length=1500.0)


def two_duties():
    return lift(31.5, head=DROOPING, length=60.0)


def high_point():
    """Crest at 18 m in a line that ends at 8 m, a third of the way before its end."""
    return lift(8.0, length=600.0, profile=[(0, 0), (400, 18.0), (600, 7.0)])


def impossible_siphon():
    return lift(8.0, length=600.0, profile=[(0, 0), (400, 30.0), (600, 7.0)])


def dead_leg():
    system = b.system(
        [b.tank("T1", 20.0), b.tank("T2", 10.0), b.junction("J"), b.junction("end")],
        [b.line("L1", "T1", "J", length=100, **PIPE), b.line("L2", "J", "T2", length=100, **PIPE),
         b.line("leg", "J", "end", length=50, **PIPE)],
    )
    return b.case("1", system)


def at_rest(factor=None):
    """Two tanks at one level, three lines and a demandless node; ``factor`` a given Darcy factor."""
    system = b.system(
        [b.tank("T1", 12.0), b.tank("T2", 12.0), b.junction("J"), b.junction("K")],
        [b.line("L1", "T1", "J", length=100, k=3.0, factor=factor, **PIPE),
         b.line("L2", "J", "T2", length=100, factor=factor, **PIPE),
         b.line("L3", "J", "K", length=10, factor=factor, **PIPE),
         b.line("L4", "K", "T2", length=10, factor=factor, **PIPE)],
    )
    return b.case("1", system)


def island():
    """J3 and J4 hang together but on nothing else; J4 wants water."""
    system = b.system(
        [b.tank("T1", 20.0), b.tank("T2", 10.0), b.junction("J3"), b.junction("J4", 0.002)],
        [b.line("L1", "T1", "T2", length=100, **PIPE), b.line("L2", "J3", "J4", length=10, **PIPE)],
    )
    return b.case("1", system)


def demand_behind_stopped_pump():
    system = b.system(
        [b.tank("T1", 0.0), b.junction("J", 0.003)],
        [b.line("L1", "T1", "P.suction", length=5, **PIPE), b.line("L2", "P.discharge", "J", length=50, **PIPE)],
        [pump()],
    )
    return b.case("1", system, running=0)


def pump_into_dead_end():
    system = b.system(
        [b.tank("T1", 0.0), b.junction("J")],
        [b.line("L1", "T1", "P.suction", length=5, **PIPE), b.line("L2", "P.discharge", "J", length=50, **PIPE)],
        [pump()],
    )
    return b.case("1", system)


def weak_pump_pushed_shut():
    """Two pumps feed one header; the weak one cannot reach its head."""
    weak = pump("weak", head=[0.5 * h for h in FALLING])
    lines = [b.line(f"{tag}-in", "T1", f"{tag}.suction", length=5, **PIPE) for tag in ("weak", "strong")]
    lines += [b.line(f"{tag}-out", f"{tag}.discharge", "J", length=5, **PIPE) for tag in ("weak", "strong")]
    lines.append(b.line("main", "J", "T2", length=400, **PIPE))
    nodes = [b.tank("T1", 0.0), b.tank("T2", 15.0), b.junction("J")]
    return b.case("1", b.system(nodes, lines, [weak, pump("strong")]))


def flat_curve():
    flat = [20.0, 19.99, 19.96, 19.91, 19.84]
    return lift(15.0, head=flat, length=150.0, running=2)


def level_line():
    """No length and no fitting between two tanks."""
    system = b.system([b.tank("T1", 20.0), b.tank("T2", 10.0)], [b.line("L1", "T1", "T2", length=0.0, bore=0.1)])
    return b.case("1", system)


def reversed_line():
    system = b.system([b.tank("T1", 10.0), b.tank("T2", 20.0)], [b.line("L1", "T1", "T2", length=100, **PIPE)])
    return b.case("1", system)


def shut_line():
    case = reversed_line()
    line = replace(case.system.lines["L1"], fittings=(b.check_valve(),))
    return replace(case, system=replace(case.system, lines={"L1": line}))


def outlet_too_high():
    system = b.system([b.tank("T1", 10.0), b.outlet("O", 20.0)], [b.line("L1", "T1", "O", length=100, **PIPE)])
    return b.case("1", system)


def drawing_from_outlet():
    """A line drawn the wrong way round, from the outlet to the tank below it."""
    system = b.system([b.tank("T1", 10.0), b.outlet("O", 20.0)], [b.line("L1", "O", "T1", length=100, **PIPE)])
    return b.case("1", system)


def too_much_demand():
    system = b.system(
        [b.tank("T1", 10.0), b.junction("J", 0.02, elevation=2.0)], [b.line("L1", "T1", "J", length=300, **PIPE)]
    )
    return b.case("1", system)


def between_laminar_and_turbulent():
    system = b.system(
        [b.tank("T1", 10.0), b.junction("J", 3000 * 1.13757e-3 / 999.1 * 0.1 * 3.141592653589793 / 4)],
        [b.line("L1", "T1", "J", length=100, **PIPE)],
    )
    return b.case("1", system)


def held_by_fixed_loss(head=5.0):
    """A seal of ``head`` between tanks 3 m apart."""
    system = b.system(
        [b.tank("T1", 13.0), b.tank("T2", 10.0)],
        [b.line("L1", "T1", "T2", length=100, equipment=["S"], **PIPE)], items=[b.equipment("S", shut=head)],
    )
    return b.case("1", system)


def inflow_behind_check_valve():
    """A node pushes water in, and its only way out is a check valve the wrong way."""
    system = b.system(
        [b.tank("T1", 10.0), b.junction("J", -0.002)],
        [b.line("L1", "T1", "J", length=100, fittings=[b.check_valve()], **PIPE)],
    )
    return b.case("1", system)


def twins():
    """Two equal lines side by side."""
    lines = [b.line(tag, "T1", "J", length=100, **PIPE) for tag in ("L1", "L2")]
    lines.append(b.line("L3", "J", "T2", length=100, **PIPE))
    return b.case("1", b.system([b.tank("T1", 20.0), b.tank("T2", 10.0), b.junction("J")], lines))

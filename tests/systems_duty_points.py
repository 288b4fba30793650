"""Published duty points: stated pump curves against stated systems, each as a project folder; results in SI."""

from __future__ import annotations

from published_cases import PublishedCase, si
from system_projects import CASE, PUMP, Sketch, line, liquid, published_case, pump, stated, stub
from systems_pumped import DISCHARGE, FANNING, lift, system


def _tabulated(case: PublishedCase) -> list[list[float]]:
    return [[i, case[f"pump_H_at_{i}_L_s"]] for i in (0, 2, 4, 6, 8, 10)]


def _tabulated_system(case: PublishedCase, points: list[list[float]], **more) -> Sketch:
    """The stated coefficient holds one velocity head besides the friction: the exit."""
    main = line(DISCHARGE, "T-2", stated(case, "pipe_diameter"), stated(case, "length"),
                factor=FANNING * case["fanning_factor"], k={"exit": 1})  # fmt: skip
    made = pump(points, {"flow": "L/s", "head": "m"}, "6 L/s", speed="1200 rpm")
    return lift(case, main, rise=stated(case, "static_head"), liquid=liquid("1000 kg/m3"), pumps={PUMP: made}, **more)


@system("OP-04")
def tabulated_pump(case, folder):
    made = _tabulated_system(case, _tabulated(case)).computed(folder)
    return {"flow": made.at(f"{PUMP}/Q"), "head": made.at(f"{PUMP}/H")}


@system("OP-05")
def speed_for_three_quarters_of_the_flow(case, folder):
    """The curve of OP-04 by the affinity laws at the ends of the allowed speeds and at the printed one, as cases.

    The speed that passes the stated flow is interpolated between them.
    """
    first = published_case("OP-04")
    allowed = case.allowed("speed_2")
    speeds = [si(case.expected["speed_2"]) + step * allowed for step in (-1, 0, 1)]
    cases = {}
    for number, speed in enumerate(speeds, start=1):
        ratio = speed / case["speed_1"]
        scaled = [[float(f"{q * ratio:.12g}"), float(f"{h * ratio**2:.12g}")] for q, h in _tabulated(first)]
        cases[str(number)] = {"title": f"{speed:.1f} rad/s", "set": {f"pumps.{PUMP}.curve.points": scaled}}
    made = _tabulated_system(first, _tabulated(first), cases=cases).computed(folder)
    flows = [made.at(f"{PUMP}/Q", number) for number in cases]
    assert flows[0] < flows[1] < flows[2]
    low, high = (0, 1) if flows[1] >= case["flow_2"] else (1, 2)
    share = (case["flow_2"] - flows[low]) / (flows[high] - flows[low])
    return {"speed_2": speeds[low] + share * (speeds[high] - speeds[low])}


@system("OP-09")
def one_two_parallel_two_series(case, folder):
    """Two units as two running of one pump item, and as two items one after the other."""
    drop, shutoff = case["pump_coefficient_per_1000gpm_squared"] / si("1 ft"), case["pump_shutoff_head"] / si("1 ft")
    points = [[1000 * q, round(shutoff - drop * q**2, 6)] for q in (0, 5, 10, 15, 20, 25)]
    unit = pump(points, {"flow": "gpm", "head": "ft"}, "15000 gpm", installed=2)
    bore, length = stated(case, "diameter"), stated(case, "length")

    def main(start):
        return line(start, "T-2", bore, length, factor=case["friction_factor"], k={"exit": 0})

    more = {"rise": stated(case, "static_head"), "units": "US", "liquid": liquid("62.4 lb/ft3")}
    cases = {CASE: {}, "2": {"pumps": {PUMP: 2}}}
    single = lift(case, main(DISCHARGE), pumps={PUMP: unit}, cases=cases, **more).computed(folder / "parallel")
    row = lift(case, main("P-2.discharge"), pumps={PUMP: unit, "P-2": unit}, **more)
    row.lines["L-3"] = stub(DISCHARGE, "P-2.suction", bore)
    series = row.computed(folder / "series")
    return {
        "flow_one": single.at(f"{PUMP}/Q"), "head_one": single.at(f"{PUMP}/H"),
        "flow_parallel": single.at(f"{PUMP}/Q", "2"), "head_parallel": single.at(f"{PUMP}/H", "2"),
        "flow_series": series.at(f"{PUMP}/Q"), "head_series": series.at(f"{PUMP}/H") + series.at("P-2/H"),
    }  # fmt: skip


@system("HI-DUTY-1")
def data_book_duty(case, folder):
    """The second case sets the level of the upper tank 10 ft higher."""
    points = [[case[f"flow_{i}"] / si("1 gallon/minute"), case[f"head_{i}"] / si("1 ft")] for i in (1, 2, 3, 4)]
    points = [[round(x, 9) for x in point] for point in points]
    main = line(DISCHARGE, "T-2", stated(case, "inside_diameter"), stated(case, "length"),
                factor=case["friction_factor"],
                k={"fittings": f"{case['loss_coefficient'] - 1:.10g}", "exit": 1})  # fmt: skip
    higher = f"{(case['static_head'] + case['added_static_head']) / si('1 ft'):.10g} ft"
    made = lift(
        case, main, rise=stated(case, "static_head"), units="US", liquid=liquid("62.4 lb/ft3"),
        pumps={PUMP: pump(points, {"flow": "gpm", "head": "ft"}, "200 gpm")}, site={"gravity": "32.2 ft/s2"},
        cases={CASE: {}, "2": {"set": {"system.nodes.T-2.levels.normal": higher}}},
    ).computed(folder)  # fmt: skip
    return {"flow": made.at(f"{PUMP}/Q"), "head": made.at(f"{PUMP}/H"),
            "flow_with_added_head": made.at(f"{PUMP}/Q", "2")}  # fmt: skip

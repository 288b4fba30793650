"""Grade lines: total head along a line, hydraulic grade, margin over the pipe axis."""

from calcpack.formulas.formula import formula

HEAD_AFTER = formula(
    "grade.head_after", "Total head after a line", "H_2 = H_1 - h_L",
    H_2="head", H_1="head", h_L="head",
    source="BERNOULLI", note="loss positive in flow direction",
)

HEAD_AFTER_LINES = formula(
    "grade.head_after_lines", "Total head after the lines", "H_2 = H_1 - sum(h_L)",
    H_2="head", H_1="elevation", h_L="head[]",
    source="BERNOULLI", note="losses positive in flow direction",
)

HEAD_ALONG = formula(
    "grade.head_along", "Total head along a line", "H_x = H_1 - h_L * (x / L)",
    H_x="head", H_1="head", h_L="head", x="length", L="length",
    source="BERNOULLI", locator="loss spread evenly over the length",
)

HEAD_ALONG_EXIT = formula(
    "grade.head_along_exit", "Total head along a line that ends in an exit loss",
    "H_x = H_1 - (h_L - h_x) * (x / L)",
    H_x="head", H_1="head", h_L="head", h_x="head", x="length", L="length",
    source="BERNOULLI", locator="exit loss at the end, all other loss spread evenly over the length",
)

HYDRAULIC_GRADE = formula(
    "grade.hydraulic_grade", "Hydraulic grade", "z_h = H - h_v",
    z_h="elevation", H="head", h_v="head",
    source="BERNOULLI",
)

AXIS_MARGIN = formula(
    "grade.axis_margin", "Hydraulic grade above the pipe axis", "m = z_h - z",
    m="head", z_h="elevation", z="elevation",
    source="DEFINITION", note="below zero the pressure is below atmospheric",
)

NODE_PRESSURE = formula(
    "grade.node_pressure", "Gauge pressure at a node", "p = rho * g * (H - z)",
    p="gauge_pressure", rho="density", g="acceleration", H="head", z="elevation",
    source="BERNOULLI", note="velocity head not deducted: the pressure of liquid brought to rest",
)

NODE_BALANCE = formula(
    "grade.node_balance", "Flow that is left over at a node", "dQ = sum(Q_in) - sum(Q_out)",
    dQ="flow", Q_in="flow[]", Q_out="flow[]",
    source="CONTINUITY",
)

LOOP_BALANCE = formula(
    "grade.loop_balance", "Head that is left over around a loop", "dH = sum(h_a) - sum(h_b)",
    dH="head", h_a="head[]", h_b="head[]",
    source="BERNOULLI", note="heads gained and lost in going round once",
)

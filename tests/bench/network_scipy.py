"""Solves the network of a JSON file with SciPy's root finder and times it.

    python3 network_scipy.py FILE [REPETITIONS]

The file holds `nodes`, `laws`, `branches` (with `from`, `to`, `turns`, `elements`, all counted from
1) and `currents`, one list per operating point. Written as a careful user of SciPy would: element
arrays in NumPy, no Python loop inside the equations, the analytic Jacobian, unknowns and equations
of size one. Every element has its own nodes (chains are opened up), the unknowns are the nodes'
potentials. The material's slopes are worked out here from the curve's points (Fritsch and Butland
1984 inside, as PchipInterpolator; the initial permeability at the foot and the approach to
saturation at the end, both limited as Fritsch and Carlson 1980 ask), so the law is independent too.

Prints for each point: `point N`, `linkage ...` (Wb), `flux ...` (Wb, one per branch), `residual`
(largest imbalance of a node over the largest flux), `calls` of the equations, and with REPETITIONS
the median time of a solution from zero, after warming up: `seconds` with the analytic Jacobian,
`differences` with the finder's own, by finite differences (its default).
"""
import json
import statistics
import sys
import time

import numpy as np
from scipy.interpolate import CubicHermiteSpline, PchipInterpolator
from scipy.optimize import root

MU0 = 4e-7 * np.pi


class CurveLaw:
    """J(H) through points with an approach to saturation behind the last."""

    def __init__(self, spec):
        h = np.array(spec["h"], float)
        j = np.array(spec["b"], float) - MU0 * h
        slope = PchipInterpolator(h, j).derivative()(h)
        secant = np.diff(j) / np.diff(h)
        self.last, self.saturation = h[-1], spec["saturation"]
        self.room = self.saturation - j[-1]
        wanted_first = MU0 * (spec["initial_permeability"] - 1)
        slope[0] = min(wanted_first, np.sqrt(max(9 * secant[0] ** 2 - slope[1] ** 2, 0)))
        slope[-1] = min(self.room / h[-1], np.sqrt(max(9 * secant[-1] ** 2 - slope[-2] ** 2, 0)))
        self.rate = slope[-1] / self.room
        self.value = CubicHermiteSpline(h, j, slope)
        self.slope = self.value.derivative()

    def polarisation(self, h):
        size = np.abs(h)
        beyond = size > self.last
        inside = self.value(np.minimum(size, self.last))
        if beyond.any():
            tail = self.saturation - self.room / (1 + self.rate * (size - self.last))
            inside = np.where(beyond, tail, inside)
        return np.copysign(inside, h)

    def gradient(self, h):
        size = np.abs(h)
        beyond = size > self.last
        inside = self.slope(np.minimum(size, self.last))
        if beyond.any():
            tail = self.room * self.rate / (1 + self.rate * (size - self.last)) ** 2
            inside = np.where(beyond, tail, inside)
        return inside


class FroelichLaw:
    """J = chi mu0 H / (1 + chi mu0 |H| / Js); without saturation it is linear."""

    def __init__(self, spec):
        self.chi = MU0 * (spec["initial_permeability"] - 1)
        self.ratio = self.chi / spec["saturation"] if "saturation" in spec else 0.0

    def polarisation(self, h):
        return self.chi * h / (1 + self.ratio * np.abs(h))

    def gradient(self, h):
        return self.chi / (1 + self.ratio * np.abs(h)) ** 2


class Network:
    """Element arrays of the opened-up network; node 0 is the reference."""

    def __init__(self, spec):
        self.laws = [CurveLaw(s) if "h" in s else FroelichLaw(s) for s in spec["laws"]]
        nodes, ends, self.first = spec["nodes"], [], []
        area, length, linear, law = [], [], [], []
        for branch in spec["branches"]:
            self.first.append(len(ends))
            at = branch["from"] - 1
            for i, element in enumerate(branch["elements"]):
                to = branch["to"] - 1
                if i + 1 < len(branch["elements"]):
                    to, nodes = nodes, nodes + 1
                ends.append((at, to))
                at = to
                area.append(element.get("area", 0.0))
                length.append(element.get("length", 1.0))
                linear.append(element.get("permeance", element.get("bypass", 0.0)))
                law.append(element.get("law", 0) - 1)
        self.area, self.length, law = np.array(area), np.array(length), np.array(law)
        self.linear = np.array(linear) + MU0 * self.area / self.length
        self.groups = [(self.laws[k], np.flatnonzero(law == k)) for k in range(len(self.laws))]
        self.incidence = np.zeros((nodes, len(ends)))
        for i, (a, b) in enumerate(ends):
            self.incidence[a, i] += 1
            self.incidence[b, i] -= 1
        self.incidence = self.incidence[1:]
        self.transposed = np.ascontiguousarray(self.incidence.T)
        self.turns = np.array([branch["turns"] for branch in spec["branches"]], float)

    def flux(self, drop):
        flux = self.linear * drop
        for law, at in self.groups:
            flux[at] += self.area[at] * law.polarisation(drop[at] / self.length[at])
        return flux

    def tangent(self, drop):
        tangent = self.linear.copy()
        for law, at in self.groups:
            tangent[at] += self.area[at] / self.length[at] * law.gradient(drop[at] / self.length[at])
        return tangent

    def solve(self, current, analytic=True):
        source = np.zeros(self.incidence.shape[1])
        source[self.first] = self.turns @ current
        unit = np.abs(source).max()  # A, unit of the unknowns
        size = np.abs(self.flux(source)).max()

        def equations(x):
            return self.incidence @ self.flux(unit * (self.transposed @ x) + source) / size

        def jacobian(x):
            tangent = self.tangent(unit * (self.transposed @ x) + source)
            return (self.incidence * (tangent * (unit / size))) @ self.transposed

        answer = root(equations, np.zeros(len(self.incidence)), method="hybr", tol=1e-13,
                      jac=jacobian if analytic else None)
        flux = self.flux(unit * (self.transposed @ answer.x) + source)
        return flux, np.abs(self.incidence @ flux).max() / np.abs(flux).max(), answer.nfev

    def linkage(self, flux):
        return self.turns.T @ flux[self.first]


def median_time(work, repetitions):
    for _ in range(3):
        work()
    times = []
    for _ in range(repetitions):
        start = time.perf_counter()
        work()
        times.append(time.perf_counter() - start)
    return statistics.median(times)


def main():
    with open(sys.argv[1], encoding="utf-8") as file:
        spec = json.load(file)
    repetitions = int(sys.argv[2]) if len(sys.argv) > 2 else 0
    network = Network(spec)
    for number, current in enumerate(spec["currents"], 1):
        current = np.array(current, float)
        flux, residual, calls = network.solve(current)
        print("point", number)
        print("linkage", *(repr(float(x)) for x in network.linkage(flux)))
        print("flux", *(repr(float(x)) for x in flux[network.first]))
        print("residual", residual)
        print("calls", calls)
        if repetitions:
            print("seconds", median_time(lambda: network.solve(current), repetitions))
            print("differences", median_time(lambda: network.solve(current, False), repetitions))


if __name__ == "__main__":
    main()

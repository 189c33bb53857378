"""Half grains with overlapping layers and frozen profiles, by scipy's solve_bvp.

Independent of the Go code: a collocation solver on the plain equation
psi'' = -rho(x, psi) with the excess integrals carried as further unknowns.
Run: python3 make.py > cases.json
"""
import json
import sys

import numpy as np
import scipy
from scipy.integrate import solve_bvp

E, K, EPS0 = 1.602176634e-19, 1.380649e-23, 8.8541878188e-12
TOL = 1e-8


def species(charge, bulk, mobile=True, sites=0.0, amplitude=0.0, length=0.0):
    """amplitude, length: frozen profile c(x) = bulk (1 + amplitude exp(-(x/length)^2))."""
    return dict(charge=charge, bulk_m3=bulk, mobile=mobile, sites_m3=sites,
                profile_amplitude=amplitude, profile_length_m=length)


def case(T, eps, width, sp, phi0=None, charge=None):
    vt, e0 = K * T / E, eps * EPS0
    n0 = sum(s["charge"] ** 2 * s["bulk_m3"] for s in sp if s["mobile"])
    unit = np.sqrt(e0 * vt / (E * n0))
    L = width / unit

    def gains(x, psi):
        out = []
        for s in sp:
            if s["mobile"]:
                b = np.exp(-s["charge"] * psi)
                f = s["bulk_m3"] / s["sites_m3"] if s["sites_m3"] else 0.0
                out.append(b / (1 - f + f * b) - 1)
            elif s["profile_amplitude"]:
                out.append(s["profile_amplitude"] * np.exp(-(x * unit / s["profile_length_m"]) ** 2))
            else:
                out.append(0 * x)
        return out

    n = len(sp)

    def rhs(x, y):
        g = gains(x, y[0])
        rho = sum(s["charge"] * s["bulk_m3"] / n0 * gi for s, gi in zip(sp, g))
        rows = [y[1], -rho]
        for gi in g:
            rows += [gi, 1 / (1 + gi) - 1]
        return np.vstack(rows)

    def bc(a, b):
        first = a[0] - phi0 / vt if phi0 is not None else a[1] + charge * unit / (e0 * vt)
        return np.concatenate([[first, b[1]], a[2:]])

    x = L * np.linspace(0, 1, 400) ** 2
    start = np.zeros((2 + 2 * n, x.size))
    top = (phi0 if phi0 is not None else 0.05) / vt
    # approach the full potential in steps, so that a rough start suffices
    final_phi0, final_charge = phi0, charge
    for share in np.linspace(0.1, 1, 10):
        phi0 = None if final_phi0 is None else share * final_phi0
        charge = None if final_charge is None else share * final_charge
        tol = TOL if share == 1 else 1e-4
        s = solve_bvp(rhs, bc, x, start, tol=tol, max_nodes=100000)
        if s.status != 0:
            sys.exit("no solution: " + s.message)
        x, start = (s.x, s.y) if s.x.size < 3000 else (s.x[::2], s.y[:, ::2])
    y0, y1 = s.sol(0.0), s.sol(L)
    return dict(temperature_K=T, relative_permittivity=eps, half_width_m=width, species=sp,
                given_phi0_V=final_phi0, given_charge_C_m2=final_charge,
                phi0_V=y0[0] * vt, drop_V=(y0[0] - y1[0]) * vt, charge_C_m2=-y0[1] * e0 * vt / unit,
                along_m=[y1[2 + 2 * i] * unit for i in range(n)],
                across_m=[y1[3 + 2 * i] * unit for i in range(n)],
                phi_quarter_V=float(s.sol(L / 4)[0]) * vt, nodes=int(s.x.size))


pair = [species(1, 1e24), species(-1, 1e24)]
oxide = [species(2, 1.25e26), species(-1, 2.5e26, mobile=False)]
limited = [species(2, 1e26, sites=1e27), species(-1, 2e26, sites=5e26)]


def profiled(amplitude, length, mobile_dopant=1e24):
    return [species(2, 1.25e26), species(-1, mobile_dopant),
            species(-1, 2.5e26 - mobile_dopant, mobile=False, amplitude=amplitude, length=length)]


cases = [
    case(700, 60, 4e-9, pair, phi0=0.25),
    case(700, 60, 1.5e-9, pair, phi0=-0.1),
    case(573.15, 30, 1.2e-9, oxide, phi0=0.35),
    case(573.15, 30, 0.6e-9, oxide, phi0=-0.08),
    case(1000, 25, 1e-9, limited, phi0=0.4),
    case(400, 80, 2e-9, pair, charge=0.01),
    case(573.15, 30, 4e-9, profiled(0.5, 1e-9), phi0=0.25),
    case(573.15, 30, 1.5e-9, profiled(3.0, 0.8e-9), phi0=0.2),
    case(873.15, 30, 6e-9, profiled(-0.6, 2e-9), phi0=0.15),
    case(873.15, 30, 3e-9, profiled(1.0, 1.2e-9), charge=0.05),
    case(473.15, 20, 1e-9, profiled(0.8, 0.5e-9, 5e25), phi0=0.1),
    case(1273.15, 40, 2.5e-9, profiled(8.0, 0.6e-9, 1e25), charge=-0.08),
]
json.dump(dict(about="Half grains, zero field at the half width; scipy %s solve_bvp, tol %g; mobile species follow psi "
               "(site-limited where sites_m3 > 0, each on a sublattice of its own), the others are frozen with "
               "c(x) = bulk (1 + amplitude exp(-(x/length)^2)). along = integral of (c/bulk - 1) dx, across = integral of "
               "(bulk/c - 1) dx, both from 0 to the half width; phi against the reservoir of the bulk concentrations."
               % (scipy.__version__, TOL), cases=cases), sys.stdout, indent=1)

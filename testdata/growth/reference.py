"""Reference growth rates of the five-layer column in solver/checks, in 50 digits or more.

A second method, sharing nothing with the solver: in each step the four equations
    W' = -kU, U' = kW + S/eta, S_zz' = -kS, S' = kS_zz + 4 eta k^2 U
are solved by Taylor series of order 40 (the viscosity c exp(B/T(z)), T linear in z, has
a recurrence for its series), two solutions that decay in the half-space are carried
from its top to the surface, a unit load at each contact in turn, and the free surface
closes the system. The leading eigenvalue of A(k) follows by inverse iteration.
Needs mpmath. Prints wavelength in m and rate in 1/s.
"""
import sys
from mpmath import mp, mpf, matrix, eig, lu_solve, pi, exp

mp.dps = 50
ORDER = 40
G = mpf("9.81")
LAYERS = [  # bottom m, density, log10 viscosity at the top, B in K
    (5000, 2400, mpf(25), 8000), (20000, 2750, mpf("24.3"), 9000), (35000, 2900, mpf("22.3"), 10000),
    (60000, 3330, mpf("22.2"), 12000), (80000, 3300, mpf(21), 24000)]
BELOW, ETA = 3250, mpf(10) ** 19
SLOPE, SURFACE = mpf(990) / 80000, mpf("283.15")


def temperature(z):
    return SURFACE + SLOPE * z


def series_exp(a):
    """Coefficients of exp(a(x))."""
    e = [exp(a[0])] + [mpf(0)] * ORDER
    for n in range(1, ORDER + 1):
        e[n] = sum(m * a[m] * e[n - m] for m in range(1, n + 1)) / n
    return e


def step(z, h, k, top, b, t_top, vectors):
    """Carries vectors (W, U, S_zz, S) from z to z + h; h < 0 goes up."""
    t = temperature(z)
    inv = [1 / t]
    for n in range(ORDER):  # 1/(t + SLOPE x)
        inv.append(-inv[-1] * SLOPE / t)
    a = [b * c for c in inv]
    a[0] -= b / t_top
    eta = [top * c for c in series_exp(a)]
    flow = [c / top for c in series_exp([-c for c in a])]
    out = []
    for v in vectors:
        w, u, s, r = [v[0]], [v[1]], [v[2]], [v[3]]
        for n in range(ORDER):
            conv = sum(flow[m] * r[n - m] for m in range(n + 1))
            stiff = sum(eta[m] * u[n - m] for m in range(n + 1))
            w.append(-k * u[n] / (n + 1))
            u.append((k * w[n] + conv) / (n + 1))
            s.append(-k * r[n] / (n + 1))
            r.append((k * s[n] + 4 * k * k * stiff) / (n + 1))
        out.append([sum(c * h ** n for n, c in enumerate(x)) for x in (w, u, s, r)])
    return out


def leading(wavelength):
    mp.dps = 50 + int(2 * pi / wavelength * 80000)  # what exp(kz) and exp(-kz) cancel
    k = 2 * pi / wavelength
    rho = [0] + [l[1] for l in LAYERS] + [BELOW]
    n = len(LAYERS) + 1
    # solutions: two free ones, then one for the load of each contact below the surface
    vectors = [[mpf(1), mpf(0), -2 * ETA * k, mpf(0)], [mpf(0), mpf(1), mpf(0), -2 * ETA * k]]
    loads = []
    w = {}
    for i in range(n - 1, 0, -1):  # contact i is the base of layer i - 1
        vectors.append([mpf(0), mpf(0), -(rho[i + 1] - rho[i]) * G, mpf(0)])  # S_zz above = below - jump
        loads.append(i)
        w[i] = [v[0] for v in vectors]
        bottom, _, log_top, b = LAYERS[i - 1]
        z_top = LAYERS[i - 2][0] if i > 1 else 0
        t_top = temperature(mpf(z_top))
        steps = max(4, int((bottom - z_top) / 1500), int(k * (bottom - z_top) * 2))
        h = mpf(z_top - bottom) / steps
        for m in range(steps):
            vectors = step(bottom + m * h, h, k, mpf(10) ** log_top, b, t_top, vectors)
    w[0] = [v[0] for v in vectors]
    # free surface: S = 0, S_zz = xi_0 rho_0 g
    a = matrix(n, n)
    m = matrix([[vectors[0][2], vectors[1][2]], [vectors[0][3], vectors[1][3]]])
    for j in range(n):
        rhs, col = [mpf(0), mpf(0)], None
        if j == 0:
            rhs = [rho[1] * G, mpf(0)]
        else:
            col = 2 + loads.index(j)
            rhs = [-vectors[col][2], -vectors[col][3]]
        c = lu_solve(m, matrix(rhs))
        for i in range(n):
            x = c[0] * w[i][0] + c[1] * w[i][1]
            if col is not None and col < len(w[i]):
                x += w[i][col]
            a[i, j] = x
    return max(e.real for e in eig(a, left=False, right=False))


for arg in sys.argv[1:]:
    print(arg, mp.nstr(leading(mpf(arg)), 16), flush=True)

"""General-purpose numerical libraries on the data of one task: python3 peers.py TASK FOLDER TIMES.

FOLDER holds little-endian doubles, columns one after another. Prints one JSON line a peer: its name, every run's milliseconds and those of the processor, and
the numbers that it found.
"""

import json
import sys
import time

import numpy as np
import scipy.linalg as la

task, folder, times = sys.argv[1], sys.argv[2], int(sys.argv[3])


def column(name):
    return np.fromfile(f"{folder}/{name}", dtype="<f8")


def tell(peer, work, runs=times):
    ms = []
    busy = []
    values = None
    for _ in range(runs):
        start, used = time.perf_counter(), time.process_time()
        values = work()
        ms.append((time.perf_counter() - start) * 1e3)
        busy.append((time.process_time() - used) * 1e3)
    print(json.dumps({"peer": peer, "ms": ms, "busy": busy, "values": [float(v) for v in values]}), flush=True)


y = column("y")
X = column("x").reshape(-1, y.size).T  # columns one after another: Fortran order
G, k = X.shape


def of_triangle(R, b, rss):
    inverse = la.solve_triangular(R, np.eye(k))
    return np.concatenate([b, np.sqrt(rss / (G - k) * (inverse**2).sum(axis=1))])


def weighted_least_squares():
    n = column("n")
    import statsmodels.api as sm

    def rooted():
        root = np.sqrt(n)
        return X * root[:, None], y * root

    def qr():
        A, b = rooted()
        Q, R = la.qr(A, mode="economic", overwrite_a=True, check_finite=False)
        c = Q.T @ b
        return of_triangle(R, la.solve_triangular(R, c), b @ b - c @ c)

    def gels():
        A, b = rooted()
        R, z, _ = la.lapack.dgels(A, b, overwrite_a=True, overwrite_b=True)
        return of_triangle(np.triu(R[:k]), z[:k], z[k:] @ z[k:])

    def normal():
        A, b = rooted()
        gram = A.T @ A
        solution = np.linalg.solve(gram, A.T @ b)
        left = b - A @ solution
        return np.concatenate([solution, np.sqrt(left @ left / (G - k) * np.diag(np.linalg.inv(gram)))])

    def model():
        fit = sm.WLS(y, X, weights=n).fit(method="qr")
        return np.concatenate([fit.params, fit.bse])

    tell("scipy qr", qr)
    tell("LAPACK dgels", gels)
    tell("numpy normal equations", normal)
    tell("statsmodels WLS", model, max(1, times // 2))


def given_matrix():
    import statsmodels.api as sm

    V = column("v").reshape(G, G)

    def cholesky():
        L = la.cholesky(V, lower=True, check_finite=False)
        A = la.solve_triangular(L, np.column_stack([X, y]), lower=True, check_finite=False)
        Q, R = la.qr(A[:, :k], mode="economic", check_finite=False)
        b = la.solve_triangular(R, Q.T @ A[:, k])
        return np.concatenate([b, np.sqrt((la.solve_triangular(R, np.eye(k)) ** 2).sum(axis=1))])

    tell("LAPACK Cholesky and QR", cholesky)
    fit = lambda: sm.GLS(y, X, sigma=V).fit()
    tell("statsmodels GLS", lambda: (lambda f: np.concatenate([f.params, np.sqrt(np.diag(f.normalized_cov_params))]))(fit()), max(1, times // 2))


def hc3():
    import statsmodels.api as sm

    def plain():
        inverse = np.linalg.inv(X.T @ X)
        b = inverse @ (X.T @ y)
        left = y - X @ b
        H = X @ inverse
        h = np.einsum("ij,ij->i", H, X)
        S = H * (left / (1 - h))[:, None]
        return np.concatenate([b, np.sqrt(np.diag(S.T @ S))])

    def model():
        fit = sm.OLS(y, X).fit(cov_type="HC3")
        return np.concatenate([fit.params, fit.bse])

    tell("numpy", plain)
    tell("statsmodels HC3", model, max(1, times // 2))


def grouped_scores(scores, groups, count):
    return np.column_stack([np.bincount(groups, scores[:, j], count) for j in range(k)])


def clustered(kind):
    groups = column("cluster").astype(np.int64)
    count = int(groups.max()) + 1

    def solved():
        inverse = np.linalg.inv(X.T @ X)
        b = inverse @ (X.T @ y)
        return inverse, b, y - X @ b

    def cr1():
        inverse, b, left = solved()
        S = grouped_scores(X * left[:, None], groups, count) @ inverse
        factor = count / (count - 1) * (G - 1) / (G - k)
        return np.concatenate([b, np.sqrt(factor * np.diag(S.T @ S))])

    def cr2():
        inverse, b, left = solved()
        root = np.linalg.cholesky(inverse)
        order = np.argsort(groups, kind="stable")
        edges = np.searchsorted(groups[order], np.arange(count + 1))
        total = np.zeros((k, k))
        for c in range(count):
            at = order[edges[c] : edges[c + 1]]
            Z = X[at] @ root
            value, vector = np.linalg.eigh(np.eye(at.size) - Z @ Z.T)
            s = X[at].T @ (vector @ ((vector.T @ left[at]) / np.sqrt(value)))
            total += np.outer(s, s)
        return np.concatenate([b, np.sqrt(np.diag(inverse @ total @ inverse))])

    if kind == 1:
        tell("numpy CR1", cr1)
    else:
        tell("numpy CR2, cluster by cluster", cr2, 1)


def wild():
    groups = column("cluster").astype(np.int64)
    count = int(groups.max()) + 1
    draws = 9999

    def scores():
        signs = np.random.default_rng(1).integers(0, 2, (draws, count)) * 2.0 - 1.0
        inverse = np.linalg.inv(X.T @ X)
        last = k - 1
        pull = X @ inverse[:, last]
        W = X[:, :last]
        b0 = np.linalg.solve(W.T @ W, W.T @ y)
        left = y - W @ b0
        along = np.bincount(groups, pull * left, count)
        a = np.column_stack([np.bincount(groups, pull * X[:, j], count) for j in range(k)])
        z = grouped_scores(X * left[:, None], groups, count)
        moved = signs @ along
        beta = (signs @ z) @ inverse
        own = signs * along - beta @ a.T
        t = moved / np.sqrt((own**2).sum(axis=1))
        first = along.sum()
        t0 = first / np.sqrt(((along - a @ (inverse @ z.sum(axis=0))) ** 2).sum())
        return [np.mean(np.abs(t) >= abs(t0))]

    tell("numpy, on scores", scores)


{
    "wls": weighted_least_squares,
    "matrix": given_matrix,
    "hc3": hc3,
    "cr1": lambda: clustered(1),
    "cr2": lambda: clustered(2),
    "wild": wild,
}[task]()

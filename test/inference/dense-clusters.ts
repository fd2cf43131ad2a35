import { EigenvalueDecomposition, inverse, Matrix } from 'ml-matrix';

/** Cluster-robust inference written down as it stands in the papers: every matrix formed, none of it shared with the program. */

export interface Dense {
  /** Whitened design and residuals. */
  readonly x: Matrix;
  readonly r: Matrix;
  readonly clusters: readonly (readonly number[])[];
}

export function denseOf(
  x: readonly number[][],
  y: readonly number[],
  keys: readonly (string | number)[],
): Dense & { b: Matrix } {
  const design = new Matrix(x as number[][]);
  const response = Matrix.columnVector(y as number[]);
  const b = inverse(design.transpose().mmul(design)).mmul(design.transpose()).mmul(response);
  const groups = new Map<string | number, number[]>();
  for (const [g, key] of keys.entries()) groups.set(key, [...(groups.get(key) ?? []), g]);
  return { x: design, r: Matrix.sub(response, design.mmul(b)), clusters: [...groups.values()], b };
}

function bread({ x }: Dense): Matrix {
  return inverse(x.transpose().mmul(x));
}

function hat(dense: Dense): Matrix {
  return dense.x.mmul(bread(dense)).mmul(dense.x.transpose());
}

function rows(matrix: Matrix, of: readonly number[]): Matrix {
  return matrix.selection(
    [...of],
    Array.from({ length: matrix.columns }, (_, j) => j),
  );
}

/** A function of a symmetric matrix; f of eigenvalues. */
function through(matrix: Matrix, f: (value: number) => number): Matrix {
  const { realEigenvalues, eigenvectorMatrix: v } = new EigenvalueDecomposition(matrix, { assumeSymmetric: true });
  return v.mmul(Matrix.diag(realEigenvalues.map(f))).mmul(v.transpose());
}

function adjustment(dense: Dense, cluster: readonly number[], correction: string): Matrix {
  const left = Matrix.sub(Matrix.eye(cluster.length), hat(dense).selection([...cluster], [...cluster]));
  if (correction === 'CR2') return through(left, (value) => (value <= 1e-10 ? 0 : 1 / Math.sqrt(value)));
  if (correction === 'CR3') return inverse(left);
  return Matrix.eye(cluster.length);
}

export function denseCovariance(dense: Dense, correction: string): Matrix {
  const k = dense.x.columns;
  const meat = Matrix.zeros(k, k);
  for (const cluster of dense.clusters) {
    const score = rows(dense.x, cluster)
      .transpose()
      .mmul(adjustment(dense, cluster, correction))
      .mmul(rows(dense.r, cluster));
    meat.add(score.mmul(score.transpose()));
  }
  const [cells, count] = [dense.x.rows, dense.clusters.length];
  const factor = correction === 'CR1' ? ((count / (count - 1)) * (cells - 1)) / (cells - k) : 1;
  return bread(dense).mmul(meat).mmul(bread(dense)).mul(factor);
}

/** p_b of every cluster, columns of a G x B matrix. */
function pVectors(dense: Dense, c: Matrix): Matrix {
  const cells = dense.x.rows;
  const left = Matrix.sub(Matrix.eye(cells), hat(dense));
  const columns = dense.clusters.map((cluster) => {
    const own = adjustment(dense, cluster, 'CR2').mmul(rows(dense.x, cluster)).mmul(bread(dense)).mmul(c);
    return left
      .selection(
        Array.from({ length: cells }, (_, g) => g),
        [...cluster],
      )
      .mmul(own)
      .to1DArray();
  });
  return new Matrix(columns).transpose();
}

export function denseFreedom(dense: Dense, c: readonly number[]): number {
  const p = pVectors(dense, Matrix.columnVector([...c]));
  const products = p.transpose().mmul(p);
  return products.trace() ** 2 / Matrix.mul(products, products).sum();
}

/** The Wishart freedom of Tipton & Pustejovsky, by the variance of every entry of D in the units of its expectation. */
export function denseWishart(dense: Dense, cs: readonly (readonly number[])[]): number {
  const l = cs.length;
  const raw = cs.map((c) => pVectors(dense, Matrix.columnVector([...c])));
  const expected = new Matrix(raw.map((a) => raw.map((b) => a.transpose().mmul(b).trace())));
  const root = through(expected, (value) => 1 / Math.sqrt(value));
  const p = Array.from({ length: l }, (_, s) =>
    raw.reduce(
      (sum, one, t) => Matrix.add(sum, Matrix.mul(one, root.get(s, t))),
      Matrix.zeros(dense.x.rows, dense.clusters.length),
    ),
  );
  let spread = 0;
  for (const a of p)
    for (const b of p) {
      const [aa, bb, ab, ba] = [
        a.transpose().mmul(a),
        b.transpose().mmul(b),
        a.transpose().mmul(b),
        b.transpose().mmul(a),
      ];
      spread += Matrix.mul(aa, bb).sum() + Matrix.mul(ab, ba).sum();
    }
  return (l * (l + 1)) / spread;
}

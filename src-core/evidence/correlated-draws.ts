type Partners = readonly (readonly number[])[];

const NEAR = 1e-4;

/**
 * Draws with a common correlation of paired cells from independent ones: L z, L L' = I + rho B, the zeros of L left out.
 *
 * partners: of each cell; rho: such that I + rho B is positive definite, else the caller's bug and it throws. The same vector is
 * returned every time, overwritten.
 */
export function correlateBy(partners: Partners, rho: number): (draw: Float64Array) => Float64Array {
  const factor = factorOf(partners, rho);
  if (!factor) throw new RangeError(`no cells can have the common correlation ${rho}`);
  const rows = factor.map((row) => {
    const at = [...row.keys()].filter((j) => row[j] !== 0);
    return { at, values: Float64Array.from(at, (j) => row[j] as number) };
  });
  const correlated = new Float64Array(partners.length);
  return (draw) => {
    for (const [g, { at, values }] of rows.entries()) {
      let sum = 0;
      for (let i = 0; i < at.length; i++) sum += (values[i] as number) * (draw[at[i] as number] as number);
      correlated[g] = sum;
    }
    return correlated;
  };
}

/**
 * The same where every two cells of a group are paired: root(1 - rho) z_g + root(rho) w_group.
 *
 * groups: hold every cell once; a draw has one number a cell, then one a group. The same vector is returned every time, overwritten.
 */
export function correlateInside(
  groups: readonly (readonly number[])[],
  rho: number,
): (draw: Float64Array) => Float64Array {
  const correlated = new Float64Array(groups.reduce((sum, rows) => sum + rows.length, 0));
  const own = Math.sqrt(1 - rho);
  const shared = Math.sqrt(rho);
  return (draw) => {
    for (const [j, rows] of groups.entries())
      for (const g of rows)
        correlated[g] = own * (draw[g] as number) + shared * (draw[correlated.length + j] as number);
    return correlated;
  };
}

/** The largest rho up to 1 for which I + rho B is positive definite, less a ten-thousandth. */
export function largestCorrelation(partners: Partners): number {
  let low = 0;
  let high = 1;
  while (high - low > NEAR) {
    const middle = (low + high) / 2;
    if (factorOf(partners, middle)) low = middle;
    else high = middle;
  }
  return low;
}

/** Cholesky factor of I + rho B, row by row; null where it is not positive definite. */
function factorOf(partners: Partners, rho: number): Float64Array[] | null {
  const rows: Float64Array[] = [];
  for (const [g, cells] of partners.entries()) {
    const row = new Float64Array(g + 1);
    for (const h of cells) if (h < g) row[h] = rho;
    let left = 1;
    for (let j = 0; j < g; j++) {
      const before = rows[j] as Float64Array;
      let sum = row[j] as number;
      for (let i = 0; i < j; i++) if (row[i] !== 0) sum -= (row[i] as number) * (before[i] as number);
      const entry = sum / (before[j] as number);
      row[j] = entry;
      left -= entry * entry;
    }
    if (!(left > 1e-12)) return null;
    row[g] = Math.sqrt(left);
    rows.push(row);
  }
  return rows;
}

/**
 * Published tables per element against energy: log-log in energy, and linear in Z between the tabulated elements for a
 * reduced quantity that is smooth in Z.
 */

/** The elements that the stopping-power tables hold, by Z: symbol, Z, g/mol (IUPAC). */
const TABULATED: readonly (readonly [string, number, number])[] = [
  ['H', 1, 1.00794],
  ['C', 6, 12.0107],
  ['N', 7, 14.0067],
  ['O', 8, 15.9994],
  ['Al', 13, 26.9815386],
  ['Si', 14, 28.0855],
  ['Ti', 22, 47.867],
  ['Fe', 26, 55.845],
  ['Ni', 28, 58.6934],
  ['Cu', 29, 63.546],
  ['Sn', 50, 118.71],
  ['Ta', 73, 180.94788],
  ['W', 74, 183.84],
  ['Pb', 82, 207.2],
];

export class ElementTable {
  private readonly logT: Float64Array;
  private readonly rows: readonly { readonly z: number; readonly logValue: Float64Array }[];

  /**
   * @param columns - `T_MeV` and one column per element
   * @param reduce - turns a tabulated value into the quantity that is smooth in Z
   */
  constructor(columns: ReadonlyMap<string, Float64Array>, reduce: (value: number, z: number, a: number) => number) {
    this.logT = columns.get('T_MeV')!.map(Math.log);
    this.rows = TABULATED.map(([symbol, z, a]) => ({
      z,
      logValue: columns.get(symbol)!.map((value) => Math.log(reduce(value, z, a))),
    }));
  }

  /** ln of the reduced quantity. */
  logAt(z: number, logT: number): number {
    const { rows } = this;
    let i = 0;
    while (i < rows.length - 2 && rows[i + 1].z <= z) i += 1;
    const share = (z - rows[i].z) / (rows[i + 1].z - rows[i].z);
    const low = piecewiseLinear(this.logT, rows[i].logValue, logT);
    return share === 0 ? low : low + share * (piecewiseLinear(this.logT, rows[i + 1].logValue, logT) - low);
  }
}

/** Straight lines between the points of an ascending grid, extended at both ends. */
export function piecewiseLinear(x: Float64Array, y: Float64Array, at: number): number {
  let low = 0;
  let high = x.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (x[middle] <= at) low = middle;
    else high = middle;
  }
  return y[low] + ((at - x[low]) / (x[high] - x[low])) * (y[high] - y[low]);
}

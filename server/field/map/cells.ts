import { CELL, EDGE_L_CLOSED, EDGE_L_OPEN, type FieldMapGrid, NODE, ROUGH_SHARE, shellRadius, U_STEP } from './grid.ts';

/** Decides for every cell whether it may be interpolated: see CELL. */
export function cellsOf(grid: FieldMapGrid, nodes: Uint16Array, flags: Uint8Array): Uint8Array {
  const { shells, latitudes, longitudes } = grid;
  const rough = roughNodes(grid, nodes, flags);
  const cells = new Uint8Array((shells - 1) * (latitudes + 1) * longitudes);
  for (let shell = 0; shell + 1 < shells; shell++) {
    const stencilShell = Math.min(Math.max(shell - 1, 0), shells - 4);
    for (let band = 0; band <= latitudes; band++) {
      for (let column = 0; column < longitudes; column++) {
        let anyInvalid = false;
        let allOpen = true;
        for (let a = 0; a < 4; a++) {
          for (let b = 0; b < 4; b++) {
            for (let c = 0; c < 4; c++) {
              const flag = flags[nodeIndex(grid, stencilShell + a, band - 2 + b, column - 1 + c)];
              if ((flag & NODE.invalid) !== 0) anyInvalid = true;
              if ((flag & NODE.open) === 0) allOpen = false;
            }
          }
        }
        let anyRough = false;
        let anyUnexpected = false;
        let open = 0;
        let below = 0;
        for (let corner = 0; corner < 8; corner++) {
          const index = nodeIndex(
            grid,
            shell + (corner & 1),
            band - 1 + ((corner >> 1) & 1),
            column + ((corner >> 2) & 1),
          );
          if (rough[index] === 1) anyRough = true;
          const lShell = shellRadius(grid, shell + (corner & 1)) / (nodes[2 * index] * U_STEP);
          if ((flags[index] & NODE.open) !== 0) {
            open += 1;
            if (!(lShell > EDGE_L_CLOSED)) anyUnexpected = true;
          } else if (!(lShell < EDGE_L_OPEN)) anyUnexpected = true;
          if ((flags[index] & NODE.belowSurface) !== 0) below += 1;
        }
        let kind: number = CELL.trace;
        if (allOpen) kind = CELL.open;
        else if (!anyInvalid && !anyRough && !anyUnexpected) {
          if (open === 0) kind = below === 0 ? CELL.clear : below === 8 ? CELL.below : CELL.mixed;
          else if (below === 0) kind = CELL.edge;
        }
        cells[(shell * (latitudes + 1) + band) * longitudes + column] = kind;
      }
    }
  }
  return cells;
}

/** Index of a node whose row may lie up to three rows beyond a pole and whose column may lie beyond a full turn. */
export function nodeIndex(grid: FieldMapGrid, shell: number, row: number, column: number): number {
  const { latitudes, longitudes } = grid;
  let r = row;
  let c = column;
  if (row < 0 || row >= latitudes) {
    r = row < 0 ? -1 - row : 2 * latitudes - 1 - row;
    c += longitudes / 2;
  }
  return (shell * latitudes + r) * longitudes + (((c % longitudes) + longitudes) % longitudes);
}

function roughNodes(grid: FieldMapGrid, nodes: Uint16Array, flags: Uint8Array): Uint8Array {
  const { shells, latitudes, longitudes } = grid;
  const rough = new Uint8Array(flags.length);
  const check = (at: number, a3: number, a1: number, b1: number, b3: number): void => {
    if (((flags[at] | flags[a3] | flags[a1] | flags[b1] | flags[b3]) & NODE.invalid) !== 0) return;
    for (let q = 0; q < 2; q++) {
      const cubic = (9 * (nodes[2 * a1 + q] + nodes[2 * b1 + q]) - nodes[2 * a3 + q] - nodes[2 * b3 + q]) / 16;
      const value = nodes[2 * at + q];
      if (Math.abs(cubic - value) > ROUGH_SHARE * value) rough[at] = 1;
    }
  };
  for (let shell = 0; shell < shells; shell++) {
    for (let row = 0; row < latitudes; row++) {
      for (let column = 0; column < longitudes; column++) {
        const at = nodeIndex(grid, shell, row, column);
        const along = (dShell: number, dRow: number, dColumn: number) =>
          check(
            at,
            nodeIndex(grid, shell - 3 * dShell, row - 3 * dRow, column - 3 * dColumn),
            nodeIndex(grid, shell - dShell, row - dRow, column - dColumn),
            nodeIndex(grid, shell + dShell, row + dRow, column + dColumn),
            nodeIndex(grid, shell + 3 * dShell, row + 3 * dRow, column + 3 * dColumn),
          );
        along(0, 0, 1);
        along(0, 1, 0);
        if (shell >= 3 && shell < shells - 3) along(1, 0, 0);
      }
    }
  }
  return rough;
}

/**
 * The shipped maps against direct tracing, which itself is held to fixtures/golden/l-shell.
 * Source: fixtures/golden/l-shell/README.md, an independent calculation with the published coefficients.
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import {
  type FieldModelId,
  fieldLabeller,
  fieldModel,
  lossCurve,
  type MagneticLabel,
  makeLabel,
  tracedLabeller,
} from '../../../server/field/index.ts';
import { DEFAULT_GRID, MAPPED_MODELS, shippedFieldMap, traceFieldMapShard } from '../../../server/field/map/index.ts';
import { makeLineSegment, SegmentTracer } from '../../../server/field/tracer.ts';
import { randomStream } from '../../../server/numeric/random.ts';

interface Check {
  readonly fieldModelId: FieldModelId;
  readonly radius: number;
  readonly latitudeDeg: number;
  readonly eastLongitudeDeg: number;
  readonly mirrorFieldFactor: number;
  readonly lShell: number;
  readonly bMinNt: number;
}

const CHECKS = JSON.parse(
  readFileSync(new URL('../../../fixtures/golden/l-shell/checks.json', import.meta.url), 'utf8'),
) as Check[];

/** What is asked of a map, in ln L, where particles are trapped. */
const LN_L_MEDIAN = 2e-4;
const LN_L_Q99 = 5e-3;
/** At the check points, 3 to 12 radii and far from any jump. */
const LN_L_CHECKS = 1e-3;
/** No trapped point may lie on the wrong side of a jump: cells whose corners disagree by 5 % are traced. */
const LN_L_LARGEST = 0.05;
/** ln B_min: half a step of the stored cube root where B_min is a hundredth of B, and the interpolation. */
const LN_B_MIN_Q99 = 5e-3;
/** Relative: the shipped loss curve is the one worked out today; on one processor they agree to the bit. */
const B_LOSS_REL = 1e-6;
/** Share of points that may be called trapped by one and not by the other: those on the edge itself. */
const REASON_SHARE = 1e-3;
const POINTS = 3000;

function randomPoint(random: { uniform(): number }, inner: number, outer: number): [number, number, number] {
  const radius = inner * (outer / inner) ** random.uniform();
  const height = 2 * random.uniform() - 1;
  const longitude = 2 * Math.PI * random.uniform();
  const across = Math.sqrt(1 - height * height);
  return [radius * across * Math.cos(longitude), radius * across * Math.sin(longitude), radius * height];
}

function quantile(values: readonly number[], share: number): number {
  return [...values].sort((a, b) => a - b)[Math.floor(share * (values.length - 1))];
}

for (const id of MAPPED_MODELS) {
  describe(`field map of ${id}`, () => {
    const model = fieldModel(id);
    const traced = tracedLabeller(model);
    const mapped = fieldLabeller(model);

    it('ships for the field, the grid and the code of today', () => {
      expect(mapped.method).toBe('map');
      const map = shippedFieldMap(model)!;
      // Nodes traced afresh, here and there: the committed file is what the code makes, to one step of rounding.
      for (const first of [1000, 77_000, 150_000, 240_000]) {
        const { nodes } = traceFieldMapShard({ modelId: id, grid: DEFAULT_GRID, first, end: first + 60 });
        nodes.forEach((value, i) => {
          expect(Math.abs(value - map.nodes[2 * first + i])).toBeLessThanOrEqual(1);
        });
      }
      const fresh = lossCurve(model);
      expect(map.loss.altitudeKm).toBe(fresh.altitudeKm);
      map.loss.bLossNt.forEach((value, i) => {
        expect(map.loss.lnL[i]).toBeCloseTo(fresh.lnL[i], 12);
        expect(Math.abs(value - fresh.bLossNt[i])).toBeLessThanOrEqual(B_LOSS_REL * fresh.bLossNt[i]);
      });
    });

    it('gives L, B_min and the reason of direct tracing, 1.2 to 20 radii', () => {
      const random = randomStream(31, 0, 0);
      const a = makeLabel();
      const b = makeLabel();
      const lnL: number[] = [];
      const lnBMin: number[] = [];
      let different = 0;
      for (let k = 0; k < POINTS; k++) {
        const [x, y, z] = randomPoint(random, 1.2, 20);
        traced.labelInto(x, y, z, a);
        mapped.labelInto(x, y, z, b);
        expect(b.bNt).toBe(a.bNt);
        if (a.reason !== b.reason) different += 1;
        if (a.reason !== null || b.reason !== null) continue;
        lnL.push(Math.abs(Math.log(b.lShell / a.lShell)));
        lnBMin.push(Math.abs(Math.log(b.bMinNt / a.bMinNt)));
      }
      expect(lnL.length).toBeGreaterThan(0.7 * POINTS);
      expect(quantile(lnL, 0.5)).toBeLessThan(LN_L_MEDIAN);
      expect(quantile(lnL, 0.99)).toBeLessThan(LN_L_Q99);
      expect(quantile(lnL, 1)).toBeLessThan(LN_L_LARGEST);
      expect(quantile(lnBMin, 0.99)).toBeLessThan(LN_B_MIN_Q99);
      expect(different).toBeLessThanOrEqual(REASON_SHARE * POINTS);
    });

    it('keeps to the branches of L below 2 radii', () => {
      const random = randomStream(32, 0, 0);
      const a = makeLabel();
      const b = makeLabel();
      let trapped = 0;
      for (let k = 0; k < POINTS; k++) {
        const [x, y, z] = randomPoint(random, 1.05, 2);
        traced.labelInto(x, y, z, a);
        mapped.labelInto(x, y, z, b);
        if (a.reason !== null || b.reason !== null) continue;
        trapped += 1;
        expect(Math.abs(Math.log(b.lShell / a.lShell))).toBeLessThan(LN_L_LARGEST);
      }
      expect(trapped).toBeGreaterThan(0.2 * POINTS);
    });

    it('says the same of a point whatever was asked before', () => {
      const random = randomStream(33, 0, 0);
      const points = Array.from({ length: 200 }, () => randomPoint(random, 1.1, 29));
      const label = ([x, y, z]: readonly [number, number, number]): MagneticLabel => ({
        ...mapped.labelInto(x, y, z, makeLabel()),
      });
      const forwards = points.map(label);
      expect([...points].reverse().map(label).reverse()).toEqual(forwards);
    });
  });
}

describe('field maps against an independent calculation', () => {
  for (const check of CHECKS.filter(({ fieldModelId }) => MAPPED_MODELS.some((id) => id === fieldModelId))) {
    it(`${check.fieldModelId} r ${check.radius} lat ${check.latitudeDeg} lon ${check.eastLongitudeDeg}`, () => {
      const latitude = (check.latitudeDeg * Math.PI) / 180;
      const longitude = (check.eastLongitudeDeg * Math.PI) / 180;
      const model = fieldModel(check.fieldModelId);
      const mapped = fieldLabeller(model);
      const tracer = new SegmentTracer(model);
      const { length } = tracer.segmentInto(
        check.radius * Math.cos(latitude) * Math.cos(longitude),
        check.radius * Math.cos(latitude) * Math.sin(longitude),
        check.radius * Math.sin(latitude),
        check.mirrorFieldFactor,
        makeLineSegment(),
      );
      // The particle of the check mirrors at both ends of its segment, and there it is the one that a map speaks of.
      const end = new Float64Array(3);
      for (const s of [0, length]) {
        tracer.segmentPointInto(s, end);
        const label = mapped.labelInto(end[0], end[1], end[2], makeLabel());
        expect(Math.abs(Math.log(label.lShell / check.lShell))).toBeLessThan(LN_L_CHECKS);
        expect(Math.abs(Math.log(label.bMinNt / check.bMinNt))).toBeLessThan(LN_B_MIN_Q99);
      }
    });
  }
});

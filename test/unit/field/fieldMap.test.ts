import { describe, expect, it } from 'vitest';
import { fieldLabeller, fieldModel, makeLabel, tracedLabeller } from '../../../server/field/index.ts';
import {
  assembleFieldMap,
  decodeFieldMap,
  encodeFieldMap,
  type FieldMapGrid,
  fieldMapHeader,
  fieldMapKey,
  mappedLabeller,
  planFieldMap,
  shippedFieldMap,
  traceFieldMapShard,
} from '../../../server/field/map/index.ts';
import { URANUS_Q3_WITH_EXTERNAL } from '../../../server/field/models.ts';

const SMALL: FieldMapGrid = { shells: 8, innerRadius: 1, outerRadius: 32, latitudes: 16, longitudes: 32 };
const DIPOLE = fieldModel('uranus-dipole');

function build(shards: number) {
  return assembleFieldMap('uranus-dipole', SMALL, planFieldMap('uranus-dipole', SMALL, shards).map(traceFieldMapShard));
}

describe('field map', () => {
  const map = build(1);

  it('comes out the same to the bit for any number of shards, in any order', () => {
    for (const shards of [3, 7]) expect(build(shards)).toEqual(map);
    const reversed = planFieldMap('uranus-dipole', SMALL, 5).map(traceFieldMapShard).reverse();
    expect(assembleFieldMap('uranus-dipole', SMALL, reversed)).toEqual(map);
  });

  it('refuses shards that leave a gap or overlap', () => {
    const shards = planFieldMap('uranus-dipole', SMALL, 3).map(traceFieldMapShard);
    expect(() => assembleFieldMap('uranus-dipole', SMALL, shards.slice(1))).toThrow(TypeError);
    expect(() => assembleFieldMap('uranus-dipole', SMALL, shards.slice(0, 2))).toThrow(TypeError);
    expect(() => assembleFieldMap('uranus-dipole', SMALL, [...shards, shards[1]])).toThrow(TypeError);
  });

  it('is smooth over the magnetic equator, the poles of the grid and a full turn', () => {
    // In a centred dipole L = r / cos²λ: even this coarse grid gives it wherever lines are closed and clear the planet.
    const label = makeLabel();
    const mapped = mappedLabeller(DIPOLE, map);
    const [ax, ay, az] = DIPOLE.dipoleAxis;
    for (let k = 0; k < 400; k++) {
      const turn = (2 * Math.PI * k) / 400 - Math.PI;
      const height = 0.6 * Math.sin(17 * turn);
      const across = Math.sqrt(1 - height * height);
      const [x, y, z] = [4 * across * Math.cos(turn), 4 * across * Math.sin(turn), 4 * height];
      mapped.labelInto(x, y, z, label);
      const sine = (x * ax + y * ay + z * az) / 4;
      if (label.reason !== null) continue;
      expect(Math.abs((label.lShell * (1 - sine * sine)) / 4 - 1)).toBeLessThan(SMALL_GRID_REL);
    }
  });

  it('survives its file unchanged', () => {
    const bytes = encodeFieldMap(map);
    expect(decodeFieldMap(bytes)).toEqual(map);
    expect(fieldMapHeader(bytes).key).toBe(fieldMapKey(DIPOLE, SMALL));
  });

  it('refuses a damaged file', () => {
    const bytes = encodeFieldMap(map);
    const flipped = bytes.slice();
    flipped[bytes.length - 40] ^= 0x10;
    expect(() => decodeFieldMap(flipped)).toThrow(TypeError);
    expect(() => decodeFieldMap(bytes.slice(0, bytes.length - 5))).toThrow(TypeError);
  });

  it('has a key that follows the field and the grid', () => {
    const key = fieldMapKey(DIPOLE, SMALL);
    expect(fieldMapKey(DIPOLE, { ...SMALL, shells: 9 })).not.toBe(key);
    expect(fieldMapKey(fieldModel('uranus-otd'), SMALL)).not.toBe(key);
  });

  it('is never used for another field of the same name, or where none ships', () => {
    expect(shippedFieldMap(URANUS_Q3_WITH_EXTERNAL)).toBeNull();
    expect(fieldLabeller(URANUS_Q3_WITH_EXTERNAL).method).toBe('traced');
    expect(fieldLabeller(fieldModel('neptune-otd')).method).toBe('traced');
    expect(() => mappedLabeller(fieldModel('uranus-q3'), map)).toThrow(TypeError);
    const q3 = shippedFieldMap(fieldModel('uranus-q3'))!;
    expect(() => mappedLabeller(URANUS_Q3_WITH_EXTERNAL, q3)).toThrow(TypeError);
  });

  it('traces what lies off the grid', () => {
    const mapped = mappedLabeller(DIPOLE, map);
    const traced = tracedLabeller(DIPOLE);
    for (const x of [0.9, 30, 45]) {
      expect(mapped.labelInto(x, 0.1, 0.2, makeLabel())).toEqual(traced.labelInto(x, 0.1, 0.2, makeLabel()));
    }
  });
});

/** L of a 11° grid of eight shells: the cubic errs by about 0.1 % where cos²λ is small. */
const SMALL_GRID_REL = 3e-3;

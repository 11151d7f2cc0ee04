import { describe, expect, it } from 'vitest';
import { AppError } from '../../../server/errors.ts';
import type { PartInput } from '../../../server/margin/input.ts';
import { checkParts, preparePart } from '../../../server/margin/parts.ts';
import { formatPartsCsv, parsePartsCsv } from '../../../server/margin/partsCsv.ts';

const HEADER = 'partId,name,placeId,capabilityKradSi,capabilityBasis,requiredRdm,failureDosesKradSi,sampleSize';

function refusal(run: () => unknown): AppError {
  try {
    run();
  } catch (error) {
    if (error instanceof AppError) return error;
    throw error;
  }
  throw new TypeError('nothing was refused');
}

describe('parts as JSON', () => {
  const good: PartInput = { partId: 'p', name: 'FPGA', placeId: 'bay', capabilityKradSi: 100, capabilityBasis: 'test' };

  it('prepares a part with the margin of the study or its own', () => {
    expect(preparePart(good, 2).row).toMatchObject({ capabilityKradSi: 100, requiredRdm: 2, requiredRdmOwn: false });
    expect(preparePart({ ...good, requiredRdm: 3 }, 2).row).toMatchObject({ requiredRdm: 3, requiredRdmOwn: true });
    expect([...preparePart(good, 2).capabilityPointsKradSi]).toEqual([100]);
  });

  it('takes the tolerance limit of a lot as capability and keeps its scatter apart', () => {
    const { row, capabilityPointsKradSi } = preparePart(
      { partId: 'p', name: 'Op amp', placeId: 'bay', failureDosesKradSi: [48, 55, 60, 66, 75] },
      2,
    );
    expect(row.capabilityKradSi).toBeCloseTo(27.13, 2);
    expect(row.capabilityBasis).toBe('lot');
    expect(row.lot?.sampleSize).toBe(5);
    expect(capabilityPointsKradSi).toHaveLength(400);
    // The predictive median is the geometric mean of the lot, far above its limit.
    expect(Math.sqrt(capabilityPointsKradSi[199] * capabilityPointsKradSi[200])).toBeCloseTo(60.1, 2);
  });

  it('keeps a lot without scatter at its one dose', () => {
    const { row, capabilityPointsKradSi } = preparePart(
      { partId: 'p', name: 'Diode', placeId: 'bay', failureDosesKradSi: [50, 50, 50] },
      2,
    );
    expect(row.capabilityKradSi).toBeCloseTo(50, 12);
    expect(capabilityPointsKradSi).toHaveLength(1);
  });

  it.each<[string, Partial<PartInput>, string]>([
    ['zero capability', { capabilityKradSi: 0 }, 'capabilityKradSi'],
    ['NaN capability', { capabilityKradSi: Number.NaN }, 'capabilityKradSi'],
    ['no place', { placeId: '' }, 'placeId'],
    ['negative margin', { requiredRdm: -1 }, 'requiredRdm'],
    ['half a sample', { sampleSize: 2.5 }, 'sampleSize'],
    ['certainty', { lotConfidence: 1 }, 'lotConfidence'],
    ['capability and failure doses', { failureDosesKradSi: [1, 2] }, 'capabilityKradSi'],
    ['zero dose rate', { doseRateRadSiPerS: 0 }, 'doseRateRadSiPerS'],
  ])('refuses %s', (_, over, field) => {
    const error = refusal(() => checkParts([{ ...good, ...over }]));
    expect(error.code).toBe('PART_INVALID');
    expect(error.places.map((place) => place.pointer)).toContain(`#/parts/0/${field}`);
  });

  it('refuses a part without capability, a single failure dose and a repeated id', () => {
    const bare: PartInput = { partId: 'p', name: 'FPGA', placeId: 'bay' };
    expect(refusal(() => checkParts([bare])).places[0].field).toBe('capabilityKradSi');
    expect(refusal(() => checkParts([{ ...bare, failureDosesKradSi: [5] }])).places[0].field).toBe(
      'failureDosesKradSi',
    );
    const twice = refusal(() => checkParts([good, { ...good, name: 'Other' }]));
    expect(twice.places[0]).toMatchObject({ pointer: '#/parts/1/partId', got: 'p' });
  });
});

describe('parts as CSV', () => {
  it('reads what engineers send: mark, Windows lines, quotes, spellings of the basis', () => {
    const parts = parsePartsCsv(
      `\uFEFF${HEADER}\r\nU1,"Memory, 4 Gb",vault,30,data sheet,,,\r\nU2,Op amp,bay,,Lot,3,48 55;60 66 75,5\r\n\r\n`,
    );
    expect(parts).toEqual([
      { partId: 'U1', name: 'Memory, 4 Gb', placeId: 'vault', capabilityKradSi: 30, capabilityBasis: 'dataSheet' },
      {
        partId: 'U2',
        name: 'Op amp',
        placeId: 'bay',
        capabilityBasis: 'lot',
        requiredRdm: 3,
        failureDosesKradSi: [48, 55, 60, 66, 75],
        sampleSize: 5,
      },
    ]);
  });

  it('writes what it reads', () => {
    const parts: PartInput[] = [
      {
        partId: 'U1',
        name: '=SUM(A1)',
        placeId: 'bay',
        capabilityKradSi: 1e-3,
        capabilityBasis: 'test',
        description: 'a "b"\nc',
      },
      {
        partId: 'U2',
        name: 'Plain',
        placeId: 'bay',
        failureDosesKradSi: [1.5, 2.5],
        lotConfidence: 0.95,
        lotProbability: 0.999,
      },
    ];
    const text = formatPartsCsv(parts);
    expect(text).not.toMatch(/(^|,)=/m);
    expect(parsePartsCsv(text)).toEqual(parts);
  });

  it.each([
    ['a decimal comma', `${HEADER}\nU1,A,bay,"1,5",test,,,\n`, 2, 'capabilityKradSi'],
    ['a word for a number', `${HEADER}\nU1,A,bay,10,test,,,\nU2,B,bay,lots,test,,,\n`, 3, 'capabilityKradSi'],
    ['an unknown basis', `${HEADER}\nU1,A,bay,10,hearsay,,,\n`, 2, 'capabilityBasis'],
    ['no capability', `${HEADER}\nU1,A,bay,,,,,\n`, 2, 'capabilityKradSi'],
    ['no place', `${HEADER}\nU1,A,,10,test,,,\n`, 2, 'placeId'],
    [
      'a repeated id below a quoted line break',
      `${HEADER}\nU1,"A\nB",bay,10,test,,,\nU1,C,bay,10,test,,,\n`,
      4,
      'partId',
    ],
    ['a bad failure dose', `${HEADER}\nU1,A,bay,,lot,,10 x 12,\n`, 2, 'failureDosesKradSi'],
    ['an unknown column', `${HEADER},colour\nU1,A,bay,10,test,,,,red\n`, 1, 'colour'],
    ['a missing column', 'partId,name,capabilityKradSi\nU1,A,10\n', 1, 'placeId'],
  ])('refuses %s by line and column', (_, text, line, field) => {
    const error = refusal(() => parsePartsCsv(text));
    expect(error.code).toBe('PARTS_CSV_INVALID');
    expect(error.places.some((place) => place.line === line && place.field === field)).toBe(true);
    expect(error.message).toContain(`Line ${error.places[0].line}`);
  });

  it('refuses ragged rows, an empty file and an open quote', () => {
    expect(refusal(() => parsePartsCsv(`${HEADER}\nU1,A,bay,10\n`)).places[0]).toMatchObject({
      line: 2,
      got: 4,
      limit: 8,
    });
    expect(refusal(() => parsePartsCsv('')).code).toBe('PARTS_CSV_INVALID');
    expect(refusal(() => parsePartsCsv(`${HEADER}\n`)).places[0].detail).toContain('no part');
    expect(refusal(() => parsePartsCsv(`${HEADER}\nU1,"A,bay,10,test,,,\n`)).code).toBe('PARTS_CSV_INVALID');
  });
});

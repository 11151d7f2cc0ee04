import { describe, expect, it } from 'vitest';
import { assess } from '../../../server/margin/assess.ts';
import { compareAssessments } from '../../../server/margin/compare.ts';
import { toyInput, toyResponse, unitAboveOneMeV } from './toy.ts';

describe('compareAssessments', () => {
  it('finds nothing between a run and its repetition', () => {
    const again = compareAssessments(assess(toyInput()), assess(toyInput()));
    expect(again).toMatchObject({
      sameResult: true,
      inputs: [],
      settings: [],
      verdicts: [],
      onlyBefore: [],
      onlyAfter: [],
    });
    expect(again.doses.map(({ ratio }) => ratio)).toEqual([1]);
  });

  it('says what changed and how far each dose and verdict moved', () => {
    const input = toyInput();
    const [{ places, ...option }] = input.options;
    const response = toyResponse({ name: 'thicker', electron: (energy) => 0.1 * unitAboveOneMeV(energy) });
    const changed = compareAssessments(
      assess(input),
      assess({
        ...input,
        study: { ...input.study, verdictPercentile: 90 },
        options: [
          { ...option, optionId: 'renumbered', places: [{ ...places[0], response }] },
          { optionId: 'new', name: 'Added', places },
        ],
      }),
    );
    expect(changed.sameResult).toBe(false);
    expect(changed.inputs).toEqual(
      expect.arrayContaining([
        { kind: 'option', name: 'Thin', change: 'changed' },
        { kind: 'option', name: 'Added', change: 'added' },
        { kind: 'response', name: 'Thin: Bay', change: 'changed' },
      ]),
    );
    expect(changed.settings).toEqual([{ setting: 'verdictPercentile', before: '95', after: '90' }]);
    expect(changed.doses).toHaveLength(1);
    expect(changed.doses[0].ratio!).toBeCloseTo(0.1, 12);
    expect(changed.margins).toHaveLength(1);
    const [{ achievedRdmBefore, achievedRdmAfter }] = changed.margins;
    expect(achievedRdmAfter!).toBeGreaterThan(5 * achievedRdmBefore!);
    expect(changed.verdicts).toEqual([
      expect.objectContaining({ partName: 'Memory', verdictBefore: 'needsSectorAnalysis', verdictAfter: 'meets' }),
    ]);
    expect(changed.onlyAfter).toEqual(['Flyby / Added / Bay']);
  });

  it('names a part that sits elsewhere', () => {
    const input = toyInput();
    const [option] = input.options;
    const [place] = option.places;
    const both = { ...input, options: [{ ...option, places: [place, { ...place, placeId: 'other', name: 'Vault' }] }] };
    const moved = { ...both, parts: both.parts.map((part) => ({ ...part, placeId: 'other' })) };
    expect(compareAssessments(assess(both), assess(moved)).inputs).toEqual([
      { kind: 'partPlace', name: 'Memory', change: 'changed' },
    ]);
  });
});

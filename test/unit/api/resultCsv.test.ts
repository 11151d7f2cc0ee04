import { parse } from 'csv-parse/sync';
import { describe, expect, it } from 'vitest';
import { resultCsv } from '../../../server/api/resultCsv.ts';
import { smallResult } from '../report/fixture.ts';

/** What may end a column with a unit, and the columns that have none: names, words, ratios, shares, probabilities. */
const UNITS = /_(kg|krad\w+|rel|radSiPerS|utc|MeVPerG|perCm2|pAPerCm2)$/;
const WITHOUT_UNIT = new Set([
  'case',
  'option',
  'place',
  'shield',
  'part',
  'extrapolatedShare',
  'requiredRdm',
  'achievedRdmP50',
  'achievedRdmP95',
  'probabilityAboveDose',
  'probabilityAboveRequired',
  'verdict',
  'reason',
  'electronCurrentFlag',
  'electronFluenceFlag',
]);

describe('table of a result', () => {
  const result = smallResult();
  const rows = parse(resultCsv(result), { columns: true }) as Record<string, string>[];

  it('carries a unit in every column that has one', () => {
    for (const column of Object.keys(rows[0])) {
      expect(UNITS.test(column) || WITHOUT_UNIT.has(column), column).toBe(true);
    }
  });

  it('holds the numbers of the result, other sources and what stands beside the dose included', () => {
    expect(rows).toHaveLength(result.margins.length);
    result.margins.forEach((margin, i) => {
      const dose = result.shieldDose.find(
        (row) => row.caseId === margin.caseId && row.optionId === margin.optionId && row.placeId === margin.placeId,
      )!;
      expect(Number(rows[i].doseNominal_kradSi)).toBe(dose.doseKradSi!.total);
      expect(Number(rows[i].damageTotal_MeVPerG)).toBe(dose.damage!.totalMeVPerG);
      expect(Number(rows[i].neutron1MeVEquivalent_perCm2)).toBe(dose.damage!.neutronEquivalentPerCm2);
      for (const { name, phase, doseKradSi } of dose.bySource) {
        expect(Number(rows[i][`otherSource ${name} (${phase})_kradSi`])).toBe(doseKradSi);
      }
      expect(dose.bySource).toHaveLength(result.otherSources.length);
    });
  });
});

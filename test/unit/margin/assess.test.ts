import { describe, expect, it } from 'vitest';
import { canonicalJson } from '../../../server/canonical.ts';
import { AppError } from '../../../server/errors.ts';
import { assess } from '../../../server/margin/assess.ts';
import type { AssessedOption, AssessedPlace, AssessmentInput } from '../../../server/margin/input.ts';
import { hashedText, resultHash } from '../../../server/margin/provenance.ts';
import type { AssessmentResult } from '../../../server/margin/result.ts';
import { flatElectrons, toyInput, toyResponse, toyTrajectory, unitAboveOneMeV } from './toy.ts';

const REL = 1e-6;
/** 1e10 / E above the first bin that counts, times 1e-9 Gy cm²: 10 Gy an e-fold; in krad. */
const FLAT_KRAD = foldedFlat();

function foldedFlat(): number {
  // Bins of the electron grid whose middle lies at or above 1 MeV start at edge k: the dose is ln(100 / edge) · 10 Gy.
  const ratio = (100 / 0.02) ** (1 / 90);
  let k = 0;
  while (0.02 * ratio ** (k + 0.5) < 1) k++;
  return Math.log(100 / (0.02 * ratio ** k));
}

function place(over: Partial<AssessedPlace> = {}): AssessedPlace {
  return {
    placeId: 'bay',
    name: 'Bay',
    geometry: 'slab',
    shieldText: '1 mm Al',
    massKg: 1,
    response: toyResponse({ name: 'thin', electron: unitAboveOneMeV }),
    ...over,
  };
}

function option(optionId: string, places: AssessedPlace[]): AssessedOption {
  return { optionId, name: `Option ${optionId}`, places };
}

function scaled(name: string, factor: number): AssessedPlace['response'] {
  return toyResponse({ name, electron: (energy) => factor * unitAboveOneMeV(energy) });
}

function refusal(input: AssessmentInput): AppError {
  try {
    assess(input);
  } catch (error) {
    if (error instanceof AppError) return error;
    throw error;
  }
  throw new TypeError('nothing was refused');
}

describe('assess', () => {
  it('folds, spreads and judges one part by hand', () => {
    const result = assess(toyInput());
    const [dose] = result.shieldDose;
    expect(Math.abs(dose.doseKradSi!.total / FLAT_KRAD - 1)).toBeLessThan(REL);
    expect(dose.doseKradSi!.electron).toBe(dose.doseKradSi!.total);
    expect(dose.extrapolatedFraction).toBe(0);
    expect(dose.byEvidence!.sampled).toBeCloseTo(1, 12);
    const [margin] = result.margins;
    expect(margin.achievedRdm! * dose.band!.p50).toBeCloseTo(30, 10);
    expect(margin.achievedRdmP95! * dose.band!.p95).toBeCloseTo(30, 10);
    expect(margin.doseAtVerdictKradSi).toBe(dose.band!.p95);
    expect(margin.confidence!).toBeLessThan(margin.probabilityAboveDose!);
    expect(result.summary.verdictCounts[margin.verdict]).toBe(1);
    expect(result.verdictReasons[margin.reason]).toContain('.');
  });

  it('is the same to the last bit when run again, and under other record ids', () => {
    const first = assess(toyInput());
    expect(JSON.stringify(assess(toyInput()))).toBe(JSON.stringify(first));
    const renamed = JSON.parse(JSON.stringify(first).replaceAll('"o1"', '"x9"').replaceAll('"p1"', '"y9"'));
    expect(resultHash(renamed as AssessmentResult)).toBe(first.provenance.resultSha256);
    const other = assess(toyInput({ sampling: { draws: 2000, seed: 8 } }));
    expect(other.provenance.resultSha256).not.toBe(first.provenance.resultSha256);
    expect(other.shieldDose[0].doseKradSi).toEqual(first.shieldDose[0].doseKradSi);
  });

  it('hashes the canonical form of RFC 8785', () => {
    // Source: the reference serialiser of RFC 8785 from npm, over the same content.
    // Enough rows to be written in several pieces.
    const parts = Array.from({ length: 1100 }, (_, i) => ({ ...toyInput().parts[0], partId: `p${i}` }));
    const text = [...hashedText(assess(toyInput({ name: 'Größe "µ" \u2028 1e21', parts })))].join('');
    expect(text).toBe(canonicalJson(JSON.parse(text)));
    for (const id of ['caseId', 'optionId', 'partId', 'trajectoryId', 'resultSha256']) expect(text).not.toContain(id);
  });

  it('is plain JSON: nothing is lost on the wire', () => {
    const result = assess(toyInput());
    expect(JSON.parse(JSON.stringify(result))).toEqual(result);
  });

  it('gives a case the same numbers whatever stands beside it', () => {
    const alone = assess(toyInput());
    const crowded = assess(
      toyInput({
        cases: [
          { caseId: 'c0', name: 'Twice', legs: [{ trajectoryId: 't1', repetitions: 2 }] },
          { caseId: 'c1', name: 'Flyby', legs: [{ trajectoryId: 't1', repetitions: 1 }] },
        ],
        options: [option('o0', [place({ response: scaled('half', 0.5) })]), ...toyInput().options],
        baselineOptionId: 'o1',
      }),
    );
    const row = crowded.shieldDose.find(({ caseId, optionId }) => caseId === 'c1' && optionId === 'o1');
    expect(row).toEqual(alone.shieldDose[0]);
    const half = crowded.shieldDose.find(({ caseId, optionId }) => caseId === 'c1' && optionId === 'o0');
    expect(half!.band!.p95 / row!.band!.p95).toBeCloseTo(0.5, 12);
    const twice = crowded.shieldDose.find(({ caseId, optionId }) => caseId === 'c0' && optionId === 'o1');
    expect(twice!.doseKradSi!.total / row!.doseKradSi!.total).toBeCloseTo(2, 12);
    expect(twice!.byLeg).toEqual([{ trajectoryId: 't1', repetitions: 2, doseKradSi: twice!.doseKradSi!.total }]);
  });

  it('adds other sources without spread, of all three kinds', () => {
    const dose = toyInput({
      options: [
        option('o1', [
          place({
            aluminiumEquivalent: [
              { weight: 0.25, thicknessMm: 1 },
              { weight: 0.75, thicknessMm: 4 },
            ],
          }),
        ]),
      ],
      otherSources: [
        { name: 'Source A', source: 'Note 1', phase: 'cruise', doseKradSi: 0.5 },
        {
          name: 'Source B',
          source: 'Note 2',
          phase: 'cruise',
          doseDepth: { depthsMm: [1, 2, 4], doseKradSi: [8, 4, 2] },
        },
        {
          name: 'Source C',
          source: 'Note 3',
          phase: 'flyby',
          fluence: { species: 'electron', energiesMeV: [2, 4], integralPerCm2: [1e10, 0] },
        },
        { name: 'Elsewhere', source: 'Note 4', phase: 'flyby', caseIds: ['other'], doseKradSi: 99 },
      ],
    });
    const [row] = assess(dose).shieldDose;
    const [bare] = assess(toyInput()).shieldDose;
    // 0.5, the mean over directions 0.25·8 + 0.75·2, and 1e10 · 1e-9 Gy = 1 krad.
    const added = [0.5, 3.5, 1];
    expect(row.bySource.map(({ name }) => name)).toEqual(['Source A', 'Source B', 'Source C']);
    row.bySource.forEach(({ doseKradSi }, i) => {
      expect(doseKradSi).toBeCloseTo(added[i], 10);
    });
    expect(row.doseKradSi!.other).toBeCloseTo(5, 10);
    expect(row.band!.p95 - bare.band!.p95).toBeCloseTo(5, 10);
    expect(row.band!.p05 - bare.band!.p05).toBeCloseTo(5, 10);
  });

  it('does not assess what cannot be read, and says why', () => {
    const result = assess(
      toyInput({
        options: [
          option('o1', [place({ aluminiumEquivalent: [{ weight: 1, thicknessMm: 9 }] })]),
          option('o2', [place({ response: null, notAssessed: 'No engine covers this stack.' })]),
          option('o3', [place({ placeId: 'vault', aluminiumEquivalent: [{ weight: 1, thicknessMm: 2 }] })]),
          option('o4', [place({ response: toyResponse({ name: 'glass', targetMaterialId: 'SiO2' }) })]),
        ],
        otherSources: [
          { name: 'Curve', source: 'Note', phase: 'cruise', doseDepth: { depthsMm: [1, 4], doseKradSi: [8, 2] } },
        ],
      }),
    );
    expect(result.margins.map(({ verdict, reason }) => `${verdict} ${reason}`)).toEqual([
      'notAssessed outsideValidity',
      'notAssessed noResponse',
      'notAssessed placeMissing',
      'notAssessed noResponse',
    ]);
    expect(result.shieldDose[0].notAssessed).toContain('9 mm');
    expect(result.shieldDose[1].notAssessed).toBe('No engine covers this stack.');
    expect(result.shieldDose[2].doseKradSi!.other).toBeCloseTo(4, 10);
    expect(result.shieldDose[3].notAssessed).toContain('SiO2');
    expect(result.summary.verdictCounts.notAssessed).toBe(4);
    expect(result.summary.lightestMeetingOptionId).toBeNull();
  });

  it('draws the statistical error of a response with the rest', () => {
    // One bin counts, so its 20 % error is that of the dose; belts and time are the other two terms.
    const trajectories = [toyTrajectory({ sharedSigmaDex: 0, fluence: flatElectrons })];
    const noisy = toyResponse({ name: 'noisy', electron: (e) => (e > 1 && e < 1.1 ? 1e-9 : 0), sigmaRel: 0.2 });
    const [row] = assess(
      toyInput({
        trajectories,
        options: [option('o1', [place({ response: noisy })])],
        sampling: { draws: 20_000, seed: 2 },
      }),
    ).shieldDose;
    expect(row.statisticalErrorRel).toBeCloseTo(0.2, 12);
    // Source: variance of ln(1 + 0.2 ε), 0.0408 + 0.0026 + … by its series (x² + 5/2 x⁴), against (0.3 ln 10)².
    const statistical = 0.2 ** 2 + 2.5 * 0.2 ** 4;
    const expected = statistical / (statistical + (0.3 * Math.LN10) ** 2);
    const share = row.uncertainty.find(({ source }) => source === 'statisticalError')!.share;
    /** 4 σ of a squared correlation of 0.08 from 2000 draws: 4 · 2 √(0.08 · 0.92² / 2000). */
    expect(Math.abs(share - expected)).toBeLessThan(0.047);
  });

  it('states a flight that never meets the belts as no dose, which any part stands', () => {
    const result = assess(toyInput({ trajectories: [toyTrajectory({ groupDays: [], fluence: flatElectrons })] }));
    expect(result.shieldDose[0].doseKradSi!.total).toBe(0);
    expect(result.shieldDose[0].band).toEqual({ p05: 0, p50: 0, p95: 0 });
    expect(result.margins[0]).toMatchObject({ verdict: 'meets', achievedRdm: null, confidence: 1 });
    expect(result.summary.lowestMargin).toBeNull();
    expect(JSON.stringify(result)).not.toContain('NaN');
  });

  it('adds legs at both planets, each with belts of its own', () => {
    const uranus = toyTrajectory({ name: 'U', sharedSigmaDex: 0.5, fluence: flatElectrons });
    const other = toyTrajectory({ name: 'N', sharedSigmaDex: 0.5, fluence: flatElectrons }, { trajectoryId: 't2' });
    const neptune = { ...other, fluence: { ...other.fluence, planet: 'neptune' as const } };
    const both = (planets: AssessmentInput['trajectories']): AssessmentResult =>
      assess(
        toyInput({
          trajectories: planets,
          cases: [
            { caseId: 'c', name: 'Both', legs: planets.map(({ trajectoryId }) => ({ trajectoryId, repetitions: 1 })) },
          ],
        }),
      );
    const apart = both([uranus, neptune]);
    const together = both([uranus, { ...other }]);
    expect(apart.cases[0].planets).toEqual(['uranus', 'neptune']);
    expect(apart.shieldDose[0].doseKradSi).toEqual(together.shieldDose[0].doseKradSi);
    // Independent belts even each other out, belts of one planet do not.
    expect(apart.shieldDose[0].band!.p95).toBeLessThan(together.shieldDose[0].band!.p95);
  });

  it('holds all parts behind a bare stack', () => {
    const result = assess(
      toyInput({
        options: [option('o1', [place({ placeId: 'stack', holdsAllParts: true })])],
        parts: [
          { partId: 'p1', name: 'A', placeId: 'bay', capabilityKradSi: 30, capabilityBasis: 'test' },
          { partId: 'p2', name: 'B', placeId: 'vault', capabilityKradSi: 30, capabilityBasis: 'test' },
        ],
      }),
    );
    expect(result.margins.map(({ placeId }) => placeId)).toEqual(['stack', 'stack']);
    expect(result.margins.every(({ verdict }) => verdict !== 'notAssessed')).toBe(true);
  });

  it('marks the options that nothing beats and compares with the baseline', () => {
    const result = assess(
      toyInput({
        options: [
          option('thin', [place({ massKg: 1, response: scaled('1', 1) })]),
          option('wasteful', [place({ massKg: 3, response: scaled('2', 0.9) })]),
          option('good', [place({ massKg: 2, response: scaled('3', 0.5) })]),
          option('unknown', [place({ massKg: null, response: scaled('4', 0.1) })]),
          option('twin', [place({ massKg: 2, response: scaled('3', 0.5) })]),
        ],
      }),
    );
    expect(result.comparison.map(({ nonDominated }) => nonDominated)).toEqual([true, false, true, null, true]);
    expect(result.comparison[0].toBaseline).toBeNull();
    expect(result.comparison[2].toBaseline!.massKg).toBe(1);
    expect(result.comparison[2].toBaseline!.doseRatio).toBeCloseTo(0.5, 12);
    expect(result.comparison[3].toBaseline!.massKg).toBeNull();
  });

  it('moves with thickness, phase and belts', () => {
    const result = assess(
      toyInput({
        trajectories: [
          toyTrajectory(
            {
              variants: [0, 120, 240].map((offsetDeg) => ({
                fieldModelId: 'uranus-q3' as const,
                offsetDeg,
                weight: 1 / 3,
                primary: true,
              })),
              nominalVariant: 1,
              fluence: (at) => flatElectrons(at) * (1 + at.variant),
            },
            { mode: 'sweep' },
          ),
        ],
        options: [option('o1', [place({ thinner10Pct: scaled('-', 1.2)!, thicker10Pct: scaled('+', 0.8)! })])],
        otherSources: [{ name: 'RTG', source: 'Note', phase: 'all', doseKradSi: 1 }],
      }),
    );
    const [row] = result.sensitivity;
    const [dose] = result.shieldDose;
    const belts = 2 * FLAT_KRAD;
    expect(row.thinner10Pct!.doseKradSi).toBeCloseTo(1.2 * belts + 1, 4);
    expect(row.thicker10Pct!.ratio).toBeCloseTo((0.8 * belts + 1) / (belts + 1), 6);
    expect(row.phase!.lowestKradSi).toBeCloseTo(FLAT_KRAD + 1, 4);
    expect(row.phase!.highestKradSi).toBeCloseTo(3 * FLAT_KRAD + 1, 4);
    expect(row.beltsDoubledKradSi).toBeCloseTo(2 * belts + 1, 4);
    expect(dose.worstPhase!.offsetDeg).toBe(240);
    expect(dose.byPhase.map(({ offsetDeg }) => offsetDeg)).toEqual([0, 120, 240]);
    // At that factor the margin at the study's percentile is the requirement: 30 / (1 + k (p95 − 1)) = 2.
    const { factor } = row.beltFactorAtRequirement!;
    expect(30 / (1 + factor * (dose.band!.p95 - 1))).toBeCloseTo(2, 10);
  });

  it('judges at the worst phase when the study asks for it', () => {
    const trajectories = [
      toyTrajectory(
        {
          sharedSigmaDex: 0,
          variants: [0, 180].map((offsetDeg) => ({
            fieldModelId: 'uranus-q3' as const,
            offsetDeg,
            weight: 0.5,
            primary: true,
          })),
          fluence: (at) => flatElectrons(at) * (at.variant === 0 ? 1 : 1000),
        },
        { mode: 'sweep' },
      ),
    ];
    const study = { ...toyInput().study, verdictPercentile: 50 };
    const joint = assess(toyInput({ trajectories, study })).shieldDose[0];
    const worst = assess(toyInput({ trajectories, study: { ...study, phaseTreatment: 'worst' } })).shieldDose[0];
    expect(worst.band).toEqual(joint.band);
    // The median at the worst phase is the nominal dose there, up to the noise of 2000 draws of 0.3 decades.
    const MEDIAN_NOISE_DEX = 4 * 0.3 * Math.sqrt(Math.PI / 2 / 2000);
    expect(Math.abs(Math.log10(worst.doseAtVerdictKradSi! / worst.worstPhase!.doseKradSi))).toBeLessThan(
      MEDIAN_NOISE_DEX,
    );
    expect(worst.doseAtVerdictKradSi!).toBeGreaterThan(joint.doseAtVerdictKradSi!);
  });

  it('reports rates, damage and charging when a history is at hand, and null when not', () => {
    const samples = 11;
    const history = {
      epochTdbS: Float64Array.from({ length: samples }, (_, i) => 360 * i),
      electron: new Float32Array(samples * 91).fill(1e6),
      proton: new Float32Array(samples * 121),
    };
    const input = toyInput({
      trajectories: [toyTrajectory({ fluence: flatElectrons, history })],
      options: [
        option('o1', [place({ response: toyResponse({ electron: unitAboveOneMeV, transmitted: () => 0.2 }) })]),
      ],
    });
    const [row] = assess(input).shieldDose;
    expect(row.peakDoseRate!.utc).toBe('2000-01-01T11:58:56Z');
    // Flat 1e6 per MeV from 0.02 to 100 MeV: 0.2 · 99.98e6 electrons / cm² s.
    expect(row.charging!.peakCurrentPaPerCm2!).toBeCloseTo(0.2 * 99.98e6 * 1.602176634e-7, 4);
    expect(row.charging).toMatchObject({ currentFlag: 'above', fluenceFlag: 'above', currentLimitPaPerCm2: 0.1 });
    expect(row.charging!.fluence10hPerCm2!).toBeCloseTo(0.2 * 99.98e6 * 3600, -3);
    expect(assess(input).notices.map(({ code }) => code)).toContain('CHARGING_FLAGGED');
    expect(row.damage!.electronMeVPerG).toBeGreaterThan(0);
    const [without] = assess(toyInput()).shieldDose;
    expect(without.peakDoseRate).toBeNull();
    expect(without.charging).toMatchObject({
      peakCurrentPaPerCm2: null,
      currentFlag: 'unknown',
      fluenceFlag: 'unknown',
    });
  });

  it('draws a dose-depth curve with its band and gives fluences with theirs', () => {
    const responses = [1, 2, 4].map((depth) => scaled(`d${depth}`, 1 / depth)!);
    const result = assess(
      toyInput({
        doseDepthTables: [
          {
            geometry: 'slab',
            materialId: 'Al',
            densityGPerCm3: 2.7,
            targetText: 'Toy',
            depthsMm: [1, 2, 4],
            responses,
          },
        ],
        otherSources: [{ name: 'One number', source: 'Note', phase: 'cruise', doseKradSi: 1 }],
      }),
    );
    const [curve] = result.doseDepth;
    expect(curve.depthsGPerCm2[0]).toBeCloseTo(0.27, 12);
    expect(curve.totalKradSi[0] / curve.totalKradSi[2]).toBeCloseTo(4, 10);
    expect(curve.bandKradSi.p95[0]).toBeGreaterThan(curve.bandKradSi.p50[0]);
    expect(result.notices.map(({ code }) => code)).toContain('OTHER_SOURCE_NOT_IN_CURVE');
    const electrons = result.fluence.find(({ species }) => species === 'electron')!;
    const aboveOne = electrons.bands.find(({ thresholdMeV }) => thresholdMeV === 1)!;
    // Source: ∫ 1e10 / E from 1 to 100 MeV.
    expect(aboveOne.nominalPerCm2 / (1e10 * Math.log(100))).toBeCloseTo(1, 6);
    expect(aboveOne.bandPerCm2.p95).toBeGreaterThan(aboveOne.nominalPerCm2);
    expect(electrons.integralPerCm2[0] / (1e10 * Math.log(5000))).toBeCloseTo(1, 6);
  });

  it.each<[string, Partial<AssessmentInput>, string]>([
    ['no cases', { cases: [] }, '#/cases'],
    ['no options', { options: [] }, '#/options'],
    [
      'a leg of nowhere',
      { cases: [{ caseId: 'c', name: 'C', legs: [{ trajectoryId: 'x', repetitions: 1 }] }] },
      '#/cases/0/legs/0/trajectoryId',
    ],
    [
      'half an orbit',
      { cases: [{ caseId: 'c', name: 'C', legs: [{ trajectoryId: 't1', repetitions: 0.5 }] }] },
      '#/cases/0/legs/0/repetitions',
    ],
    ['few draws', { sampling: { draws: 5, seed: 1 } }, '#/sampling/draws'],
    ['a percentile of 40', { study: { ...toyInput().study, verdictPercentile: 40 } }, '#/study/verdictPercentile'],
    ['no margin', { study: { ...toyInput().study, requiredRdm: 0 } }, '#/study/requiredRdm'],
    ['a strange baseline', { baselineOptionId: 'zz' }, '#/baselineOptionId'],
    ['a place twice', { options: [option('o1', [place(), place()])] }, '#/options/0/places/1/placeId'],
  ])('refuses %s', (_, over, pointer) => {
    const error = refusal(toyInput(over));
    expect(error.code).toBe('ASSESSMENT_INVALID');
    expect(error.places.map((one) => one.pointer)).toContain(pointer);
  });

  it('stops between cases when asked to', () => {
    const controller = new AbortController();
    const cases = ['a', 'b'].map((caseId) => ({
      caseId,
      name: caseId,
      legs: [{ trajectoryId: 't1', repetitions: 1 }],
    }));
    const seen: number[] = [];
    expect(() =>
      assess(toyInput({ cases }), {
        signal: controller.signal,
        onProgress: (share) => {
          seen.push(share);
          controller.abort();
        },
      }),
    ).toThrow('aborted');
    expect(seen).toEqual([0.5]);
  });
});

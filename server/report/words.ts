import type { Verdict } from '../margin/index.ts';

/** Verdicts in words, the same everywhere. */
export const VERDICT_WORDS: Readonly<Record<Verdict, string>> = {
  meets: 'meets',
  needsSectorAnalysis: 'needs sector analysis',
  doesNotComply: 'does not comply',
  notDemonstrated: 'not demonstrated',
  notAssessed: 'not assessed',
};

/** Fixed caution notes; no setting leaves them out. */
export const CAUTIONS: readonly string[] = [
  'Preliminary planning aid. The environment specification of the project and the radiation and parts standards of its agency take precedence; qualified radiation-effects engineers decide.',
  'No published standard defines the trapped environment of Uranus or Neptune; the belts here rest on one flyby each, in 1986 and 1989.',
  'The magnetic longitude at arrival is uncertain; where the rotation period no longer holds it, doses are drawn over all phases.',
  'The dose itself carries no margin. The design margin is shown separately; it is not a safety factor.',
  'Solar-proton, other-planet and radioisotope doses are as entered by the user; what is not entered is not in the sums.',
  'Single-event effects, dose-rate effects and ageing are not assessed; internal charging is screened and flagged only, never certified.',
];

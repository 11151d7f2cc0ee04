import { besideDose, otherSources } from './besideSections.ts';
import { changes } from './changeSection.ts';
import {
  assumptions,
  cautions,
  environment,
  evidence,
  exclusions,
  inputs,
  method,
  phase,
  shielding,
  trajectories,
} from './contextSections.ts';
import { comparison, doseDepth, doses, margins, purpose, sensitivity, summary } from './resultSections.ts';
import type { Section } from './section.ts';

/** In the order a review reads them. */
export const SECTIONS: readonly Section[] = [
  purpose,
  summary,
  assumptions,
  trajectories,
  environment,
  phase,
  shielding,
  method,
  doseDepth,
  doses,
  otherSources,
  margins,
  besideDose,
  comparison,
  sensitivity,
  exclusions,
  cautions,
  changes,
  inputs,
  evidence,
];

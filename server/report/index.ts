/** Draws a finished assessment as a PDF for a design review. */
export { renderReport } from './render.ts';
export type { EvidenceRow, ReportInput } from './types.ts';

import type { PageFlow } from './pageFlow.ts';
import type { ReportInput } from './types.ts';

/** One section of a report: prints itself where the flow stands. */
export type Section = (flow: PageFlow, input: ReportInput) => void;

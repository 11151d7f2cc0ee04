import type { ExposureSummary } from '../server/fluence/summary.ts';
import type { AssessmentResult } from '../server/margin/result.ts';
import type { ThicknessResult, ThicknessSolution } from '../server/margin/thickness.ts';
import type { ShieldInput } from '../server/shielding/types.ts';

/** Typed calls of the service. Only types come from the server; nothing is computed here. */
export interface ProblemPlace {
  readonly pointer?: string;
  readonly line?: number;
  readonly field?: string;
  readonly detail: string;
  readonly got?: unknown;
  readonly limit?: unknown;
  readonly unit?: string;
}

/** A refusal of the service (RFC 9457). */
export class Refusal extends Error {
  readonly title: string;
  readonly places: readonly ProblemPlace[];

  constructor(title: string, detail: string, places: readonly ProblemPlace[]) {
    super(detail);
    this.title = title;
    this.places = places;
  }
}

export interface Study {
  readonly id: string;
  readonly name: string;
  readonly description: string;
  readonly requiredRdm: number;
  readonly verdictPercentile: number;
}

export interface TrajectoryItem {
  readonly id: string;
  readonly name: string;
  readonly planet: 'uranus' | 'neptune';
  readonly format: string;
  readonly sha256: string;
  readonly startUtc: string;
  readonly stopUtc: string;
  readonly stateCount: number;
  readonly reading: readonly string[];
  readonly notices: readonly { readonly code: string; readonly severity: string; readonly text: string }[];
  readonly closestApproaches: readonly {
    readonly utc: string;
    readonly radiusKm: number;
    readonly radiusPlanetRadii: number;
    readonly altitudeKm: number;
    readonly speedKmS: number;
  }[];
}

export interface CaseItem {
  readonly id: string;
  readonly name: string;
  readonly legs: readonly { readonly trajectoryId: string; readonly repetitions: number }[];
}

export interface StackItem {
  readonly id: string;
  readonly name: string;
  readonly version: number;
  readonly geometry: string;
  readonly innerRadiusMm?: number;
  readonly backing?: string;
  readonly text: string;
  readonly arealDensityGPerCm2: number;
  /** As entered: one of three units each. */
  readonly layers: readonly Readonly<Record<string, string | number>>[];
  readonly layersShown: readonly {
    readonly materialId: string;
    readonly materialName: string;
    readonly thicknessMm: number;
    readonly thicknessMil: number;
    readonly arealDensityGPerCm2: number;
  }[];
}

export interface OptionItem {
  readonly id: string;
  readonly name: string;
  readonly version: number;
  readonly massKg: number | null;
  readonly places: readonly {
    readonly placeId: string;
    readonly name: string;
    readonly shield: ShieldInput;
    readonly areaM2?: number;
    readonly innerBoxMm?: readonly [number, number, number];
    readonly innerSphereRadiusMm?: number;
    readonly shieldText: string;
    readonly massKg: number | null;
  }[];
}

export interface PartItem {
  readonly id: string;
  readonly partId: string;
  readonly name: string;
  readonly description?: string;
  readonly technology?: string;
  readonly placeId: string;
  readonly capabilityKradSi?: number;
  readonly capabilityBasis?: string;
  readonly sampleSize?: number;
  readonly doseRateRadSiPerS?: number;
  readonly failureDosesKradSi?: readonly number[];
  readonly lotConfidence?: number;
  readonly lotProbability?: number;
  readonly requiredRdm?: number;
}

/** A source besides the belts, as an assessment takes it. */
export interface OtherSourceItem {
  readonly name: string;
  readonly source: string;
  readonly phase: string;
  readonly doseKradSi?: number;
  readonly doseDepth?: { readonly depthsMm: readonly number[]; readonly doseKradSi: readonly number[] };
  readonly fluence?: {
    readonly species: 'electron' | 'proton';
    readonly energiesMeV: readonly number[];
    readonly differentialPerCm2MeV?: readonly number[];
    readonly integralPerCm2?: readonly number[];
    readonly example?: boolean;
  };
}

export interface AssessmentItem {
  readonly id: string;
  readonly name: string;
  readonly jobId: string;
  readonly createdUtc: string;
  readonly state: 'queued' | 'running' | 'done' | 'failed' | 'cancelled';
  readonly progress: number;
  readonly message: string;
  readonly problem: { readonly title: string; readonly detail: string } | null;
}

export type AssessmentDetail = AssessmentItem & { readonly result: AssessmentResult | null };

export interface ExposureState {
  readonly id: string;
  readonly state: AssessmentItem['state'];
  readonly progress: number;
  readonly problem: { readonly title: string; readonly detail: string } | null;
  readonly summary: ExposureSummary | null;
}

export interface ThicknessState {
  readonly state: AssessmentItem['state'];
  readonly progress: number;
  readonly message: string;
  readonly problem: { readonly title: string; readonly detail: string } | null;
  readonly result:
    | (Omit<ThicknessResult, 'solutions'> & {
        readonly solutions: readonly (ThicknessSolution & { readonly stackText: string })[];
      })
    | null;
}

export interface ReportItem {
  readonly id: string;
  readonly name: string;
  readonly documentNumber: string;
  readonly issue: string;
  readonly dateUtc: string;
  readonly pdfSha256: string;
  readonly createdUtc: string;
}

export interface MaterialItem {
  readonly id: string;
  readonly name: string;
  readonly densityGPerCm3: number;
}

export interface EvidenceItem {
  readonly room: string;
  readonly what: string;
  readonly source: string;
  readonly ours: string;
  readonly published: string;
  readonly tolerance: string;
}

const TOKEN_KEY = 'sidelong-token';

function headers(extra: Record<string, string> = {}): Record<string, string> {
  const token = sessionStorage.getItem(TOKEN_KEY);
  return token === null ? extra : { ...extra, Authorization: `Bearer ${token}` };
}

export function setToken(token: string): void {
  sessionStorage.setItem(TOKEN_KEY, token);
}

/** @throws {Refusal} on every answer that is not a success */
export async function call<T>(
  method: string,
  path: string,
  body?: unknown,
  type = 'application/json',
  version?: number,
): Promise<T> {
  const init: RequestInit = {
    method,
    headers: headers({
      ...(body === undefined || body instanceof FormData ? {} : { 'Content-Type': type }),
      ...(version === undefined ? {} : { 'If-Match': `"${version}"` }),
    }),
  };
  if (body !== undefined)
    init.body = body instanceof FormData || typeof body === 'string' ? body : JSON.stringify(body);
  const response = await fetch(path, init);
  if (response.status === 204) return undefined as T;
  const answer = (await response.json().catch(() => ({}))) as T & {
    title?: string;
    detail?: string;
    errors?: ProblemPlace[];
  };
  if (!response.ok) {
    throw new Refusal(
      answer.title ?? `Answer ${response.status}`,
      answer.detail ?? response.statusText,
      answer.errors ?? [],
    );
  }
  return answer;
}

/** All items of a collection, page after page. */
export async function all<T>(path: string): Promise<T[]> {
  const items: T[] = [];
  let cursor: string | null = null;
  do {
    const join: string = path.includes('?') ? '&' : '?';
    const page: { items: T[]; nextCursor: string | null } = await call(
      'GET',
      `${path}${join}limit=500${cursor === null ? '' : `&cursor=${cursor}`}`,
    );
    items.push(...page.items);
    cursor = page.nextCursor;
  } while (cursor !== null);
  return items;
}

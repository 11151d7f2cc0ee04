/**
 * A figure as pure data: paths and text in a coordinate box, with paints named by role. The client draws it as SVG in
 * the colours of its theme, the report as vector paths in inks that survive a grey printer. Nothing here measures text
 * or knows a colour.
 */
export type Paint =
  | 'none'
  | 'paper'
  | 'ink'
  | 'muted'
  | 'rule'
  | 'planet'
  | 'path'
  | 'field'
  | 'electron'
  | 'proton'
  | 'bremsstrahlung'
  | 'other'
  | 'band'
  | 'limit'
  | 'good'
  | 'warn'
  | 'bad'
  | `series${0 | 1 | 2 | 3 | 4 | 5 | 6 | 7}`
  | `ramp${0 | 1 | 2 | 3 | 4 | 5 | 6 | 7 | 8 | 9}`;

export interface ScenePath {
  readonly kind: 'path';
  /** SVG path data, absolute commands. */
  readonly d: string;
  readonly stroke?: Paint;
  readonly strokeWidth?: number;
  readonly dash?: readonly number[];
  readonly fill?: Paint;
  readonly fillOpacity?: number;
}

export interface SceneText {
  readonly kind: 'text';
  readonly x: number;
  readonly y: number;
  readonly text: string;
  readonly sizePx: number;
  readonly anchor: 'start' | 'middle' | 'end';
  readonly weight?: 'normal' | 'bold';
  readonly rotateDeg?: number;
  readonly fill?: Paint;
}

export interface SceneGroup {
  readonly kind: 'group';
  readonly translate?: readonly [number, number];
  readonly clip?: { readonly x: number; readonly y: number; readonly width: number; readonly height: number };
  readonly children: readonly SceneNode[];
}

export type SceneNode = ScenePath | SceneText | SceneGroup;

/** A point that hover or keyboard can read out, in scene coordinates. */
export interface ReadOut {
  readonly x: number;
  readonly y: number;
  /** What to say, with units, for example `2.54 mm Al: 1.23 krad(Si)`. */
  readonly text: string;
}

export interface Scene {
  readonly widthPx: number;
  readonly heightPx: number;
  readonly title: string;
  /** What the figure shows, for readers who cannot see it: alternative text in HTML and in the tagged PDF. */
  readonly description: string;
  readonly nodes: readonly SceneNode[];
  readonly readOuts: readonly ReadOut[];
  /** The plotted numbers: column names with units, then rows. Downloadable as CSV. */
  readonly data: {
    readonly columns: readonly string[];
    readonly rows: readonly (readonly (string | number | null)[])[];
  };
}

import { formatEpoch } from '../time/index.ts';

export interface OemDocument {
  readonly objectName: string;
  readonly objectId: string;
  readonly originator: string;
  /** UTC, ISO 8601; given by the caller, because nothing here knows the time of day. */
  readonly creationDate: string;
  readonly centerName: string;
  readonly headerComments: readonly string[];
  readonly segments: readonly OemSegment[];
}

export interface OemSegment {
  readonly comments: readonly string[];
  /** Shape (n,), TDB seconds past J2000, ascending. */
  readonly epochsTdbS: ArrayLike<number>;
  /** Shape (n, 6) by rows: km and km/s, ICRF axes. */
  readonly states: ArrayLike<number>;
  readonly interpolation: 'HERMITE' | 'LAGRANGE' | 'LINEAR';
  readonly degree: number;
}

/** Decimals: 1 µs, 1 mm and 1 µm/s, finer than anything a dose could notice. */
const EPOCH_DIGITS = 6;
const POSITION_DIGITS = 6;
const VELOCITY_DIGITS = 9;
const MAX_COMMENT = 240;

/**
 * An orbit ephemeris message, version 2.0, in keyword = value notation, TDB and ICRF.
 *
 * @source CCSDS 502.0-B-3, section 5
 */
export function writeOem(document: OemDocument): string {
  const lines = ['CCSDS_OEM_VERS = 2.0'];
  for (const comment of document.headerComments) lines.push(commentLine(comment));
  lines.push(`CREATION_DATE = ${document.creationDate}`, `ORIGINATOR = ${printable(document.originator)}`, '');
  for (const segment of document.segments) {
    const count = segment.epochsTdbS.length;
    if (count < 2) throw new TypeError('A segment needs at least two states');
    const epoch = (i: number): string => formatEpoch(segment.epochsTdbS[i], 'TDB', EPOCH_DIGITS);
    lines.push(
      'META_START',
      `OBJECT_NAME = ${printable(document.objectName)}`,
      `OBJECT_ID = ${printable(document.objectId)}`,
      `CENTER_NAME = ${document.centerName}`,
      'REF_FRAME = ICRF',
      'TIME_SYSTEM = TDB',
      `START_TIME = ${epoch(0)}`,
      `STOP_TIME = ${epoch(count - 1)}`,
      `INTERPOLATION = ${segment.interpolation}`,
      `INTERPOLATION_DEGREE = ${segment.degree}`,
      'META_STOP',
      '',
    );
    for (const comment of segment.comments) lines.push(commentLine(comment));
    for (let i = 0; i < count; i++) {
      const numbers: string[] = [];
      for (let k = 0; k < 6; k++) {
        numbers.push(segment.states[6 * i + k].toFixed(k < 3 ? POSITION_DIGITS : VELOCITY_DIGITS));
      }
      lines.push(`${epoch(i)} ${numbers.join(' ')}`);
    }
    lines.push('');
  }
  return lines.join('\n');
}

function commentLine(text: string): string {
  return `COMMENT ${printable(text)}`.slice(0, MAX_COMMENT);
}

/** Printable ASCII on one line: the message allows nothing else. */
function printable(text: string): string {
  const plain = text.replace(/[^\x20-\x7e]+/g, ' ').trim();
  return plain === '' ? 'UNNAMED' : plain;
}

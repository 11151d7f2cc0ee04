import { AppError } from '../errors.ts';
import { textOf } from './lines.ts';
import type { ByteSource } from './source.ts';

export type EphemerisFormat = 'oem-kvn' | 'oem-xml' | 'spk' | 'csv';

const HEAD_BYTES = 4096;

/**
 * What kind of file this is, from its first bytes alone; the name of the file plays no part.
 *
 * @throws {AppError} EPHEMERIS_UNREADABLE saying what the file looks like when it is none of the readable kinds
 */
export function detectFormat(source: ByteSource): EphemerisFormat {
  if (source.sizeBytes === 0) throw unreadable('The file is empty.');
  const head = source.read(0, Math.min(HEAD_BYTES, source.sizeBytes));
  const word = textOf(head, 0, Math.min(8, head.length));
  if (word.startsWith('DAF/SPK') || word.startsWith('NAIF/DAF')) return 'spk';
  if (/^DAF\//.test(word))
    throw unreadable(`The file is a binary kernel of another kind, "${word.trim()}"; an SPK kernel is needed.`);
  if (head[0] === 0x1f && head[1] === 0x8b) throw unreadable('The file is compressed by gzip; upload it unpacked.');
  if (word.startsWith('PK'))
    throw unreadable('The file is a ZIP archive or an office document; upload the ephemeris itself.');
  if (word.startsWith('%PDF')) throw unreadable('The file is a PDF document, not an ephemeris.');
  if ((head[0] === 0xff && head[1] === 0xfe) || (head[0] === 0xfe && head[1] === 0xff)) {
    throw unreadable('The file is text in UTF-16; save it as ASCII or UTF-8.');
  }
  if (head.includes(0)) throw unreadable('The file is binary and no SPK kernel.');
  const text = textOf(head, 0, head.length).replace(/^\ufeff/, '');
  const first = text.trimStart();
  if (first === '') throw unreadable(`The first ${head.length} bytes of the file are blank.`);
  if (first.startsWith('<')) return 'oem-xml';
  const keyword = /^CCSDS_([A-Z]+)_VERS/.exec(first);
  if (keyword !== null) {
    if (keyword[1] === 'OEM') return 'oem-kvn';
    throw unreadable(
      `The file is a CCSDS message of the kind ${keyword[1]}; an orbit ephemeris message (OEM) is needed.`,
    );
  }
  if (/^(COMMENT|META_START|CREATION_DATE|ORIGINATOR)\b/.test(first)) return 'oem-kvn';
  const line = text
    .split(/\r?\n/)
    .find((candidate) => candidate.trim() !== '' && !candidate.trimStart().startsWith('#'));
  if (line !== undefined && /[,;\t]/.test(line)) return 'csv';
  throw unreadable(
    'The file is text, but neither an orbit ephemeris message (first keyword CCSDS_OEM_VERS), nor XML, nor a CSV table with a header line.',
  );
}

function unreadable(detail: string): AppError {
  return new AppError('EPHEMERIS_UNREADABLE', detail, [{ detail }]);
}

import { SaxesParser } from 'saxes';
import { AppError } from '../errors.ts';
import { epochOfBytes, type TimeScale, whyNoEpoch } from '../time/index.ts';
import { asciiBytes, decimalOfText } from './decimal.ts';
import { HeaderBuilder, MetadataBuilder, type OemHeader, oemInvalid } from './metadata.ts';
import type { NodeEphemeris, NodeSegment } from './nodes.ts';
import { SegmentRows } from './segmentRows.ts';
import type { ByteSource } from './source.ts';

const CHUNK_BYTES = 1 << 18;
const MAX_DEPTH = 16;
const MAX_TEXT = 8192;
const STATE_FIELDS = ['X', 'Y', 'Z', 'X_DOT', 'Y_DOT', 'Z_DOT'];
const ACCELERATION_FIELDS = ['X_DDOT', 'Y_DDOT', 'Z_DDOT'];
const COVARIANCE_AXES = ['X', 'Y', 'Z', 'X_DOT', 'Y_DOT', 'Z_DOT'];
/** CX_X, CY_X, CY_Y, … CZ_DOT_Z_DOT: the lower triangle. */
const COVARIANCE_FIELDS = new Set(
  COVARIANCE_AXES.flatMap((row, i) => COVARIANCE_AXES.slice(0, i + 1).map((column) => `C${row}_${column}`)),
);
/** Units that the schema allows, by kind of field; the attribute may be absent. */
const UNITS = { position: 'km', velocity: 'km/s', acceleration: 'km/s**2' } as const;
/** Elements that hold others, with the parents they may stand in. */
const CONTAINERS: Readonly<Record<string, readonly string[]>> = {
  ndm: [''],
  oem: ['', 'ndm'],
  header: ['oem'],
  body: ['oem'],
  segment: ['body'],
  metadata: ['segment'],
  data: ['segment'],
  stateVector: ['data'],
  covarianceMatrix: ['data'],
};

/**
 * Orbit ephemeris message in XML (CCSDS 505.0-B-3), bare or inside an `ndm`, with or without a namespace, read piece by
 * piece. A document type declaration is refused, so no entity is ever expanded.
 *
 * @throws {AppError} OEM_INVALID, EPOCH_UNREADABLE, TIME_SYSTEM_REFUSED, FRAME_REFUSED or EPHEMERIS_UNREADABLE
 */
export function readOemXml(source: ByteSource): NodeEphemeris {
  return new XmlReader().read(source);
}

class XmlReader {
  private readonly parser = new SaxesParser({ xmlns: true });
  private readonly path: string[] = [];
  private text = '';
  private unit = '';
  private header: OemHeader | null = null;
  private headerBuilder: HeaderBuilder | null = null;
  private metadata: MetadataBuilder | null = null;
  private rows: SegmentRows | null = null;
  private scale: TimeScale | null = null;
  private messages = 0;
  private readonly segments: NodeSegment[] = [];
  private readonly fields = new Map<string, number>();
  private recordEpochTdbS = Number.NaN;
  private readonly state = new Float64Array(9);

  constructor() {
    const { parser } = this;
    parser.on('error', (error) => {
      throw new AppError(
        'EPHEMERIS_UNREADABLE',
        `Line ${parser.line}: the XML is not well formed: ${plainReason(error)}.`,
        [{ line: parser.line, detail: 'not well-formed XML' }],
      );
    });
    parser.on('doctype', () => {
      throw oemInvalid(
        parser.line,
        'DOCTYPE',
        'a document type declaration is not allowed: entities are never expanded',
      );
    });
    parser.on('xmldecl', ({ encoding }) => {
      if (encoding !== undefined && !/^(utf-?8|us-ascii|ascii)$/i.test(encoding)) {
        throw oemInvalid(parser.line, 'encoding', 'must be UTF-8', encoding.slice(0, 40));
      }
    });
    parser.on('opentag', (tag) => this.open(tag.local, tag.attributes));
    parser.on('closetag', (tag) => this.close(tag.local));
    const add = (text: string): void => {
      // Blanks between containers are formatting; text only counts inside a field.
      if (this.text.length + text.length <= MAX_TEXT) this.text += text;
      else throw oemInvalid(parser.line, this.current(), `text longer than ${MAX_TEXT} characters`);
    };
    parser.on('text', add);
    parser.on('cdata', add);
  }

  read(source: ByteSource): NodeEphemeris {
    const decoder = new TextDecoder('utf-8', { fatal: true });
    for (let at = 0; at < source.sizeBytes; at += CHUNK_BYTES) {
      const length = Math.min(CHUNK_BYTES, source.sizeBytes - at);
      let text: string;
      try {
        text = decoder.decode(source.read(at, length), { stream: at + length < source.sizeBytes });
      } catch (cause) {
        throw new AppError(
          'EPHEMERIS_UNREADABLE',
          `After line ${this.parser.line} the file is not text in UTF-8.`,
          [],
          { cause },
        );
      }
      this.parser.write(text);
    }
    this.parser.close();
    if (this.header === null || this.segments.length === 0) {
      throw oemInvalid(this.parser.line, 'oem', 'the document holds no orbit ephemeris message with a segment');
    }
    return { format: 'oem-xml', ...this.header, segments: this.segments };
  }

  private current(): string {
    return this.path[this.path.length - 1] ?? '';
  }

  private open(name: string, attributes: Readonly<Record<string, { local: string; value: string }>>): void {
    const { line } = this.parser;
    const parent = this.current();
    const parents = CONTAINERS[name];
    if (parents === undefined) {
      // A field: it must stand directly in a container that takes fields.
      if (parent === '' || CONTAINERS[parent] === undefined || ['body', 'segment'].includes(parent)) {
        throw oemInvalid(line, name.slice(0, 40), `does not belong inside <${parent}>`);
      }
    } else if (!parents.includes(parent)) {
      throw oemInvalid(
        line,
        name,
        parent === '' ? 'cannot be the root of the document' : `does not belong inside <${parent}>`,
      );
    }
    if (this.path.length >= MAX_DEPTH) throw oemInvalid(line, name, 'nested too deeply');
    this.path.push(name);
    this.text = '';
    this.unit = '';
    for (const key in attributes) if (attributes[key].local === 'units') this.unit = attributes[key].value.trim();
    switch (name) {
      case 'oem':
        this.openMessage(attributes, line);
        break;
      case 'segment':
        if (this.header === null) throw oemInvalid(line, 'header', 'must come before the body');
        this.metadata = null;
        this.rows = null;
        break;
      case 'metadata':
        if (this.metadata !== null) throw oemInvalid(line, name, 'a segment has one metadata block');
        this.metadata = new MetadataBuilder();
        break;
      case 'data':
        if (this.rows === null) throw oemInvalid(line, name, 'must follow the metadata of its segment');
        break;
      case 'stateVector':
      case 'covarianceMatrix':
        this.fields.clear();
        this.recordEpochTdbS = Number.NaN;
        break;
    }
  }

  private openMessage(attributes: Readonly<Record<string, { local: string; value: string }>>, line: number): void {
    this.messages++;
    if (this.messages > 1) throw oemInvalid(line, 'oem', 'the document holds several messages; upload them one by one');
    const values = new Map(Object.values(attributes).map(({ local, value }) => [local, value]));
    if (values.get('id') !== 'CCSDS_OEM_VERS') {
      throw oemInvalid(line, 'oem', 'needs the attribute id="CCSDS_OEM_VERS"', values.get('id')?.slice(0, 40) ?? '');
    }
    this.headerBuilder = new HeaderBuilder(values.get('version') ?? '', line);
  }

  private close(name: string): void {
    const { line } = this.parser;
    this.path.pop();
    const text = this.text.trim();
    this.text = '';
    if (CONTAINERS[name] === undefined) {
      this.field(name, text, line);
      return;
    }
    if (text !== '') throw oemInvalid(line, name, 'text outside the fields', text.slice(0, 40));
    switch (name) {
      case 'header':
        this.header = this.headerBuilder!.finish(line);
        break;
      case 'metadata':
        this.closeMetadata(line);
        break;
      case 'stateVector':
        this.closeState(line);
        break;
      case 'covarianceMatrix':
        this.closeCovariance(line);
        break;
      case 'segment':
        if (this.rows === null) throw oemInvalid(line, name, 'has no metadata');
        this.segments.push(this.rows.finish(line));
        break;
    }
  }

  private closeMetadata(line: number): void {
    const span = this.metadata!.finish(line, this.scale);
    const first = this.segments[0]?.metadata;
    if (first !== undefined && first.objectName !== span.metadata.objectName) {
      throw oemInvalid(
        line,
        'OBJECT_NAME',
        `a message is about one object; the first segment names "${first.objectName}"`,
      );
    }
    this.scale = span.metadata.timeSystem;
    this.rows = new SegmentRows(span, this.segments);
  }

  private field(name: string, text: string, line: number): void {
    const parent = this.current();
    switch (parent) {
      case 'header':
        if (name === 'COMMENT') this.headerBuilder!.block.comments.add(text);
        else this.headerBuilder!.block.set(name, text, line);
        return;
      case 'metadata':
        if (name === 'COMMENT') this.metadata!.block.comments.add(text);
        else this.metadata!.block.set(name, text, line);
        return;
      case 'data':
        if (name !== 'COMMENT') throw oemInvalid(line, name.slice(0, 40), 'does not belong inside <data>');
        this.metadata!.block.comments.add(text);
        return;
      case 'stateVector':
      case 'covarianceMatrix':
        this.recordField(parent, name, text, line);
        return;
      default:
        throw oemInvalid(line, name.slice(0, 40), `does not belong inside <${parent}>`);
    }
  }

  private recordField(parent: string, name: string, text: string, line: number): void {
    if (name === 'COMMENT' || (name === 'COV_REF_FRAME' && parent === 'covarianceMatrix')) return;
    if (name === 'EPOCH') {
      if (!Number.isNaN(this.recordEpochTdbS)) throw oemInvalid(line, name, 'is given twice');
      this.recordEpochTdbS = this.epoch(text, line);
      return;
    }
    const expected = parent === 'stateVector' ? stateUnit(name) : COVARIANCE_FIELDS.has(name) ? '' : null;
    if (expected === null) throw oemInvalid(line, name.slice(0, 40), `does not belong inside <${parent}>`);
    if (expected !== '' && this.unit !== '' && this.unit !== expected) {
      throw oemInvalid(line, name, `must be in ${expected}`, this.unit.slice(0, 20));
    }
    if (this.fields.has(name)) throw oemInvalid(line, name, 'is given twice');
    const value = decimalOfText(text);
    if (Number.isNaN(value)) throw oemInvalid(line, name, 'is no finite number', text.slice(0, 40));
    this.fields.set(name, value);
  }

  private closeState(line: number): void {
    if (Number.isNaN(this.recordEpochTdbS)) throw oemInvalid(line, 'EPOCH', 'is missing in the state that ends here');
    for (let i = 0; i < 6; i++) {
      const value = this.fields.get(STATE_FIELDS[i]);
      if (value === undefined) throw oemInvalid(line, STATE_FIELDS[i], 'is missing in the state that ends here');
      this.state[i] = value;
    }
    const accelerations = ACCELERATION_FIELDS.filter((name) => this.fields.has(name)).length;
    if (accelerations % 3 !== 0) throw oemInvalid(line, 'X_DDOT', 'accelerations come with all three components');
    this.rows!.push(this.recordEpochTdbS, this.state, 6 + accelerations, line);
  }

  private closeCovariance(line: number): void {
    if (Number.isNaN(this.recordEpochTdbS)) throw oemInvalid(line, 'EPOCH', 'is missing in the matrix that ends here');
    if (this.fields.size !== COVARIANCE_FIELDS.size) {
      throw oemInvalid(line, 'covarianceMatrix', `has ${this.fields.size} of its ${COVARIANCE_FIELDS.size} elements`);
    }
    this.rows!.pushCovariance(this.recordEpochTdbS, line);
  }

  private epoch(text: string, line: number): number {
    const { bytes, length } = asciiBytes(text);
    const epochTdbS = length < 0 ? Number.NaN : epochOfBytes(bytes, 0, length, this.scale!);
    if (!Number.isNaN(epochTdbS)) return epochTdbS;
    const detail = whyNoEpoch(text, this.scale!);
    throw new AppError('EPOCH_UNREADABLE', `Line ${line}: ${detail}`, [{ line, field: 'EPOCH', detail }]);
  }
}

function stateUnit(name: string): string | null {
  if (STATE_FIELDS.slice(0, 3).includes(name)) return UNITS.position;
  if (STATE_FIELDS.includes(name)) return UNITS.velocity;
  return ACCELERATION_FIELDS.includes(name) ? UNITS.acceleration : null;
}

/** The parser's message without its position prefix. */
function plainReason(error: Error): string {
  return error.message
    .replace(/^\d+:\d+: /, '')
    .replace(/\.$/, '')
    .slice(0, 200);
}

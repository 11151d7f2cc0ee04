import { describe, expect, it } from 'vitest';
import { bytesOf, type NodeEphemeris, readOemKvn, readOemXml } from '../../../server/ephemeris/index.ts';
import { parseEpoch } from '../../../server/time/index.ts';

const encoder = new TextEncoder();
const kvn = (text: string): NodeEphemeris => readOemKvn(bytesOf(encoder.encode(text)));
const xml = (text: string): NodeEphemeris => readOemXml(bytesOf(encoder.encode(text)));

const HEADER = 'CCSDS_OEM_VERS = 2.0\nCREATION_DATE = 2026-01-01T00:00:00\nORIGINATOR = INVENTED\n';
const META = `META_START
OBJECT_NAME = PROBE
OBJECT_ID = 1998-067-A
CENTER_NAME = Uranus
REF_FRAME = EME2000
TIME_SYSTEM = TDB
START_TIME = 2045-01-01T00:00:00
STOP_TIME = 2045-01-01T00:20:00
META_STOP
`;
const ROWS = [
  '2045-01-01T00:00:00 100000.0 -12000.0 -063.042 1.0 10.0 0.5',
  '2045-01-01T00:10:00 100500.0 -6000.0 3.3e3 0.7 10.0 0.5',
  '2045-01-01T00:20:00 100800.0 0.0 +3600 0.3 10.0 .5',
];

describe('orbit ephemeris message, keyword = value', () => {
  it('reads header, metadata and states', () => {
    const message = kvn(`${HEADER}${META}${ROWS.join('\n')}\n`);
    expect(message).toMatchObject({ format: 'oem-kvn', version: '2.0', originator: 'INVENTED' });
    const [segment] = message.segments;
    expect(segment.metadata).toMatchObject({
      objectId: '1998-067-A',
      centerName: 'Uranus',
      frame: 'ICRF',
      timeSystem: 'TDB',
      interpolation: 'hermite',
      degree: 7,
      interpolationStated: false,
    });
    expect([...segment.epochsTdbS]).toEqual(
      ['00', '10', '20'].map((minute) => parseEpoch(`2045-01-01T00:${minute}:00`, 'TDB')),
    );
    expect([...segment.states.subarray(0, 6)]).toEqual([100_000, -12_000, -63.042, 1, 10, 0.5]);
    expect(segment.states[8]).toBe(3300);
    expect(segment.states[17]).toBe(0.5);
  });

  it.each([
    ['CRLF line ends', (text: string) => text.replaceAll('\n', '\r\n')],
    ['no final newline', (text: string) => text.trimEnd()],
    ['a byte order mark', (text: string) => `\ufeff${text}`],
    ['blank lines anywhere', (text: string) => text.replaceAll('\n', '\n\n')],
    ['tabs and runs of blanks', (text: string) => text.replaceAll(' ', ' \t ')],
    ['indented lines', (text: string) => text.replaceAll('\n', '\n  ')],
    ['no blanks round =', (text: string) => text.replaceAll(' = ', '=')],
    ['epochs that end in Z', (text: string) => text.replace(/(2045-\S+)/g, '$1Z')],
    ['epochs by day of year', (text: string) => text.replaceAll('2045-01-01T', '2045-001T')],
    ['comments among the states', (text: string) => text.replace(ROWS[1], `COMMENT schöner Vorbeiflug\n${ROWS[1]}`)],
    ['values in other letter case', (text: string) => text.replace('EME2000', 'eme2000').replace('= TDB', '= tdb')],
  ])('reads the same states with %s', (_, change) => {
    const plain = kvn(`${HEADER}${META}${ROWS.join('\n')}\n`);
    const changed = kvn(change(`${HEADER}${META}${ROWS.join('\n')}\n`));
    expect(changed.segments[0].states).toEqual(plain.segments[0].states);
    expect(changed.segments[0].epochsTdbS).toEqual(plain.segments[0].epochsTdbS);
  });

  it('checks accelerations and covariances and keeps count of them', () => {
    const rows = ROWS.map((row, i) => (i === 0 ? row : `${row} 1e-5 0 0`)).join('\n');
    const matrix = '1\n0 1\n0 0 1\nCOMMENT inside\n0 0 0 1\n\n0 0 0 0 1\n0 0 0 0 0 1\n';
    const text = `${HEADER}${META}${rows}\nCOVARIANCE_START\nEPOCH = 2045-01-01T00:00:00\nCOV_REF_FRAME = RTN\n${matrix}EPOCH = 2045-01-01T00:10:00\n${matrix}COVARIANCE_STOP\n`;
    const [segment] = kvn(text).segments;
    expect(segment.accelerationCount).toBe(2);
    expect(segment.covarianceCount).toBe(2);
    expect(segment.epochsTdbS).toHaveLength(3);
  });

  it('keeps segments apart, with their own interpolation and usable spans', () => {
    const second = META.replaceAll('2045-01-01', '2045-01-02').replace(
      'META_STOP',
      'USEABLE_START_TIME = 2045-01-02T00:05:00\nUSEABLE_STOP_TIME = 2045-01-02T00:15:00\nINTERPOLATION = LAGRANGE\nINTERPOLATION_DEGREE = 2\nMETA_STOP',
    );
    const rows = ROWS.map((row) => row.replace('2045-01-01', '2045-01-02'));
    const { segments } = kvn(`${HEADER}${META}${ROWS.join('\n')}\n${second}${rows.join('\n')}\n`);
    expect(segments).toHaveLength(2);
    expect(segments[1].metadata).toMatchObject({ interpolation: 'lagrange', degree: 2, interpolationStated: true });
    expect(segments[1].metadata.usableStartTdbS).toBe(parseEpoch('2045-01-02T00:05:00', 'TDB'));
    expect(segments[1].metadata.usableStopTdbS).toBe(parseEpoch('2045-01-02T00:15:00', 'TDB'));
  });

  it('rounds an even Hermite degree down and remembers what was written', () => {
    const meta = META.replace('META_STOP', 'INTERPOLATION = Hermite\nINTERPOLATION_DEGREE = 6\nMETA_STOP');
    expect(kvn(`${HEADER}${meta}${ROWS.join('\n')}`).segments[0].metadata).toMatchObject({
      degree: 5,
      degreeRoundedFrom: 6,
    });
  });

  it('reads versions 1 to 3 with their extra keywords', () => {
    for (const version of ['1.0', '2.0', '3.0']) {
      const header = HEADER.replace('2.0', version).replace(
        'ORIGINATOR',
        'CLASSIFICATION = NONE\nMESSAGE_ID = 17\nORIGINATOR',
      );
      expect(kvn(`${header}${META}${ROWS.join('\n')}`)).toMatchObject({
        version,
        messageId: '17',
        classification: 'NONE',
      });
    }
  });

  it('reads a line across the border of its chunks', () => {
    // A comment before the states shifts them over the border at 1 MiB in steps of one byte.
    const filler = `COMMENT ${'x'.repeat(120)}\n`.repeat(8000);
    const head = `${HEADER}${META}`;
    const room = (1 << 20) - head.length - filler.length;
    expect(room).toBeGreaterThan(200);
    for (let shift = 0; shift < 70; shift++) {
      const pad = `COMMENT ${'y'.repeat(100)}\n`.repeat(Math.floor((room - 150) / 109));
      const left = room - pad.length - 9 - shift;
      const text = `${head}${filler}${pad}COMMENT ${'z'.repeat(left)}\n${ROWS.join('\n')}\n`;
      expect(kvn(text).segments[0].states[0]).toBe(100_000);
    }
  });
});

const XML_META = META.split('\n')
  .filter((line) => line.includes('='))
  .map((line) => {
    const [key, value] = line.split(' = ');
    return `<${key}>${value}</${key}>`;
  })
  .join('');
const FIELDS = ['X', 'Y', 'Z', 'X_DOT', 'Y_DOT', 'Z_DOT'];
const xmlRow = (row: string, prefix = ''): string => {
  const [epoch, ...numbers] = row.split(' ');
  const fields = FIELDS.map((name, i) => {
    const units = i < 3 ? 'km' : 'km/s';
    return `<${prefix}${name} units="${units}">${numbers[i]}</${prefix}${name}>`;
  });
  return `<${prefix}stateVector><${prefix}EPOCH>${epoch}</${prefix}EPOCH>${fields.join('')}</${prefix}stateVector>`;
};
const XML = `<?xml version="1.0" encoding="UTF-8"?>
<oem id="CCSDS_OEM_VERS" version="3.0"><header><COMMENT>a comment &amp; more</COMMENT><CREATION_DATE>2026-01-01T00:00:00</CREATION_DATE><ORIGINATOR>INVENTED</ORIGINATOR></header>
<body><segment><metadata>${XML_META}</metadata><data><COMMENT>of the data</COMMENT>
${ROWS.map((row) => xmlRow(row)).join('\n')}
</data></segment></body></oem>
`;

describe('orbit ephemeris message, XML', () => {
  it('reads what the same message says in keyword = value', () => {
    const plain = kvn(`${HEADER}${META}${ROWS.join('\n')}\n`);
    const message = xml(XML);
    expect(message.segments[0].states).toEqual(plain.segments[0].states);
    expect(message.segments[0].epochsTdbS).toEqual(plain.segments[0].epochsTdbS);
    expect(message).toMatchObject({
      format: 'oem-xml',
      version: '3.0',
      originator: 'INVENTED',
      comments: ['a comment & more'],
    });
    expect(message.segments[0].metadata.comments).toEqual(['of the data']);
  });

  it('reads a message inside an ndm, and one whose names carry a namespace', () => {
    const wrapped = XML.replace('<oem ', '<ndm><oem ').replace('</oem>', '</oem></ndm>');
    expect(xml(wrapped).segments[0].states).toEqual(xml(XML).segments[0].states);
    const qualified = XML.replace(/<(\/?)([A-Za-z_]+)/g, '<$1n:$2').replace(
      '<n:oem ',
      '<n:oem xmlns:n="urn:ccsds:schema:ndmxml" ',
    );
    expect(xml(qualified).segments[0].states).toEqual(xml(XML).segments[0].states);
  });

  it('checks a covariance matrix for its 21 elements', () => {
    const axes = FIELDS;
    const cells = axes.flatMap((row, i) =>
      axes.slice(0, i + 1).map((column) => `<C${row}_${column}>1</C${row}_${column}>`),
    );
    const matrix = (list: string[]): string =>
      XML.replace(
        '</data>',
        `<covarianceMatrix><EPOCH>2045-01-01T00:00:00</EPOCH>${list.join('')}</covarianceMatrix></data>`,
      );
    expect(xml(matrix(cells)).segments[0].covarianceCount).toBe(1);
    expect(() => xml(matrix(cells.slice(1)))).toThrow(/20 of its 21 elements/);
  });

  it('refuses a second message and text between the fields', () => {
    const body = XML.slice(XML.indexOf('<oem'));
    expect(() => xml(`<ndm>${body}${body}</ndm>`)).toThrow(/several messages/);
    expect(() => xml(XML.replace('</stateVector>', 'stray</stateVector>'))).toThrow(/text outside the fields/);
  });
});

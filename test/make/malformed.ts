/**
 * Writes fixtures/malformed: ephemeris files that must be refused, each with the code and line of its refusal in
 * expected.json. Run: npx tsx test/make/malformed.ts
 */
import { writeFileSync } from 'node:fs';
import { sketchFlyby } from '../../server/trajectory/index.ts';
import { unequalStates, writeSpk } from './spkWriter.ts';

const FOLDER = new URL('../../fixtures/malformed/', import.meta.url);

/** A small valid message, as lines; the first block starts on line 4. */
const GOOD = [
  'CCSDS_OEM_VERS = 2.0',
  'CREATION_DATE = 2026-01-01T00:00:00',
  'ORIGINATOR = INVENTED',
  'META_START',
  'OBJECT_NAME = INVENTED PROBE',
  'OBJECT_ID = 2040-001A',
  'CENTER_NAME = URANUS',
  'REF_FRAME = ICRF',
  'TIME_SYSTEM = TDB',
  'START_TIME = 2045-01-01T00:00:00',
  'STOP_TIME = 2045-01-01T00:40:00',
  'INTERPOLATION = HERMITE',
  'INTERPOLATION_DEGREE = 3',
  'META_STOP',
  '2045-01-01T00:00:00 100000.0 -12000.0 3000.0 1.0 10.0 0.5',
  '2045-01-01T00:10:00 100500.0 -6000.0 3300.0 0.7 10.0 0.5',
  '2045-01-01T00:20:00 100800.0 0.0 3600.0 0.3 10.0 0.5',
  '2045-01-01T00:30:00 100900.0 6000.0 3900.0 0.0 10.0 0.5',
  '2045-01-01T00:40:00 100800.0 12000.0 4200.0 -0.3 10.0 0.5',
];

type Expected = { code: string; line?: number };
const expected: Record<string, Expected> = {};

function put(name: string, content: string | Uint8Array, code: string, line?: number): void {
  writeFileSync(new URL(name, FOLDER), content);
  expected[name] = line === undefined ? { code } : { code, line };
}

/** The good message with one line (from 1) replaced; null deletes it. */
function changed(line: number, text: string | null): string {
  const lines = [...GOOD];
  if (text === null) lines.splice(line - 1, 1);
  else lines[line - 1] = text;
  return `${lines.join('\n')}\n`;
}

const COVARIANCE = ['COVARIANCE_START', 'EPOCH = 2045-01-01T00:10:00', '1.0', '0.1 1.0', '0.1 0.1 1.0'];

put('empty.oem', '', 'EPHEMERIS_UNREADABLE');
put('blank.oem', ' \n\n \n', 'EPHEMERIS_UNREADABLE');
put(
  'binary.bin',
  Uint8Array.from({ length: 600 }, (_, i) => (i * 37) & 255),
  'EPHEMERIS_UNREADABLE',
);
put('prose.txt', 'The spacecraft passes Uranus in March.\n', 'EPHEMERIS_UNREADABLE');
put('other-message.opm', 'CCSDS_OPM_VERS = 2.0\nCREATION_DATE = 2026-01-01T00:00:00\n', 'EPHEMERIS_UNREADABLE');
put('no-version.oem', changed(1, null), 'OEM_INVALID', 1);
put('unknown-version.oem', changed(1, 'CCSDS_OEM_VERS = 7.0'), 'OEM_INVALID', 1);
put('no-originator.oem', changed(3, null), 'OEM_INVALID', 3);
put('no-frame.oem', changed(8, null), 'OEM_INVALID', 13);
put('rotating-frame.oem', changed(8, 'REF_FRAME = ITRF2000'), 'FRAME_REFUSED', 8);
put('frame-of-date.oem', changed(8, 'REF_FRAME = TOD'), 'FRAME_REFUSED', 8);
put('mission-clock.oem', changed(9, 'TIME_SYSTEM = MET'), 'TIME_SYSTEM_REFUSED', 9);
put('earth-rotation-time.oem', changed(9, 'TIME_SYSTEM = UT1'), 'TIME_SYSTEM_REFUSED', 9);
put('centre-sun.oem', changed(7, 'CENTER_NAME = SUN'), 'CENTER_REFUSED', 7);
put('centre-jupiter.oem', changed(7, 'CENTER_NAME = JUPITER BARYCENTER'), 'CENTER_REFUSED', 7);
put('stop-after-last-state.oem', changed(11, 'STOP_TIME = 2045-01-01T01:00:00'), 'OEM_INVALID', 11);
put('state-after-stop.oem', changed(11, 'STOP_TIME = 2045-01-01T00:30:00'), 'OEM_INVALID', 19);
put('start-before-first-state.oem', changed(10, 'START_TIME = 2044-12-31T23:00:00'), 'OEM_INVALID', 10);
put('usable-outside.oem', changed(12, 'USEABLE_STOP_TIME = 2045-01-02T00:00:00'), 'OEM_INVALID', 12);
put('stop-before-start.oem', changed(11, 'STOP_TIME = 2044-01-01T00:40:00'), 'OEM_INVALID', 11);
put('date-without-t.oem', changed(10, 'START_TIME = 2045-01-01 00:00:00'), 'EPOCH_UNREADABLE', 10);
put(
  'no-leading-zero.oem',
  changed(16, '2045-1-01T00:10:00 100500.0 -6000.0 3300.0 0.7 10.0 0.5'),
  'EPOCH_UNREADABLE',
  16,
);
put(
  'thirtieth-february.oem',
  changed(16, '2045-02-30T00:10:00 100500.0 -6000.0 3300.0 0.7 10.0 0.5'),
  'EPOCH_UNREADABLE',
  16,
);
put('unsorted.oem', changed(17, '2045-01-01T00:05:00 100800.0 0.0 3600.0 0.3 10.0 0.5'), 'OEM_INVALID', 17);
put('duplicate-epoch.oem', changed(17, '2045-01-01T00:10:00 100800.0 0.0 3600.0 0.3 10.0 0.5'), 'OEM_INVALID', 17);
put('not-a-number.oem', changed(18, '2045-01-01T00:30:00 100900.0 NaN 3900.0 0.0 10.0 0.5'), 'OEM_INVALID', 18);
put('infinite.oem', changed(18, '2045-01-01T00:30:00 100900.0 1e999 3900.0 0.0 10.0 0.5'), 'OEM_INVALID', 18);
put('decimal-comma.oem', changed(18, '2045-01-01T00:30:00 100900,0 6000.0 3900.0 0.0 10.0 0.5'), 'OEM_INVALID', 18);
put('too-few-columns.oem', changed(18, '2045-01-01T00:30:00 100900.0 6000.0 3900.0'), 'OEM_INVALID', 18);
put(
  'eight-numbers.oem',
  changed(18, '2045-01-01T00:30:00 100900.0 6000.0 3900.0 0.0 10.0 0.5 0.0 0.0'),
  'OEM_INVALID',
  18,
);
put('no-meta-stop.oem', changed(14, null), 'OEM_INVALID', 14);
put('keyword-twice.oem', changed(13, 'OBJECT_ID = 2040-002B'), 'OEM_INVALID', 13);
put('unknown-keyword.oem', changed(13, 'PROPAGATOR = ANALYTIC'), 'OEM_INVALID', 13);
put('degree-without-method.oem', changed(12, null), 'OEM_INVALID', 12);
put('method-without-degree.oem', changed(13, null), 'OEM_INVALID', 12);
put('unknown-method.oem', changed(12, 'INTERPOLATION = SPLINE'), 'OEM_INVALID', 12);
put('one-state.oem', `${GOOD.slice(0, 15).join('\n')}\n`, 'OEM_INVALID', 15);
put('cut-in-metadata.oem', `${GOOD.slice(0, 9).join('\n')}\n`, 'OEM_INVALID', 9);
put('cut-in-line.oem', `${GOOD.slice(0, 17).join('\n')}\n2045-01-01T00:30:00 100900.0 60`, 'OEM_INVALID', 18);
put(
  'covariance-row-short.oem',
  `${[...GOOD, ...COVARIANCE, '0.1 0.1 0.1', '1', '1', 'COVARIANCE_STOP'].join('\n')}\n`,
  'OEM_INVALID',
  25,
);
put('covariance-open.oem', `${[...GOOD, ...COVARIANCE].join('\n')}\n`, 'OEM_INVALID', 24);
put('accented-keyword.oem', changed(13, 'INTERPOLATION_DEGRÉ = 3'), 'OEM_INVALID', 13);
put(
  'two-objects.oem',
  `${[...GOOD, ...GOOD.slice(3).map((line) => line.replace('INVENTED PROBE', 'OTHER PROBE').replaceAll('2045', '2046'))].join('\n')}\n`,
  'OEM_INVALID',
  21,
);
put(
  'two-time-systems.oem',
  `${[...GOOD, ...GOOD.slice(3).map((line) => line.replace('= TDB', '= UTC').replaceAll('2045', '2046'))].join('\n')}\n`,
  'OEM_INVALID',
  25,
);

const XML = [
  '<?xml version="1.0" encoding="UTF-8"?>',
  '<oem id="CCSDS_OEM_VERS" version="2.0">',
  '<header><CREATION_DATE>2026-01-01T00:00:00</CREATION_DATE><ORIGINATOR>INVENTED</ORIGINATOR></header>',
  '<body><segment><metadata>',
  ...GOOD.slice(4, 13).map((line) => {
    const [key, value] = line.split(' = ');
    return `<${key}>${value}</${key}>`;
  }),
  '</metadata><data>',
  ...GOOD.slice(14).map((line) => {
    const [epoch, ...numbers] = line.split(' ');
    const names = ['X', 'Y', 'Z', 'X_DOT', 'Y_DOT', 'Z_DOT'];
    return `<stateVector><EPOCH>${epoch}</EPOCH>${names.map((n, i) => `<${n}>${numbers[i]}</${n}>`).join('')}</stateVector>`;
  }),
  '</data></segment></body></oem>',
];
const xmlWith = (line: number, edit: (text: string) => string): string =>
  `${XML.map((text, i) => (i === line - 1 ? edit(text) : text)).join('\n')}\n`;
put('not-closed.xml', `${XML.slice(0, 18).join('\n')}\n`, 'EPHEMERIS_UNREADABLE');
put(
  'entity-expansion.xml',
  `<?xml version="1.0"?>\n<!DOCTYPE oem [<!ENTITY a "aaaa"><!ENTITY b "&a;&a;">]>\n${XML.slice(1).join('\n')}`,
  'OEM_INVALID',
  2,
);
put(
  'metres.xml',
  xmlWith(16, (text) => text.replace('<X>', '<X units="m">')),
  'OEM_INVALID',
  16,
);
put(
  'missing-velocity.xml',
  xmlWith(17, (text) => text.replace(/<Y_DOT>.*<\/Y_DOT>/, '')),
  'OEM_INVALID',
  17,
);
put(
  'not-a-number.xml',
  xmlWith(18, (text) => text.replace(/<Z>.*<\/Z>/, '<Z>NaN</Z>')),
  'OEM_INVALID',
  18,
);
put(
  'unsorted.xml',
  xmlWith(17, (text) => text.replace('00:20:00', '00:05:00')),
  'OEM_INVALID',
  17,
);
put('web-page.xml', '<!DOCTYPE html>\n<html><body>Not found</body></html>\n', 'OEM_INVALID', 1);
put('other-document.xml', '<?xml version="1.0"?>\n<svg width="3"/>\n', 'OEM_INVALID', 2);

const CSV = [
  'epoch_tdb,x_km,y_km,z_km,vx_km_s,vy_km_s,vz_km_s',
  ...GOOD.slice(14).map((line) => line.replaceAll(' ', ',')),
];
const csvWith = (line: number, text: string): string =>
  `${CSV.map((old, i) => (i === line - 1 ? text : old)).join('\n')}\n`;
put('no-units.csv', csvWith(1, 'epoch,x,y,z,vx,vy,vz'), 'CSV_INVALID', 1);
put('two-x-columns.csv', `${CSV.map((line, i) => `${line},${i === 0 ? 'x_m' : '1'}`).join('\n')}\n`, 'CSV_INVALID', 1);
put('missing-cell.csv', csvWith(3, '2045-01-01T00:10:00,1.0,2.0,3.0,4.0,5.0'), 'CSV_INVALID', 3);
put('text-cell.csv', csvWith(4, '2045-01-01T00:20:00,1.0,far,3.0,4.0,5.0,6.0'), 'CSV_INVALID', 4);
put('duplicate-epoch.csv', csvWith(4, CSV[2]), 'CSV_INVALID', 4);
put('bad-epoch.csv', csvWith(4, '20:00,1.0,2.0,3.0,4.0,5.0,6.0'), 'EPOCH_UNREADABLE', 4);
put('header-only.csv', `${CSV[0]}\n`, 'CSV_INVALID', 1);
put('no-planet.csv', `${CSV.join('\n')}\n`, 'PLANET_NEEDED');

const orbit = (t: number): number[] => [100_000, 10 * t, 3000, 0, 10, 0];
const segment = {
  target: -500,
  center: 7,
  type: 13,
  startTdbS: 0,
  stopTdbS: 900,
  words: unequalStates(orbit, [0, 300, 600, 900], 1),
};
const kernel = writeSpk({ segments: [segment] });
const edited = (edit: (bytes: Uint8Array, view: DataView) => void): Uint8Array => {
  const bytes = kernel.slice();
  edit(bytes, new DataView(bytes.buffer));
  return bytes;
};
put('truncated.bsp', kernel.slice(0, kernel.length - 40), 'SPK_INVALID');
put('first-record-only.bsp', kernel.slice(0, 700), 'SPK_INVALID');
put(
  'text-transfer.bsp',
  edited((bytes) => bytes.fill(0x0a, 706, 707)),
  'SPK_INVALID',
);
put(
  'circular-summaries.bsp',
  edited((_, view) => view.setFloat64(1024, 2, true)),
  'SPK_INVALID',
);
put(
  'count-too-large.bsp',
  edited((_, view) => view.setFloat64(kernel.length - 8, 5, true)),
  'SPK_INVALID',
);
put(
  'foreign-numbers.bsp',
  edited((bytes) => bytes.set(new TextEncoder().encode('VAX-GFLT'), 88)),
  'SPK_INVALID',
);
put('interval-beyond-any-calendar.bsp', writeSpk({ segments: [{ ...segment, stopTdbS: 1e300 }] }), 'SPK_INVALID');
put('type-10.bsp', writeSpk({ segments: [{ ...segment, type: 10 }] }), 'SPK_TYPE_REFUSED');
put('rotating-frame.bsp', writeSpk({ segments: [{ ...segment, frame: 10_013 }] }), 'FRAME_REFUSED');
put('about-mars.bsp', writeSpk({ segments: [{ ...segment, center: 499 }] }), 'CENTER_REFUSED');
put('two-spacecraft.bsp', writeSpk({ segments: [segment, { ...segment, target: -501 }] }), 'TARGET_NEEDED');
put('no-spacecraft.bsp', writeSpk({ segments: [{ ...segment, target: 702 }] }), 'TARGET_NEEDED');
put('no-segments.bsp', writeSpk({ segments: [] }), 'TARGET_NEEDED');

// The unchanged files must read, or the refusals above would prove nothing.
put('good.oem', `${GOOD.join('\n')}\n`, '');
put('good.xml', `${XML.join('\n')}\n`, '');
put('good.bsp', kernel, '');
put(
  'good-sketch.oem',
  sketchFlyby({
    planet: 'neptune',
    name: 'Invented flyby',
    periapsisUtc: '2048-05-01T00:00:00',
    periapsisPlanetRadii: 1.5,
    vInfKmS: 12,
    inclinationDeg: 120,
    nodeDeg: 40,
    argumentDeg: 10,
    limitPlanetRadii: 10,
  }).oem,
  '',
);
writeFileSync(new URL('expected.json', FOLDER), `${JSON.stringify(expected, null, 2)}\n`);

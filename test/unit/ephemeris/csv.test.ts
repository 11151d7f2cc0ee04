import { describe, expect, it } from 'vitest';
import { bytesOf, type CsvColumns, type NodeEphemeris, readCsv } from '../../../server/ephemeris/index.ts';
import { parseEpoch } from '../../../server/time/index.ts';

const read = (text: string, columns?: CsvColumns, planetRadiusKm?: number): NodeEphemeris =>
  readCsv(bytesOf(new TextEncoder().encode(text)), {
    ...(columns === undefined ? {} : { columns }),
    ...(planetRadiusKm === undefined ? {} : { planetRadiusKm }),
  });

const ROWS = [
  ['2045-01-01T00:00:00', '100000', '-12000', '3000', '1', '10', '0.5'],
  ['2045-01-01T00:10:00', '100500', '-6000', '3300', '0.7', '10', '0.5'],
];
const table = (header: string, separator = ',', rows = ROWS): string =>
  `${header}\n${rows.map((row) => row.join(separator)).join('\n')}\n`;
const EXPECTED = ROWS.flatMap((row) => row.slice(1).map(Number));

describe('CSV with columns that name their units', () => {
  it.each([
    ['epochTdb,xKm,yKm,zKm,vxKmS,vyKmS,vzKmS', ','],
    ['Epoch (TDB); X [km]; Y [km]; Z [km]; VX [km/s]; VY [km/s]; VZ [km/s]', ';'],
    ['time_tdb\tx_km\ty_km\tz_km\tvx_km_s\tvy_km_s\tvz_km_s', '\t'],
    [
      '"date TDB","position x (km)","position y (km)","position z (km)","velocity x (km/s)","velocity y (km/s)","velocity z (km/s)"',
      ',',
    ],
  ])('%s', (header, separator) => {
    const [segment] = read(table(header, separator)).segments;
    expect([...segment.states]).toEqual(EXPECTED);
    expect(segment.epochsTdbS[1]).toBe(parseEpoch('2045-01-01T00:10:00', 'TDB'));
    expect(segment.metadata).toMatchObject({ centerName: '', frameName: '', timeSystem: 'TDB' });
  });

  it('reads metres, any order of columns, further columns, remarks and quoted cells', () => {
    const text = [
      '# from an invented tool',
      'note,vx_m_s,vy_m_s,vz_m_s,x_m,y_m,z_m,epoch_utc',
      '"near, very",1000,10000,500,1e8,-1.2e7,3e6,2045-01-01T00:00:00Z',
      '',
      'far,700,10000,500,1.005e8,-6e6,3.3e6,"2045-01-01T00:10:00Z"',
    ].join('\n');
    const message = read(text);
    const [segment] = message.segments;
    segment.states.forEach((value, i) => {
      expect(value).toBeCloseTo(EXPECTED[i], 9);
    });
    expect(segment.epochsTdbS[0]).toBe(parseEpoch('2045-01-01T00:00:00', 'UTC'));
    expect(message.comments).toEqual(['from an invented tool']);
  });

  it('reads seconds past J2000 and Julian dates in TDB', () => {
    const seconds = table('epoch_tdb_s,x_km,y_km,z_km,vx_km_s,vy_km_s,vz_km_s', ',', [
      ['0', ...ROWS[0].slice(1)],
      ['600', ...ROWS[1].slice(1)],
    ]);
    expect([...read(seconds).segments[0].epochsTdbS]).toEqual([0, 600]);
    const days = seconds
      .replace('epoch_tdb_s', 'jd_tdb')
      .replace('\n0,', '\n2451545.0,')
      .replace('\n600,', '\n2451545.5,');
    expect([...read(days).segments[0].epochsTdbS]).toEqual([0, 43_200]);
  });

  it('reads planet radii only when the planet is known', () => {
    const header = 'epoch_tdb,x_planet_radii,y_planet_radii,z_planet_radii,vx_km_s,vy_km_s,vz_km_s';
    expect(read(table(header), undefined, 2).segments[0].states[0]).toBe(200_000);
    expect(() => read(table(header))).toThrow(/need `planet`/);
  });

  it('refuses what it cannot tell apart', () => {
    expect(() => read(table('epoch,x_km,y_km,z_km,vx_km_s,vy_km_s,vz_km_s'))).toThrow(/epoch with its time system/);
    expect(() => read(table('epoch_tdb,x_km,y_km,z_km,vx_km_s,vy_km_s,vy_km_s'))).toThrow(/twice/);
    const two = table(
      'epoch_tdb,x_km,y_km,z_km,vx_km_s,vy_km_s,vz_km_s,epoch_utc',
      ',',
      ROWS.map((row) => [...row, row[0]]),
    );
    expect(() => read(two)).toThrow(/two columns could be the epoch/);
  });
});

const MAPPING: CsvColumns = {
  epoch: 't',
  epochFormat: 'iso',
  timeSystem: 'TT',
  position: ['a', 'b', 'c'],
  positionUnit: 'm',
  velocity: ['d', 'e', 'f'],
  velocityUnit: 'm/s',
  frame: 'ECLIPJ2000',
  center: 'URANUS BARYCENTER',
};

describe('CSV with mapped columns', () => {
  const text = table('t,a,b,c,d,e,f');

  it('takes names, units, frame and centre from the mapping', () => {
    const [segment] = read(text, MAPPING).segments;
    expect(segment.states[0]).toBeCloseTo(100, 12);
    expect(segment.states[3]).toBeCloseTo(0.001, 12);
    expect(segment.metadata).toMatchObject({ frame: 'ECLIPJ2000', centerName: 'URANUS BARYCENTER', timeSystem: 'TT' });
  });

  it.each([
    [{ epoch: 'missing' }, /not in the header line/],
    [{ epoch: 'a' }, /uses this column twice/],
    [{ timeSystem: 'UT1' }, /Earth-orientation/],
    [{ frame: 'TOD' }, /inertial frames/],
    [{ epochFormat: 'julianDate' as const }, /must be in TDB/],
  ])('refuses %o', (change, message) => {
    expect(() => read(text, { ...MAPPING, ...change })).toThrow(message);
  });
});

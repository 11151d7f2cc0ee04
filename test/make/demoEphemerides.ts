/**
 * Writes the ephemerides of the demo study: an invented mission, no real spacecraft. Run: npx tsx test/make/demoEphemerides.ts
 */
import { writeFileSync } from 'node:fs';
import { sketchFlyby, sketchOrbit } from '../../server/trajectory/index.ts';

const OUT = new URL('../../fixtures/demo/', import.meta.url);
const CREATION = '2026-01-01T00:00:00';

const flybys = [
  {
    file: 'uranus-flyby-low.oem',
    name: 'KITTIWAKE LOW',
    periapsisPlanetRadii: 1.3,
    vInfKmS: 8,
    inclinationDeg: 97,
    nodeDeg: 40,
    argumentDeg: 60,
  },
  {
    file: 'uranus-flyby-middle.oem',
    name: 'KITTIWAKE MIDDLE',
    periapsisPlanetRadii: 2.2,
    vInfKmS: 7,
    inclinationDeg: 60,
    nodeDeg: 150,
    argumentDeg: 110,
  },
  {
    file: 'uranus-flyby-high.oem',
    name: 'KITTIWAKE HIGH',
    periapsisPlanetRadii: 4.5,
    vInfKmS: 6,
    inclinationDeg: 30,
    nodeDeg: 250,
    argumentDeg: 200,
  },
] as const;

for (const { file, ...sketch } of flybys) {
  const { oem } = sketchFlyby({
    ...sketch,
    planet: 'uranus',
    periapsisUtc: '2045-06-14T09:30:00',
    creationDate: CREATION,
    limitPlanetRadii: 40,
  });
  writeFileSync(new URL(file, OUT), oem);
}

const orbit = sketchOrbit({
  planet: 'uranus',
  name: 'KITTIWAKE ORBIT',
  periapsisPlanetRadii: 1.5,
  periodDays: 15,
  inclinationDeg: 97,
  nodeDeg: 80,
  argumentDeg: 250,
  periapsisUtc: '2045-09-02T00:00:00',
  creationDate: CREATION,
});
writeFileSync(new URL('uranus-orbit.oem', OUT), orbit.oem);

const neptune = sketchFlyby({
  planet: 'neptune',
  name: 'FULMAR FLYBY',
  periapsisPlanetRadii: 1.6,
  vInfKmS: 9,
  inclinationDeg: 70,
  nodeDeg: 10,
  argumentDeg: 300,
  periapsisUtc: '2049-03-21T18:00:00',
  creationDate: CREATION,
  limitPlanetRadii: 40,
});
writeFileSync(new URL('neptune-flyby.oem', OUT), neptune.oem);

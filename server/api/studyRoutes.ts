import type { z } from 'zod';
import { AppError } from '../errors.ts';
import { checkPart, type PartInput } from '../margin/index.ts';
import { placeMassKg } from '../shielding/mass.ts';
import { describeShield, plainStack } from '../shielding/shieldPlan.ts';
import { describeStack, normaliseStack } from '../shielding/stack.ts';
import type { ShieldInput, StackInput } from '../shielding/types.ts';
import { MM_PER_MIL } from '../units.ts';
import { documentRoutes } from './documentRoutes.ts';
import { partsListRoutes } from './partsLists.ts';
import type { Route } from './routes.ts';
import { caseBody, optionBody, partBody, stackBody, studyBody } from './schemas.ts';
import { found, type Shop } from './shop.ts';

/** Studies and what they hold that is entered by hand: cases, stacks, options, parts. */
export function studyRoutes(shop: Shop): Route[] {
  const inStudy = (studyId: string) => found(shop.studies.get(studyId), 'study', studyId).id;
  return [
    ...documentRoutes({
      plural: 'studies',
      singular: 'study',
      documents: shop.studies,
      schema: studyBody,
      toBody: ({ name, ...body }) => ({ name, studyId: null, body }),
    }),
    ...documentRoutes({
      plural: 'cases',
      singular: 'case',
      documents: shop.cases,
      schema: caseBody,
      toBody: ({ name, studyId, legs }) => {
        for (const leg of legs) found(shop.trajectories.get(leg.trajectoryId), 'trajectory', leg.trajectoryId);
        return { name, studyId: inStudy(studyId), body: { legs } };
      },
    }),
    ...documentRoutes({
      plural: 'stacks',
      singular: 'stack',
      documents: shop.stacks,
      schema: stackBody,
      toBody: ({ name, studyId, ...body }) => {
        normaliseStack(body as StackInput);
        return { name, studyId: inStudy(studyId), body: body as StackInput };
      },
      shown: (document) => stackOnWire(document.body),
    }),
    ...documentRoutes({
      plural: 'options',
      singular: 'option',
      documents: shop.options,
      schema: optionBody,
      toBody: ({ name, studyId, places }) => {
        const seen = new Set<string>();
        const stored = places.map((place, index) => {
          if (seen.has(place.placeId)) {
            throw new AppError(
              'REQUEST_INVALID',
              `#/places/${index}/placeId: "${place.placeId}" stands twice in this option.`,
              [{ pointer: `#/places/${index}/placeId`, detail: 'used twice', got: place.placeId }],
            );
          }
          seen.add(place.placeId);
          if ((place.stackId === undefined) === (place.shield === undefined)) {
            throw new AppError('REQUEST_INVALID', `#/places/${index}: exactly one of stackId and shield is needed.`, [
              { pointer: `#/places/${index}`, detail: 'exactly one of stackId and shield is needed' },
            ]);
          }
          const shield: ShieldInput =
            place.shield === undefined
              ? { kind: 'stack', stack: found(shop.stacks.get(place.stackId!), 'stack', place.stackId!).body }
              : (place.shield as ShieldInput);
          plainStack(shield, `#/places/${index}/shield`);
          const enclosed = (['areaM2', 'innerBoxMm', 'innerSphereRadiusMm'] as const).filter(
            (key) => place[key] !== undefined,
          );
          if (enclosed.length > 1) {
            throw new AppError('REQUEST_INVALID', `#/places/${index}: at most one of ${enclosed.join(', ')}.`, [
              { pointer: `#/places/${index}`, detail: 'at most one size for the mass', got: enclosed.length, limit: 1 },
            ]);
          }
          const { placeId, areaM2, innerBoxMm, innerSphereRadiusMm } = place;
          return {
            placeId,
            name: place.name,
            shield,
            ...(areaM2 === undefined ? {} : { areaM2 }),
            ...(innerBoxMm === undefined ? {} : { innerBoxMm }),
            ...(innerSphereRadiusMm === undefined ? {} : { innerSphereRadiusMm }),
          };
        });
        return { name, studyId: inStudy(studyId), body: { places: stored } };
      },
      shown: (document) => {
        const places = document.body.places.map((place) => ({
          ...place,
          shieldText: describeShield(place.shield),
          massKg: placeMassKg(place),
        }));
        const massKg = places.every((place) => place.massKg !== null)
          ? places.reduce((sum, place) => sum + (place.massKg ?? 0), 0)
          : null;
        return { places, massKg };
      },
    }),
    ...documentRoutes<PartInput, z.infer<typeof partBody>>({
      plural: 'parts',
      singular: 'part',
      documents: shop.parts,
      schema: partBody,
      toBody: ({ studyId, ...part }) => {
        checkPart(part as PartInput);
        return { name: part.name, studyId: inStudy(studyId), body: part as PartInput };
      },
    }),
    ...partsListRoutes(shop),
  ];
}

/** A stack with every layer in all three units beside what was entered. */
function stackOnWire(input: StackInput): Record<string, unknown> {
  const stack = normaliseStack(input);
  return {
    arealDensityGPerCm2: stack.arealDensityGPerCm2,
    text: describeStack(stack),
    layersShown: stack.layers.map((layer) => ({
      materialId: layer.material.id,
      materialName: layer.material.name,
      thicknessMm: layer.thicknessMm,
      thicknessMil: layer.thicknessMm / MM_PER_MIL,
      arealDensityGPerCm2: layer.arealDensityGPerCm2,
    })),
  };
}

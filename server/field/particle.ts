import { PLANETS } from '../constants/planets.ts';
import { BorisStepper } from './boris.ts';
import { GuidingCentreStepper } from './guidingCentre.ts';
import { LocalField, MotionClock, type MotionRecord } from './motion.ts';
import { LIGHT_SPEED_KM_PER_S, momentumOverMc, rigidityNtRadii, SPECIES, type SpeciesId } from './species.ts';
import { OPEN_RADIUS } from './tracer.ts';
import type { FieldModel } from './types.ts';

export interface ParticleStart {
  readonly species: SpeciesId;
  readonly energyMeV: number;
  /** Guiding centre, reference radii, body-fixed. */
  readonly position: readonly [number, number, number];
  /** Local pitch angle, 0 < α < π, radian. */
  readonly pitchAngleRad: number;
  readonly gyroPhaseRad?: number;
}

export interface TraceLimits {
  readonly method?: 'boris' | 'guidingCentre';
  /** Boris: steps per local gyration at the start. Guiding centre: steps per radius of path over the local radius. */
  readonly stepsPerTurn?: number;
  /** Stop after this many steps or bounces. */
  readonly maxSteps?: number;
  readonly maxBounces?: number;
}

/** How the motion of one particle went. */
export interface ParticleMotion extends MotionRecord {
  readonly method: 'boris' | 'guidingCentre';
  /** Local at the start, s. */
  readonly gyroPeriodS: number;
  /** 'trapped': went all the way round; 'lost': met the planet or left; 'unfinished': the limits came first. */
  readonly fate: 'trapped' | 'lost' | 'unfinished';
  readonly elapsedS: number;
  /** |γ/γ₀ − 1| at the end. */
  readonly energyErrorRel: number;
}

/** Above these the particle itself is followed, below its guiding centre. */
const BORIS_FROM_MEV: Readonly<Record<SpeciesId, number>> = { proton: 1, electron: 5 };
const BORIS_STEPS_PER_TURN = 40;
const GUIDING_STEPS_PER_TURN = 40;
const MAX_STEPS = 200_000_000;

/**
 * Follows one particle in the full field until its drift has gone round once, it is lost, or a limit is met.
 *
 * @throws {TypeError} for an energy, a pitch angle or limits that make no sense
 */
export function traceParticle(model: FieldModel, start: ParticleStart, limits: TraceLimits = {}): ParticleMotion {
  if (!(start.energyMeV > 0 && start.pitchAngleRad > 0 && start.pitchAngleRad < Math.PI)) {
    throw new TypeError(`energy ${start.energyMeV} MeV or pitch angle ${start.pitchAngleRad} rad out of range`);
  }
  const method = limits.method ?? (start.energyMeV >= BORIS_FROM_MEV[start.species] ? 'boris' : 'guidingCentre');
  return method === 'boris' ? followParticle(model, start, limits) : followGuidingCentre(model, start, limits);
}

function signedRigidity(model: FieldModel, species: SpeciesId): number {
  return SPECIES[species].chargeSign * rigidityNtRadii(species, model);
}

function insideBelts(model: FieldModel): (x: number, y: number, z: number) => boolean {
  const planet = PLANETS[model.planet];
  const a = planet.equatorialRadiusKm / model.referenceRadiusKm;
  const c = planet.polarRadiusKm / model.referenceRadiusKm;
  return (x, y, z) => {
    const across = x * x + y * y;
    return across / (a * a) + (z * z) / (c * c) > 1 && across + z * z < OPEN_RADIUS * OPEN_RADIUS;
  };
}

function followParticle(model: FieldModel, start: ParticleStart, limits: TraceLimits): ParticleMotion {
  const rigidity = signedRigidity(model, start.species);
  const light = LIGHT_SPEED_KM_PER_S / model.referenceRadiusKm;
  const u = momentumOverMc(start.species, start.energyMeV);
  const gamma = Math.sqrt(1 + u * u);
  const local = new LocalField(model);
  const stepper = new BorisStepper(model, rigidity, light);
  const { position, momentum, field } = stepper;
  placeOnGyration(model, start, u, rigidity, stepper);
  const startNt = Math.hypot(...model.fieldInto(...start.position, new Float64Array(3)));
  const gyroPeriodS = (2 * Math.PI * gamma * Math.abs(rigidity)) / (startNt * light);
  const perTurn = limits.stepsPerTurn ?? BORIS_STEPS_PER_TURN;
  const dt = gyroPeriodS / perTurn;
  const clock = new MotionClock(model);
  const inside = insideBelts(model);
  const maxSteps = limits.maxSteps ?? MAX_STEPS;
  let fate: ParticleMotion['fate'] = 'unfinished';
  let steps = 0;
  while (steps < maxSteps) {
    // Readings once a gyration: fine against the bounce, and the field's derivatives cost more than a push.
    let jRate = 0;
    for (let k = 0; k < perTurn; k++) {
      const [bx, by, bz] = [momentum[0], momentum[1], momentum[2]];
      stepper.step(dt);
      // u∥ and u⊥ at the middle of the step, where the field was taken.
      const ux = 0.5 * (bx + momentum[0]);
      const uy = 0.5 * (by + momentum[1]);
      const uz = 0.5 * (bz + momentum[2]);
      const b2 = field[0] * field[0] + field[1] * field[1] + field[2] * field[2];
      const along = ux * field[0] + uy * field[1] + uz * field[2];
      const parallelSquared = (along * along) / b2;
      jRate += parallelSquared / perTurn;
      clock.accumulate((u * u - parallelSquared) / (2 * Math.sqrt(b2)), parallelSquared, dt);
    }
    steps += perTurn;
    const b2 = field[0] * field[0] + field[1] * field[1] + field[2] * field[2];
    const x = position[0] + (rigidity * (momentum[1] * field[2] - momentum[2] * field[1])) / b2;
    const y = position[1] + (rigidity * (momentum[2] * field[0] - momentum[0] * field[2])) / b2;
    const z = position[2] + (rigidity * (momentum[0] * field[1] - momentum[1] * field[0])) / b2;
    if (!inside(position[0], position[1], position[2])) {
      fate = 'lost';
      break;
    }
    local.at(x, y, z);
    if (clock.read(steps * dt, x, y, z, local.slope(), jRate)) {
      fate = 'trapped';
      break;
    }
    if (limits.maxBounces !== undefined && clock.bounces >= limits.maxBounces) break;
  }
  const end = Math.sqrt(1 + momentum[0] ** 2 + momentum[1] ** 2 + momentum[2] ** 2);
  return {
    ...clock.record(),
    method: 'boris',
    gyroPeriodS,
    fate,
    elapsedS: steps * dt,
    energyErrorRel: Math.abs(end / gamma - 1),
  };
}

/** Position and momentum of a particle whose guiding centre lies at the start point. */
function placeOnGyration(
  model: FieldModel,
  start: ParticleStart,
  u: number,
  rigidity: number,
  stepper: BorisStepper,
): void {
  const b = model.fieldInto(...start.position, new Float64Array(3));
  const magnitude = Math.hypot(b[0], b[1], b[2]);
  const [bx, by, bz] = [b[0] / magnitude, b[1] / magnitude, b[2] / magnitude];
  const away = Math.abs(bz) < 0.9 ? ([-by, bx, 0] as const) : ([0, -bz, by] as const);
  const norm = Math.hypot(...away);
  const [ex, ey, ez] = [away[0] / norm, away[1] / norm, away[2] / norm];
  const [fx, fy, fz] = [by * ez - bz * ey, bz * ex - bx * ez, bx * ey - by * ex];
  const phase = start.gyroPhaseRad ?? 0;
  const across = u * Math.sin(start.pitchAngleRad);
  const along = u * Math.cos(start.pitchAngleRad);
  const { position, momentum } = stepper;
  momentum[0] = along * bx + across * (Math.cos(phase) * ex + Math.sin(phase) * fx);
  momentum[1] = along * by + across * (Math.cos(phase) * ey + Math.sin(phase) * fy);
  momentum[2] = along * bz + across * (Math.cos(phase) * ez + Math.sin(phase) * fz);
  const reach = rigidity / magnitude;
  position[0] = start.position[0] - reach * (momentum[1] * bz - momentum[2] * by);
  position[1] = start.position[1] - reach * (momentum[2] * bx - momentum[0] * bz);
  position[2] = start.position[2] - reach * (momentum[0] * by - momentum[1] * bx);
}

function followGuidingCentre(model: FieldModel, start: ParticleStart, limits: TraceLimits): ParticleMotion {
  const rigidity = signedRigidity(model, start.species);
  const light = LIGHT_SPEED_KM_PER_S / model.referenceRadiusKm;
  const u = momentumOverMc(start.species, start.energyMeV);
  const gamma = Math.sqrt(1 + u * u);
  const local = new LocalField(model);
  local.at(...start.position);
  const startNt = local.magnitudeNt;
  const moment = (u * Math.sin(start.pitchAngleRad)) ** 2 / (2 * startNt);
  const stepper = new GuidingCentreStepper(local, moment, rigidity, light);
  const { state } = stepper;
  state.set(start.position);
  state[3] = u * Math.cos(start.pitchAngleRad);
  const pace = gamma / (u * light * (limits.stepsPerTurn ?? GUIDING_STEPS_PER_TURN));
  const clock = new MotionClock(model);
  const inside = insideBelts(model);
  const maxSteps = limits.maxSteps ?? MAX_STEPS;
  let fate: ParticleMotion['fate'] = 'unfinished';
  let time = 0;
  for (let steps = 0; steps < maxSteps; steps++) {
    const [x, y, z] = [state[0], state[1], state[2]];
    const dt = pace * Math.sqrt(x * x + y * y + z * z);
    const before = state[3];
    stepper.step(dt);
    time += dt;
    if (!inside(state[0], state[1], state[2])) {
      fate = 'lost';
      break;
    }
    // Simpson would be better than the trapezium, but J needs no more than its scatter over the drift.
    clock.accumulate(moment, 0.5 * (before * before + state[3] * state[3]), dt);
    local.at(state[0], state[1], state[2]);
    if (clock.read(time, state[0], state[1], state[2], local.slope(), state[3] * state[3])) {
      fate = 'trapped';
      break;
    }
    if (limits.maxBounces !== undefined && clock.bounces >= limits.maxBounces) break;
  }
  local.at(state[0], state[1], state[2]);
  return {
    ...clock.record(),
    method: 'guidingCentre',
    gyroPeriodS: (2 * Math.PI * gamma * Math.abs(rigidity)) / (startNt * light),
    fate,
    elapsedS: time,
    energyErrorRel: Math.abs(stepper.gammaAt(local.magnitudeNt) / gamma - 1),
  };
}

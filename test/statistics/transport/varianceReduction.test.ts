import { describe, expect, it } from 'vitest';
import { transportOf } from '../../../server/shielding/responsePlan.ts';
import { normaliseStack } from '../../../server/shielding/stack.ts';
import type { StackInput } from '../../../server/shielding/types.ts';
import type { TransportOptions } from '../../../server/transport/geometry.ts';
import { DIRECT, ELECTRON, FROM_PHOTONS, Kernel } from '../../../server/transport/kernel.ts';

/** Source: the same histories without any weight: splitting, roulette and forced events must not move a mean. */
const SIGMAS = 3.5;
/** Kerma against the electrons that photons set free: equilibrium about a target of silicon in aluminium, to this. */
const EQUILIBRIUM = 0.04;

interface Mean {
  readonly mean: number;
  readonly sigma: number;
}

function run(
  stack: StackInput,
  energyMeV: number,
  change: Partial<TransportOptions>,
  analog: boolean,
  histories: number,
) {
  const { geometry, options } = transportOf(normaliseStack(stack), 'Si', energyMeV);
  const plain = { importance: 1, forcing: 1, photonImportance: 1 };
  const kernel = new Kernel(
    analog ? { ...geometry, layers: geometry.layers.map((layer) => ({ ...layer, ...plain })) } : geometry,
    { ...options, ...change },
  );
  kernel.generator.start(7, analog ? 1 : 0, 0);
  const sums = [0, 0];
  const squares = [0, 0];
  for (let i = 0; i < histories; i++) {
    kernel.history(ELECTRON, energyMeV, Math.sqrt(kernel.generator.next()));
    [DIRECT, FROM_PHOTONS].forEach((slot, k) => {
      sums[k] += kernel.score[slot];
      squares[k] += kernel.score[slot] ** 2;
    });
  }
  return [0, 1].map(
    (k): Mean => ({
      mean: sums[k] / histories,
      sigma: Math.sqrt(Math.max(0, squares[k] / histories - (sums[k] / histories) ** 2) / histories),
    }),
  );
}

const ANALOG = { survival: 1, radiativeForcing: 1, kerma: false, stayShare: 0 };

describe('variance reduction', () => {
  it('moves no mean of an open slab: splitting, roulette, forced radiation and forced collisions against none of them', () => {
    const stack: StackInput = { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 1 }] };
    const [direct, photons] = run(stack, 1, {}, false, 30_000);
    const [directAnalog, photonsAnalog] = run(stack, 1, ANALOG, true, 60_000);
    expect(Math.abs(direct.mean - directAnalog.mean)).toBeLessThan(
      SIGMAS * Math.hypot(direct.sigma, directAnalog.sigma),
    );
    expect(Math.abs(photons.mean - photonsAnalog.mean)).toBeLessThan(
      SIGMAS * Math.hypot(photons.sigma, photonsAnalog.sigma),
    );
    // It is worth its bias-free trouble: the photon dose of fewer histories is surer.
    expect(photons.sigma / photons.mean).toBeLessThan((0.5 * photonsAnalog.sigma) / photonsAnalog.mean);
  });

  it('counts photons by kerma as their electrons do where electrons are in equilibrium', () => {
    const stack: StackInput = { geometry: 'slab', backing: 'same', layers: [{ materialId: 'Al', thicknessMm: 6 }] };
    const [, kerma] = run(stack, 1, {}, false, 20_000);
    const { geometry, options } = transportOf(normaliseStack(stack), 'Si', 1);
    expect(options.kerma).toBe(true);
    const kernel = new Kernel(
      {
        ...geometry,
        layers: geometry.layers.map((layer, i) => ({ ...layer, forcing: i === geometry.target ? 32 : 2 })),
      },
      { ...options, kerma: false },
    );
    kernel.generator.start(7, 2, 0);
    let sum = 0;
    let square = 0;
    const histories = 200_000;
    for (let i = 0; i < histories; i++) {
      kernel.history(ELECTRON, 1, Math.sqrt(kernel.generator.next()));
      sum += kernel.score[FROM_PHOTONS];
      square += kernel.score[FROM_PHOTONS] ** 2;
    }
    const sigma = Math.sqrt(square - sum ** 2 / histories) / histories;
    expect(Math.abs(kerma.mean / (sum / histories) - 1)).toBeLessThan(
      EQUILIBRIUM + SIGMAS * Math.hypot(kerma.sigma / kerma.mean, (sigma * histories) / sum),
    );
    expect((sigma * histories) / sum).toBeLessThan(0.025);
  });
});

import type { Material } from '../matter/index.ts';

/** One layer as the histories see it. */
export interface TransportLayer {
  /** null is empty space: the cavity of a shell, right outside its ball. */
  readonly material: Material | null;
  /** Thickness: g/cm² in slabs, cm in spheres. */
  readonly thickness: number;
  /** Relative importance, a power of two: particles entering a more important layer are split, leaving it rouletted. */
  readonly importance: number;
  /** The same for photons; absent: as for electrons. */
  readonly photonImportance?: number;
  /** Photons collide this many times as often here, each collision weighing as much less; 1 is analog. */
  readonly forcing: number;
}

/**
 * Layers in the direction of growing coordinate. Slabs: depth from the outer face, entered at 0. Spheres: radius from the
 * centre, entered at the outermost radius.
 */
export interface TransportGeometry {
  readonly spherical: boolean;
  readonly layers: readonly TransportLayer[];
  /** Index of the target layer, −1 for none. */
  readonly target: number;
}

export interface TransportOptions {
  /** Secondaries below are not followed; energy is left where they would start, MeV. */
  readonly cutMeV: number;
  /** Electrons and photons below stop, MeV. */
  readonly absorbMeV: number;
  /** False: bremsstrahlung takes its energy out of the balance and is not followed. */
  readonly photons: boolean;
  /** Odds of survival of electrons whose range does not reach the target; 1 switches the roulette off. */
  readonly survival: number;
  /** Electrons radiate this many times as often, each photon weighing as much less; 1 is analog. */
  readonly radiativeForcing: number;
  /** Electrons below this share of the energy of their history stop at once where they cannot leave their layer. */
  readonly stayShare: number;
  /** Photon dose in the target by expected kerma along each flight, instead of by the electrons set free there. */
  readonly kerma: boolean;
  /** Number of equal depth bins over a slab; 0 for none. */
  readonly bins: number;
}

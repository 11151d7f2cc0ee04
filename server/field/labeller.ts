import { bLossNtAt, type LossCurve, lossCurve } from './lossCurve.ts';
import { makeLineSegment, SegmentTracer } from './tracer.ts';
import type { FieldModel, MagneticLabel, MagneticLabeller } from './types.ts';

export function makeLabel(): MagneticLabel {
  return { bNt: 0, bMinNt: 0, lShell: 0, bLossNt: 0, reason: null };
}

/**
 * Labels points by tracing the field line of each: exact to 1e-6 in L, about 10 000 points a second.
 * `reason` is 'open' where the line does not come back within 30 radii, 'loss' where the locally mirroring particle's
 * bounce path or drift shell dips into the planet, null where it is trapped.
 *
 * @param curve - B_loss(L) of this model, when it is known already: working it out takes a second
 */
export function tracedLabeller(model: FieldModel, curve: LossCurve = lossCurve(model)): MagneticLabeller {
  const tracer = new SegmentTracer(model);
  const segment = makeLineSegment();
  return {
    model,
    method: 'traced',
    labelInto(x, y, z, out) {
      tracer.segmentInto(x, y, z, 1, segment);
      out.bNt = segment.bNt;
      out.bMinNt = segment.bMinNt;
      out.lShell = segment.lShell;
      if (segment.end === 'open') {
        out.bLossNt = 0;
        out.reason = 'open';
        return out;
      }
      if (segment.end === 'singular' || Number.isNaN(segment.lShell)) {
        out.bLossNt = 0;
        out.lShell = Number.NaN;
        out.reason = 'loss';
        return out;
      }
      out.bLossNt = bLossNtAt(curve, segment.lShell);
      out.reason = segment.belowSurface || segment.bNt >= out.bLossNt ? 'loss' : null;
      return out;
    },
  };
}

import { brotliCompressSync, brotliDecompressSync, constants } from 'node:zlib';
import { sha256Hex } from '../../canonical.ts';
import type { FieldModelId } from '../types.ts';
import { type FieldMap, type FieldMapGrid, nodeCount } from './grid.ts';

/**
 * A field map on disk: the length of the header (four bytes, little-endian), the header as JSON, and a brotli stream of
 * the payload. Payload: for each of the two quantities the differences of neighbouring nodes (modulo 2¹⁶), low bytes then
 * high bytes, which compresses best; then one byte per cell; then altitude, ln L and B_loss of the loss curve as
 * little-endian doubles.
 */
export interface FieldMapHeader {
  readonly modelId: FieldModelId;
  readonly key: string;
  readonly grid: FieldMapGrid;
  readonly payloadSha256: string;
}

export function encodeFieldMap(map: FieldMap): Uint8Array {
  const count = nodeCount(map.grid);
  const { altitudeKm, lnL, bLossNt } = map.loss;
  const lossAt = 4 * count + map.cells.length;
  const payload = new Uint8Array(lossAt + 8 * (1 + 2 * lnL.length));
  for (let quantity = 0; quantity < 2; quantity++) {
    let previous = 0;
    for (let i = 0; i < count; i++) {
      const value = map.nodes[2 * i + quantity];
      const difference = (value - previous) & 0xffff;
      payload[2 * quantity * count + i] = difference & 0xff;
      payload[(2 * quantity + 1) * count + i] = difference >> 8;
      previous = value;
    }
  }
  payload.set(map.cells, 4 * count);
  const view = new DataView(payload.buffer);
  [altitudeKm, ...lnL, ...bLossNt].forEach((value, i) => {
    view.setFloat64(lossAt + 8 * i, value, true);
  });
  const header: FieldMapHeader = {
    modelId: map.modelId,
    key: map.key,
    grid: map.grid,
    payloadSha256: sha256Hex(payload),
  };
  const head = new TextEncoder().encode(JSON.stringify(header));
  const body = brotliCompressSync(payload, { params: { [constants.BROTLI_PARAM_QUALITY]: 11 } });
  const bytes = new Uint8Array(4 + head.length + body.length);
  new DataView(bytes.buffer).setUint32(0, head.length, true);
  bytes.set(head, 4);
  bytes.set(body, 4 + head.length);
  return bytes;
}

/** What a file says it holds, without unpacking it. */
export function fieldMapHeader(bytes: Uint8Array): FieldMapHeader {
  const text = new TextDecoder().decode(bytes.subarray(4, bodyStart(bytes)));
  return JSON.parse(text) as FieldMapHeader;
}

/** @throws {TypeError} when the payload is not the one that was written: a damaged table of ours is a defect */
export function decodeFieldMap(bytes: Uint8Array): FieldMap {
  const { modelId, key, grid, payloadSha256 } = fieldMapHeader(bytes);
  const payload = unpack(bytes.subarray(bodyStart(bytes)));
  const count = nodeCount(grid);
  const lossAt = 4 * count + (grid.shells - 1) * (grid.latitudes + 1) * grid.longitudes;
  if (payload.length < lossAt || sha256Hex(payload) !== payloadSha256) {
    throw new TypeError(`field map of ${modelId}: the payload does not match its header`);
  }
  const nodes = new Uint16Array(2 * count);
  for (let quantity = 0; quantity < 2; quantity++) {
    let value = 0;
    for (let i = 0; i < count; i++) {
      value = (value + payload[2 * quantity * count + i] + (payload[(2 * quantity + 1) * count + i] << 8)) & 0xffff;
      nodes[2 * i + quantity] = value;
    }
  }
  const view = new DataView(payload.buffer, payload.byteOffset + lossAt, payload.length - lossAt);
  const double = (i: number) => view.getFloat64(8 * i, true);
  const rows = (view.byteLength / 8 - 1) / 2;
  return {
    modelId,
    key,
    grid,
    nodes,
    cells: Uint8Array.from(payload.subarray(4 * count, lossAt)),
    loss: {
      altitudeKm: double(0),
      lnL: Float64Array.from({ length: rows }, (_, i) => double(1 + i)),
      bLossNt: Float64Array.from({ length: rows }, (_, i) => double(1 + rows + i)),
    },
  };
}

function bodyStart(bytes: Uint8Array): number {
  return 4 + new DataView(bytes.buffer, bytes.byteOffset).getUint32(0, true);
}

function unpack(body: Uint8Array): Uint8Array {
  try {
    return brotliDecompressSync(body);
  } catch {
    throw new TypeError('field map: the payload is not a whole brotli stream');
  }
}

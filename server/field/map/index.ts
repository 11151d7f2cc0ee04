/** Maps of magnetic coordinates: built by tracing a grid, kept in files, asked by interpolation. */
export { assembleFieldMap, type FieldMapShard, type FieldMapTask, planFieldMap, traceFieldMapShard } from './build.ts';
export { decodeFieldMap, encodeFieldMap, fieldMapHeader } from './file.ts';
export { DEFAULT_GRID, type FieldMap, type FieldMapGrid, fieldMapKey } from './grid.ts';
export { mappedLabeller } from './lookup.ts';
export { fieldLabeller, MAPPED_MODELS, shippedFieldMap } from './shipped.ts';

/** Columns of the electron and photon tables: one row an energy, all that a step needs side by side. */
export const STOPPING = 0;
export const STRAGGLING = 1;
/** Largest rate of hard events (elastic, Møller, bremsstrahlung) met within one step, per g/cm². */
export const RATE_BOUND = 2;
export const RATE_ELASTIC = 3;
export const RATE_MOLLER = 4;
export const RATE_BREMS = 5;
export const SOFT_1 = 6;
export const SOFT_2 = 7;
export const RANGE = 8;
export const ELECTRON_COLUMNS = 9;

/** Total, Compton, pair; the rest is photoelectric. */
export const PHOTON_COLUMNS = 3;

export const ELASTIC_QUANTILES = 129;
export const BREMS_QUANTILES = 257;

/**
 * Version of the physics. It is part of every content hash: raise it whenever a change moves a number, so that
 * nothing computed before is taken for something computed now.
 */
export const ENGINE_VERSION = '2';

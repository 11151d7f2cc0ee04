/**
 * Random access to the bytes of an upload, synchronous, so that readers stay pure functions of what they read.
 * The shell implements it over a file; `bytesOf` over memory.
 */
export interface ByteSource {
  readonly sizeBytes: number;
  /**
   * @returns exactly `length` bytes from `offset`, both inside the source; valid at least until the next call
   */
  read(offset: number, length: number): Uint8Array;
}

export function bytesOf(buffer: Uint8Array): ByteSource {
  return {
    sizeBytes: buffer.length,
    read(offset, length) {
      if (offset < 0 || length < 0 || offset + length > buffer.length) {
        throw new TypeError(`read(${offset}, ${length}) leaves a source of ${buffer.length} bytes`);
      }
      return buffer.subarray(offset, offset + length);
    },
  };
}

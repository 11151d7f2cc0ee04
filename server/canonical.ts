import { createHash } from 'node:crypto';
import canonicalize from 'canonicalize';

/** JSON in the canonical form of RFC 8785, the form that every content hash of ours is taken over. */
export function canonicalJson(value: unknown): string {
  const text = canonicalize(value);
  if (text === undefined) throw new TypeError('canonicalJson needs a JSON value');
  return text;
}

/** SHA-256 in lower-case hexadecimal of bytes, or of text in UTF-8. */
export function sha256Hex(data: string | Uint8Array): string {
  return createHash('sha256').update(data).digest('hex');
}

/** Content address of a plain JSON value: SHA-256 over its canonical form. */
export function contentHash(value: unknown): string {
  return sha256Hex(canonicalJson(value));
}

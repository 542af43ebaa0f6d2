import { randomBytes } from 'node:crypto';

let lastMoment = -1;
let sequence = 0;

/**
 * A new UUIDv7 (RFC 9562): 48 bits of Unix milliseconds, 12 bits that count up within a millisecond (its method 1), then
 * random bits, so that ids sort in the order in which they were made. Not a secret: tokens are made elsewhere.
 */
export function newId(now: number = Date.now()): string {
  const bytes = randomBytes(16);
  if (now === lastMoment && sequence < 0xfff) sequence += 1;
  // Begins in the lower half, to leave room to count.
  else sequence = bytes.readUInt16BE(6) & 0x7ff;
  lastMoment = now;
  bytes.writeUIntBE(now, 0, 6);
  bytes.writeUInt16BE(0x7000 | sequence, 6);
  bytes[8] = 0x80 | (bytes[8]! & 0x3f);
  const hex = bytes.toString('hex');
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-${hex.slice(12, 16)}-${hex.slice(16, 20)}-${hex.slice(20)}`;
}

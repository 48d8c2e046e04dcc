/** CRC-32 of ISO 3309, reflected polynomial 0xEDB88320, as ZIP uses it. */
const CRC_TABLE = Int32Array.from({ length: 256 }, (_, n) => {
  let c = n;
  for (let bit = 0; bit < 8; bit++) c = c & 1 ? 0xedb88320 ^ (c >>> 1) : c >>> 1;
  return c;
});

/** Checksum of bytes that arrive in pieces. */
export class Crc32 {
  #crc = 0xffffffff;

  push(bytes: Uint8Array): void {
    let crc = this.#crc;
    for (let i = 0; i < bytes.length; i++) crc = CRC_TABLE[(crc ^ bytes[i]!) & 255]! ^ (crc >>> 8);
    this.#crc = crc;
  }

  /** Of all bytes so far, 0 … 2³² − 1. */
  get value(): number {
    return (this.#crc ^ 0xffffffff) >>> 0;
  }
}

/**
 * Seeded random numbers: sfc32, a small counter-based generator of 128 bits of state (C. Doty-Humphrey, PractRand; from memory).
 * One object per run and no other state: same seed, same numbers, on any machine.
 */
export class Random {
  #a: number;
  #b: number;
  #c: number;
  #counter: number;

  /** @param seed any whole number. @param stream numbers of different streams of one seed are independent. */
  constructor(seed: number, stream = 0) {
    this.#a = seed | 0;
    this.#b = Math.floor(seed / 0x1_0000_0000) | 0;
    this.#c = stream | 0;
    this.#counter = 1;
    for (let i = 0; i < 16; i++) this.bits();
  }

  /** 32 random bits as a whole number 0 .. 2^32 - 1. */
  bits(): number {
    const sum = (((this.#a + this.#b) | 0) + this.#counter) | 0;
    this.#counter = (this.#counter + 1) | 0;
    this.#a = this.#b ^ (this.#b >>> 9);
    this.#b = (this.#c + (this.#c << 3)) | 0;
    this.#c = (this.#c << 21) | (this.#c >>> 11);
    this.#c = (this.#c + sum) | 0;
    return sum >>> 0;
  }

  /** A whole number 0 .. count - 1. The bias is below count / 2^32. */
  below(count: number): number {
    return Math.floor((this.bits() * count) / 0x1_0000_0000);
  }

  /** A number in [0, 1) with 32 bits. */
  unit(): number {
    return this.bits() / 0x1_0000_0000;
  }
}

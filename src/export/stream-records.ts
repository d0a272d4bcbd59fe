/**
 * Records of a stream file: a two-byte length that counts its own four-byte header, a type, a data type, the data; big-endian, of even
 * length (record numbers after the published description of the stream format; from memory).
 */

export const BGNLIB = 0x0102;
export const LIBNAME = 0x0206;
export const UNITS = 0x0305;
export const ENDLIB = 0x0400;
export const BGNSTR = 0x0502;
export const STRNAME = 0x0606;
export const ENDSTR = 0x0700;
export const HEADER = 0x0002;
export const BOUNDARY = 0x0800;
export const SREF = 0x0a00;
export const AREF = 0x0b00;
export const TEXT = 0x0c00;
export const LAYER = 0x0d02;
export const DATATYPE = 0x0e02;
export const XY = 0x1003;
export const ENDEL = 0x1100;
export const SNAME = 0x1206;
export const COLROW = 0x1302;
export const TEXTTYPE = 0x1602;
export const STRING = 0x1906;
export const STRANS = 0x1a01;
export const ANGLE = 0x1c05;

const LONGEST = 0xffff;

// What may stand inside what: a closing record must meet the opening one that is named here.
const closes = new Map([
  [ENDLIB, [BGNLIB]],
  [ENDSTR, [BGNSTR]],
  [ENDEL, [BOUNDARY, SREF, AREF, TEXT]],
]);
const opensInside = new Map<number, number | undefined>([
  [BGNLIB, undefined],
  [BGNSTR, BGNLIB],
  [BOUNDARY, BGNSTR],
  [SREF, BGNSTR],
  [AREF, BGNSTR],
  [TEXT, BGNSTR],
]);

/**
 * Writes records into one growing array and checks their framing on the way: begin, data, end; opening and closing records in pairs.
 * Misuse is a defect of the caller and throws a plain Error.
 */
export class StreamRecords {
  #bytes = new Uint8Array(1 << 16);
  #view = new DataView(this.#bytes.buffer);
  #length = 0;
  #start = -1;
  #type = -1;
  readonly #open: number[] = [];

  /** Starts a record; the data follow, then `end`. */
  begin(type: number): this {
    if (this.#start >= 0) throw new Error(`stream record ${hex(this.#type)} was not ended`);
    const within = this.#open.at(-1);
    if (opensInside.has(type) && opensInside.get(type) !== within)
      throw new Error(`stream record ${hex(type)} may not open inside ${hex(within ?? 0)}`);
    if (closes.has(type) && (within === undefined || !closes.get(type)?.includes(within)))
      throw new Error(`stream record ${hex(type)} closes nothing`);
    this.#start = this.#length;
    this.#type = type;
    this.#reserve(4);
    this.#view.setUint16(this.#length + 2, type);
    this.#length += 4;
    return this;
  }

  /** Ends the record: sets its length. */
  end(): this {
    const length = this.#length - this.#start;
    if (this.#start < 0) throw new Error('no stream record to end');
    if (length % 2 !== 0 || length > LONGEST) throw new Error(`stream record ${hex(this.#type)} of ${length} bytes`);
    this.#view.setUint16(this.#start, length);
    if (opensInside.has(this.#type)) this.#open.push(this.#type);
    if (closes.has(this.#type)) this.#open.pop();
    this.#start = -1;
    return this;
  }

  /** A record without data. */
  bare(type: number): this {
    return this.begin(type).end();
  }

  int16(value: number): this {
    if (!Number.isInteger(value) || value < -0x8000 || value > 0x7fff) throw new Error(`${value} is no 16-bit number`);
    this.#reserve(2);
    this.#view.setInt16(this.#length, value);
    this.#length += 2;
    return this;
  }

  /** Sixteen single bits. */
  flags(value: number): this {
    this.#reserve(2);
    this.#view.setUint16(this.#length, value);
    this.#length += 2;
    return this;
  }

  int32(value: number): this {
    if (value !== (value | 0)) throw new Error(`${value} is no 32-bit number`);
    this.#reserve(4);
    this.#view.setInt32(this.#length, value);
    this.#length += 4;
    return this;
  }

  /**
   * An eight-byte real: sign, exponent to base 16 in excess 64, 56 bits of fraction in [1/16, 1). Every double of that range is met
   * exactly: scaling by 16 only moves the exponent, and the lowest of 53 bits under a leading bit of 2^-4 or more is at least 2^-56.
   */
  real(value: number): this {
    let fraction = Math.abs(value);
    let exponent = 64;
    if (!Number.isFinite(value)) throw new Error(`${value} cannot be written as a real`);
    if (fraction === 0) exponent = 0;
    else {
      for (; fraction >= 1; fraction /= 16) exponent++;
      for (; fraction < 1 / 16; fraction *= 16) exponent--;
    }
    if (exponent < 0 || exponent > 127) throw new Error(`${value} cannot be written as a real`);
    const high = Math.floor(fraction * 0x100_0000);
    const low = (fraction * 0x100_0000 - high) * 0x1_0000_0000;
    this.#reserve(8);
    this.#view.setUint32(this.#length, ((value < 0 ? 0x80 : 0) + exponent) * 0x100_0000 + high);
    this.#view.setUint32(this.#length + 4, low);
    this.#length += 8;
    return this;
  }

  /** Printable ASCII, one NUL added where the length is odd. */
  text(value: string): this {
    this.#reserve(value.length + 1);
    for (let i = 0; i < value.length; i++) {
      const code = value.charCodeAt(i);
      if (code < 0x20 || code > 0x7e) throw new Error(`character ${code} cannot be written`);
      this.#bytes[this.#length++] = code;
    }
    if (value.length % 2 !== 0) this.#bytes[this.#length++] = 0;
    return this;
  }

  /** All bytes written. @throws Error if a record or the library is still open. */
  bytes(): Uint8Array {
    if (this.#start >= 0 || this.#open.length > 0) throw new Error('the stream file is not closed');
    return this.#bytes.slice(0, this.#length);
  }

  #reserve(count: number): void {
    if (this.#length + count <= this.#bytes.length) return;
    const larger = new Uint8Array(2 * this.#bytes.length + count);
    larger.set(this.#bytes.subarray(0, this.#length));
    this.#bytes = larger;
    this.#view = new DataView(larger.buffer);
  }
}

const hex = (type: number): string => type.toString(16).padStart(4, '0');

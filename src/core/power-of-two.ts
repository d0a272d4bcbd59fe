/** 2^n for any whole n, exactly: a double holds it from -1074 to 1023. */
export function powerOfTwo(n: number): number {
  let power = 1;
  for (let k = n; k > 0; k--) power *= 2;
  for (let k = n; k < 0; k++) power /= 2;
  return power;
}

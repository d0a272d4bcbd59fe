/** The slope of log y over log x by least squares: the power with which y grows. */
export function exponent(points: readonly (readonly [x: number, y: number])[]): number {
  const logs = points.map(([x, y]) => [Math.log(x), Math.log(y)] as const);
  const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  const middleX = mean(logs.map(([x]) => x));
  const middleY = mean(logs.map(([, y]) => y));
  let products = 0;
  let squares = 0;
  for (const [x, y] of logs) {
    products += (x - middleX) * (y - middleY);
    squares += (x - middleX) * (x - middleX);
  }
  return products / squares;
}

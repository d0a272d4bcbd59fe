import { expect, test } from 'vitest';
import { between, type Coupling } from '../../src/extraction/coupling.js';

const coupling: Coupling = {
  nets: ['B0', 'TOP', 'VSS'],
  pairs: [{ a: 'B0', b: 'TOP', fF: 20, error_fF: 1 }],
  wires: [],
};

test('a pair is found in either order, and nothing is nothing', () => {
  expect(between(coupling, 'B0', 'TOP')).toMatchObject({ fF: 20, error_fF: 1 });
  expect(between(coupling, 'TOP', 'B0')).toMatchObject({ fF: 20, error_fF: 1 });
  expect(between(coupling, 'B0', 'VSS')).toEqual({ fF: 0, error_fF: 0 });
});

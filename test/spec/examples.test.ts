import { Ajv2020 } from 'ajv/dist/2020.js';
import { describe, expect, it } from 'vitest';
import { formatFloorplan, formatMetrics, formatPolygons, formatTechnology } from '../../src/spec/format.js';
import { applyLayerMap } from '../../src/spec/layer-map.js';
import { parseArray } from '../../src/spec/parse-array.js';
import { parseFloorplan } from '../../src/spec/parse-floorplan.js';
import { parseLayerMap } from '../../src/spec/parse-layer-map.js';
import { parsePins } from '../../src/spec/parse-pins.js';
import { parsePolygons } from '../../src/spec/parse-polygons.js';
import { parseTechnology } from '../../src/spec/parse-technology.js';
import { schema, schemaNames } from '../../src/spec/schema.js';
import { kiln4, linesOf, sample, template, valueOf } from './kiln4.js';

const map =
  '{"format": "steelyard/layers", "version": 1, "layers": [{"name": "upper-metal", "stream": {"layer": 90, "datatype": 1}}]}';
const files = {
  array: kiln4('kiln4.array.json'),
  floorplan: kiln4('kiln4.floorplan.json'),
  polygons: kiln4('kiln4.polygons.json'),
  metrics: kiln4('kiln4.metrics.json'),
  technology: kiln4('parallel-plate.technology.json'),
  layers: map,
  converter: '{"format": "steelyard/converter", "version": 1, "bits": 12, "fullScale_Vpp": 1, "switching": "vcmBased"}',
  pins: '{"format": "steelyard/pins", "version": 1, "pins": [{"pin": "B0", "name": "dac_d[0]"}]}',
};

describe('files drawn by other code', () => {
  it('are read without a problem', () => {
    expect(linesOf(parseArray(files.array, 'a'))).toEqual([]);
    expect(linesOf(parseFloorplan(files.floorplan, 'f'))).toEqual([]);
    expect(linesOf(parsePolygons(files.polygons, 'p'))).toEqual([]);
    expect(linesOf(parseTechnology(files.technology, 't'))).toEqual([]);
    expect(linesOf(parseLayerMap(files.layers, 'l'))).toEqual([]);
    expect(linesOf(parsePins(files.pins, 'n', ['B0', 'B1', 'TOP']))).toEqual([]);
  });

  it('are read to the value that JSON.parse gives, a byte-order mark or not', () => {
    expect(parsePolygons(`\ufeff${files.polygons}`, 'p')).toEqual({ ok: true, value: JSON.parse(files.polygons) });
  });

  it('are written byte for byte as they were', () => {
    expect(formatFloorplan(valueOf(parseFloorplan(files.floorplan, 'f')))).toBe(files.floorplan);
    expect(formatPolygons(valueOf(parsePolygons(files.polygons, 'p')))).toBe(files.polygons);
    expect(formatTechnology(valueOf(parseTechnology(files.technology, 't')))).toBe(files.technology);
    expect(formatMetrics(JSON.parse(files.metrics))).toBe(files.metrics);
  });
});

describe('schemas', () => {
  it.each(schemaNames)('%s compiles strictly, holds for its file and stands by itself', (name) => {
    const ajv = new Ajv2020({ allErrors: true, strict: true, allowUnionTypes: true });
    const text = JSON.stringify(schema(name));
    expect(text).not.toContain('$ref');
    const validate = ajv.compile(JSON.parse(text));
    validate(JSON.parse(files[name]));
    expect(validate.errors ?? []).toEqual([]);
    expect(validate({ ...JSON.parse(files[name]), $schema: 'https://example.org/x.json' })).toBe(true);
    expect(validate({ ...JSON.parse(files[name]), more: 1 })).toBe(false);
    expect(validate({ ...JSON.parse(files[name]), version: 2 })).toBe(false);
    expect(validate({ ...JSON.parse(files[name]), format: 'steelyard/other' })).toBe(false);
  });

  it('close every object but the free-form parameters of a device', () => {
    const open: string[] = [];
    const look = (part: unknown, at: string): void => {
      if (typeof part !== 'object' || part === null) return;
      const { type, additionalProperties, allOf } = part as Readonly<Record<string, unknown>>;
      // Where a key says which of several shapes an object has, each of those shapes is closed.
      const isClosed = additionalProperties === false || allOf !== undefined || at.endsWith('/if');
      if ([type].flat().includes('object') && !isClosed) open.push(at);
      for (const [key, value] of Object.entries(part)) look(value, `${at}/${key}`);
    };
    look(schema('technology'), '');
    for (const name of schemaNames.filter((n) => n !== 'technology')) look(schema(name), name);
    expect(open.filter((at) => !at.endsWith('/device/properties/parameters'))).toEqual([]);
  });

  it('take every figure of a metrics file that later versions write', () => {
    const validate = new Ajv2020({ strict: true, allowUnionTypes: true }).compile(schema('metrics'));
    const own = JSON.parse(files.metrics);
    own.gradient.own = { inl_lsb: 0.1, dnl_lsb: 0.2 };
    own.mismatch = { ...own.mismatch, inlSigma_lsb: 0.1, dnlSigma_lsb: 0.1, inlSigmaLeastSquares_lsb: 0.1 };
    own.parasitic = {
      inl_lsb: 0.1,
      dnl_lsb: 0.1,
      topToGround_fF: 3,
      attenuation_percent: 1,
      bits: [{ name: 'B0', topCoupling_fF: 1, load_fF: 1, elmore_ps: 1, settling_ps: 1 }],
    };
    own.total = { inl3Sigma_lsb: 0.3 };
    own.yield = { share: 0.99, low: 0.98, high: 1, samples: 100000, seed: 1 };
    expect(validate(own)).toBe(true);
  });
});

describe('what ships', () => {
  it('template and sample are read without a problem', () => {
    expect(linesOf(parseTechnology(template('parallel-plate'), 't'))).toEqual([]);
    expect(linesOf(parseArray(sample('tide-gauge'), 's'))).toEqual([]);
  });

  it('the template says that it is no foundry data', () => {
    expect(valueOf(parseTechnology(template('parallel-plate'), 't')).description).toMatch(/Not foundry data/);
  });
});

describe('layer maps', () => {
  const technology = valueOf(parseTechnology(files.technology, 't'));
  const mapOf = (layers: [string, number, number][], more = {}): string =>
    JSON.stringify({
      format: 'steelyard/layers',
      version: 1,
      layers: layers.map(([name, layer, datatype]) => ({ name, stream: { layer, datatype } })),
      ...more,
    });
  const apply = (text: string) => applyLayerMap(technology, valueOf(parseLayerMap(text, 'l')));

  it('change the stream numbers of the layers and vias that they name, and nothing else', () => {
    const mapped = valueOf(
      apply(
        mapOf([
          ['upper-metal', 90, 1],
          ['plate-upper', 91, 2],
        ]),
      ),
    );
    const expected = JSON.parse(files.technology);
    expected.layers[3].stream = { layer: 90, datatype: 1 };
    expected.vias[2].stream = { layer: 91, datatype: 2 };
    expect(mapped).toEqual(expected);
  });

  it('may exchange two numbers', () => {
    expect(
      apply(
        mapOf([
          ['upper-metal', 21, 0],
          ['lower-metal', 27, 0],
        ]),
      ).ok,
    ).toBe(true);
  });

  it('name what the technology has not, with the nearest name', () => {
    expect(linesOf(apply(mapOf([['uper-metal', 90, 0]])))).toEqual([
      '/layers/0/name | "uper-metal" | "upper-metal", the nearest known layer or via',
    ]);
  });

  it('send two layers to one number only where they say so', () => {
    const shared: [string, number, number][] = [['upper-metal', 21, 0]];
    expect(linesOf(apply(mapOf(shared)))).toEqual([
      '/layers/0/stream | stream number 21/0 for "lower-metal" and for "upper-metal" | a stream number of its own for each, or "allowShared": true',
    ]);
    expect(apply(mapOf(shared, { allowShared: true })).ok).toBe(true);
  });

  it('name each layer once', () => {
    const twice = parseLayerMap(
      mapOf([
        ['boundary', 1, 0],
        ['boundary', 2, 0],
      ]),
      'l',
    );
    expect(linesOf(twice)).toEqual(['/layers/1/name | "boundary" once more | each layer once']);
  });
});

import { formatJson, schema, schemaNames } from '../index.js';
import { UsageError, exit, shown } from './fault.js';
import type { Io } from './io.js';
import { technologyNamed, templateNames, templateText } from './technology.js';

/** `schema [NAME]`: one schema, or the names. */
export async function printSchema(io: Io, name: string | undefined): Promise<number> {
  const known = schemaNames.find((candidate) => candidate === name);
  if (name !== undefined && known === undefined) {
    throw new UsageError([`schema: found ${shown(JSON.stringify(name))}; wanted one of ${schemaNames.join(', ')}`]);
  }
  await io.stdout(known === undefined ? schemaNames.map((each) => `${each}\n`).join('') : formatJson(schema(known)));
  return exit.done;
}

/** `technology [NAME]`: one template's file as it is, or one line on each. */
export async function printTechnology(io: Io, name: string | undefined): Promise<number> {
  const names = await templateNames(io);
  if (name === undefined) {
    const width = Math.max(...names.map(({ length }) => length));
    for (const each of names) {
      const { description } = await technologyNamed(io, each, '', { pointer: 'technology' });
      await io.stdout(`${each.padEnd(width)}  ${shown(description)}\n`);
    }
    return exit.done;
  }
  const text = await templateText(io, name);
  if (text === undefined) {
    throw new UsageError([`technology: found ${shown(JSON.stringify(name))}; wanted one of ${names.join(', ')}`]);
  }
  await io.stdout(text);
  return exit.done;
}

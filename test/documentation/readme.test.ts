import { execFileSync, spawnSync } from 'node:child_process';
import { chmodSync, existsSync, mkdirSync, readFileSync, readdirSync, symlinkSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { converterOptions, options, tableMarkdown } from '../../src/index.js';
import { buildTool, remove, root, temporaryFolder, tool } from '../cli/built-tool.js';

const readmeFile = join(root, 'README.md');
const readme = readFileSync(readmeFile, 'utf8');
const update = process.env.GOLDEN === 'update';

let folder: string;
let env: NodeJS.ProcessEnv;
beforeAll(() => {
  buildTool();
  folder = temporaryFolder();
  // `steelyard` on the path and `import 'steelyard'`, as after an installation.
  const bin = join(folder, 'bin');
  mkdirSync(bin);
  writeFileSync(join(bin, 'steelyard'), `#!/bin/sh\nexec "${process.execPath}" "${tool}" "$@"\n`);
  chmodSync(join(bin, 'steelyard'), 0o755);
  mkdirSync(join(folder, 'work', 'node_modules'), { recursive: true });
  symlinkSync(root, join(folder, 'work', 'node_modules', 'steelyard'));
  const { FORCE_COLOR: _force, ...rest } = process.env;
  env = { ...rest, PATH: `${bin}:${process.env.PATH ?? ''}` };
});
afterAll(() => {
  remove(folder);
});

/** Runs a line of a console block as a shell would show it, both outputs together. */
function shell(line: string): string {
  const { stdout } = spawnSync('sh', ['-c', `{ ${line}\n} 2>&1`], { cwd: join(folder, 'work'), env, encoding: 'utf8' });
  return stdout.trimEnd();
}

/** A console block with the output of its commands as it is now. */
function replayed(block: string): string {
  const commands = block.match(/^\$ .*(\n> .*)*$/gm) ?? [];
  return commands
    .map((command) => {
      const output = shell(command.replace(/^\$ /, '').replace(/\n> /g, '\n'));
      return output === '' ? command : `${command}\n${output}`;
    })
    .join('\n');
}

describe('README.md', () => {
  it('shows commands with the output that they have, one after another', { timeout: 300_000 }, () => {
    // Files first shown, then used: in the order of the text.
    const pieces = /<!-- file: (\S+) -->\n\n```\w+\n([\s\S]*?)\n```|```console\n([\s\S]*?)\n```/g;
    const played = readme.replace(pieces, (piece: string, file?: string, content?: string, block?: string) => {
      if (file !== undefined) {
        const path = join(folder, 'work', file);
        mkdirSync(dirname(path), { recursive: true });
        writeFileSync(path, `${content ?? ''}\n`);
        return piece;
      }
      return `\`\`\`console\n${replayed(block ?? '')}\n\`\`\``;
    });
    if (update) writeFileSync(readmeFile, played);
    else expect(played).toBe(readme);
    expect(played.match(/```console\n\$ /g)?.length).toBeGreaterThan(4);
  });

  it.each([
    ['options', options],
    ['converter options', converterOptions],
  ])('has the table of %s as the tool has it', (name, table) => {
    const part = new RegExp(`(<!-- ${name} -->\\n\\n)[\\s\\S]*?(\\n<!-- end of ${name} -->)`);
    const text = readFileSync(readmeFile, 'utf8');
    const now = text.replace(part, (_, start: string, end: string) => start + tableMarkdown(table) + end);
    if (update) writeFileSync(readmeFile, now);
    else expect(text).toBe(now);
    expect(text).toMatch(part);
  });

  it('names npm scripts that exist', () => {
    const { scripts } = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8')) as { scripts: object };
    for (const file of ['README.md', 'DEVELOPERS.md']) {
      const text = readFileSync(join(root, file), 'utf8');
      const names = [...text.matchAll(/npm (?:run )?(start|test|(?<=run )[a-z]+)/g)].map(([, name]) => name);
      expect(names.length).toBeGreaterThan(0);
      for (const name of names) expect(scripts).toHaveProperty([name ?? '']);
    }
  });

  it.each(['README.md', 'DEVELOPERS.md'])('%s links to files that exist', (file) => {
    const text = readFileSync(join(root, file), 'utf8');
    const links = [...text.matchAll(/\]\(([^)#:]+)\)/g)].map(([, link]) => link ?? '');
    for (const link of links) expect([link, existsSync(join(root, link))]).toEqual([link, true]);
  });
});

describe('DEVELOPERS.md', () => {
  const developers = readFileSync(join(root, 'DEVELOPERS.md'), 'utf8');

  it('has every room on its map', () => {
    const rooms = readdirSync(join(root, 'src'), { withFileTypes: true });
    for (const room of rooms) expect(developers).toContain(`\`${room.name}${room.isDirectory() ? '/' : ''}\``);
  });

  it('names files that exist', () => {
    const names = [...developers.matchAll(/`((?:src|test|templates|samples|\.ci)\/[\w./-]*)`/g)].map(
      ([, name]) => name ?? '',
    );
    expect(names.length).toBeGreaterThan(10);
    for (const name of names.filter((each) => !each.includes('NAME')))
      expect([name, existsSync(join(root, name))]).toEqual([name, true]);
  });
});

describe('the pictures beside the samples', () => {
  it('are those that place draws', { timeout: 120_000 }, () => {
    const pictures = readdirSync(join(root, 'samples')).filter((name) => name.endsWith('.svg'));
    expect(pictures).toContain('tide-gauge.hookup.svg');
    for (const picture of pictures) {
      const [sample = '', kind = ''] = picture.split('.');
      const array = join(root, 'samples', `${sample}.array.json`);
      const { name } = JSON.parse(readFileSync(array, 'utf8')) as { name: string };
      const out = join(folder, sample);
      execFileSync(process.execPath, [tool, 'place', array, '--out', out], { stdio: 'ignore' });
      const drawn = readFileSync(join(out, `${name}.${kind}.svg`), 'utf8');
      if (update) writeFileSync(join(root, 'samples', picture), drawn);
      else expect(readFileSync(join(root, 'samples', picture), 'utf8')).toBe(drawn);
    }
  });
});

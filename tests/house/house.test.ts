import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { root } from '../../scripts/lib.mjs';
import { deadFiles } from './dead-files';
import { unexplainedDependencies } from './dependencies';
import { belowLeast } from './lock-file';
import { impurities } from './purity';
import { remoteUrls } from './remote-urls';
import { undocumentedScripts } from './scripts';
import { readTree, treeOf } from './tree';

const house = readTree();

describe('the core is pure', () => {
  it('in this house', () => {
    expect(impurities(house)).toEqual([]);
  });

  it.each([
    ['const now = Date.now();', 'a clock (Date.now)'],
    ['const now = new Date();', 'a clock (new Date)'],
    ['const startMs = performance.now();', 'a clock (performance)'],
    ['const x = Math.random();', 'dice (Math.random)'],
    ["import { readFileSync } from 'node:fs';", 'imports node:fs'],
    ["import { scaleLinear } from 'd3';", 'imports d3'],
    ["import * as z from 'zod';", 'imports zod'],
    ["const z = await import('zod');", 'imports zod'],
    ["import {\n  a,\n  b,\n} from 'd3';", 'imports d3'],
    ["export * from '#schema/schema';", 'imports #schema/schema'],
  ])('and %j is caught', (text, fault) => {
    const faults = impurities(treeOf({ 'shared/time/x.ts': text }));
    expect(faults).toHaveLength(1);
    expect(faults[0]).toContain(fault);
  });

  it('and zod in the contract, test tools in a spec and a clock in a comment are not', () => {
    const files = {
      'shared/contract/x.ts': "import * as z from 'zod';",
      'shared/time/x.spec.ts': "import fc from 'fast-check';",
      'shared/time/x.ts': '// unlike Date.now\n/** nor new Date */',
    };
    expect(impurities(treeOf(files))).toEqual([]);
  });
});

describe('every script has its line in DEVELOPERS.md', () => {
  it('in this house', () => {
    expect(undocumentedScripts(house)).toEqual([]);
  });

  it('and a script without a line, or a line without a script, is caught', () => {
    const faults = undocumentedScripts(
      treeOf({
        'package.json': '{"scripts":{"start":"x","test:long":"y"}}',
        'DEVELOPERS.md': '| `npm start` | x |\n| `npm run gone` | x |',
      }),
    );
    expect(faults).toHaveLength(2);
    expect(faults[0]).toContain('the script test:long');
    expect(faults[1]).toContain('the script gone');
  });
});

describe('no file is dead', () => {
  it('in this house', () => {
    expect(deadFiles(house)).toEqual([]);
  });

  it('and one that only its own spec imports is caught', () => {
    const faults = deadFiles(
      treeOf({
        'shared/a.ts': '',
        'shared/a.spec.ts': "import { a } from './a';",
        'shared/b.ts': '',
        'backend/main.ts': "import { b } from '#shared/b';\nimport './c';\nconst d = () => import('./d/d');",
        'backend/c.ts': '',
        'backend/d/d.ts': "import {\n  e,\n} from '../e';",
        'backend/e.ts': '',
      }),
    );
    expect(faults).toEqual(['shared/a.ts is imported by nothing but its own spec: delete it, or import it where it is needed.']);
  });
});

describe('no package of the lock file is below its least version', () => {
  it('in this house', () => {
    expect(belowLeast(house.get('package-lock.json') ?? '')).toEqual([]);
  });

  it.each([
    ['node_modules/ws', '8.17.0', 1],
    ['node_modules/ws', '8.17.1', 0],
    ['node_modules/ws', '9.0.0', 0],
    ['node_modules/engine.io/node_modules/ws', '7.5.10', 1],
    ['node_modules/socket.io-parser', '4.2.6', 1],
    ['node_modules/body-parser', '1.20.3', 1],
    ['node_modules/path-to-regexp', '8.3.9', 1],
    ['node_modules/multer', '2.2.9', 1],
    ['node_modules/jsonwebtoken', '8.5.1', 1],
  ])('and %s %s is judged', (path, version, count) => {
    expect(belowLeast(JSON.stringify({ packages: { '': {}, [path]: { version } } }))).toHaveLength(count);
  });
});

describe('every dependency is pinned, used and explained', () => {
  it('in this house', () => {
    expect(unexplainedDependencies(house)).toEqual([]);
  });

  it.each([
    ['no reason', { dependencies: { d3: '7.9.2' } }, '', "import { line } from 'd3';", 'has no reason'],
    ['no use', { dependencies: { d3: '7.9.2' } }, '| `d3` | pictures |', '', 'is imported nowhere'],
    [
      'a use that its line denies',
      { devDependencies: { d3: '7.9.2' } },
      '| `d3` | not imported: later |',
      "import 'd3';",
      'is imported now',
    ],
    ['a range', { dependencies: { d3: '^7.9.2' } }, '| `d3` | pictures |', "import 'd3';", 'pin one exact version'],
    ['a line for what is gone', { dependencies: {} }, '| `@types/d3` | types |', '', 'which package.json lacks'],
  ])('and %s is caught', (_what, manifest, developers, source, fault) => {
    const faults = unexplainedDependencies(
      treeOf({ 'package.json': JSON.stringify(manifest), 'DEVELOPERS.md': developers, 'backend/main.ts': source }),
    );
    expect(faults).toHaveLength(1);
    expect(faults[0]).toContain(fault);
  });

  it('and a subpath, a scope and a style sheet count as use', () => {
    const files = {
      'package.json': '{"dependencies":{"drizzle-orm":"1.0.0","@angular/material":"1.0.0"}}',
      'DEVELOPERS.md': '| `drizzle-orm`       | tables |\n| `@angular/material` | parts  |',
      'backend/db.ts': "import { migrate } from 'drizzle-orm/better-sqlite3/migrator';",
      'frontend/src/_theme.scss': "@use '@angular/material' as mat;",
    };
    expect(unexplainedDependencies(treeOf(files))).toEqual([]);
  });
});

describe('the built front end asks this server alone', () => {
  it('in this house', () => {
    const built = readTree('dist/frontend/browser');
    expect([...built.keys()], 'run npm run build first').toContain('dist/frontend/browser/index.html');
    expect(remoteUrls(built)).toEqual([]);
  });

  it.each([
    ['index.html', '<link href="https://fonts.example/css">'],
    ['index.html', '<script src="//cdn.example/x.js">'],
    ['styles.css', '@import url(https://cdn.example/x.css);'],
    ['styles.css', 'src:url(//cdn.example/x.woff2)'],
    ['main.js', 'fetch("https://cdn.example/x.json")'],
  ])('and in %s %j is caught', (path, text) => {
    expect(remoteUrls(treeOf({ [path]: text }))).toHaveLength(1);
  });

  it('and a namespace is not', () => {
    expect(remoteUrls(treeOf({ 'main.js': 'createElementNS("http://www.w3.org/2000/svg", "svg")' }))).toEqual([]);
  });
});

describe('the theme', () => {
  it('has no colour that its palette left out', () => {
    const styles = [...readTree('dist/frontend/browser')].filter(([path]) => path.endsWith('.css'));
    expect(styles, 'run npm run build first').not.toEqual([]);
    for (const [path, text] of styles) expect(text, path).not.toMatch(/light-dark\(\s*,|,\s*\)/);
  });
});

describe('each room', () => {
  it.each(['shared', 'schema', 'backend', 'frontend', 'tests', 'static/fonts'])('%s says in a README what belongs there', (room) => {
    expect(readFileSync(join(root, room, 'README.md'), 'utf8').length).toBeGreaterThan(200);
  });
});

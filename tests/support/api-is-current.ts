import {spawnSync} from 'node:child_process';
import {mkdtempSync, readFileSync} from 'node:fs';
import {tmpdir} from 'node:os';
import {join} from 'node:path';

// Generates the types beside the committed ones with the very command of package.json.
const {scripts} = JSON.parse(readFileSync('package.json', 'utf8')) as {scripts: {api: string}};
const fresh = join(mkdtempSync(join(tmpdir(), 'fieldstead-api-')), 'api.gen.ts');
const [command, ...args] = scripts.api.replace('shared/api.gen.ts', fresh).split(' ');
spawnSync('npx', ['--no-install', command, ...args], {stdio: 'inherit'});
if (readFileSync(fresh, 'utf8') !== readFileSync('shared/api.gen.ts', 'utf8')) {
  process.stdout.write('shared/api.gen.ts is not what openapi.yaml says: run npm run api\n');
  process.exit(1);
}

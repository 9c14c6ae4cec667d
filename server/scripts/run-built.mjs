// Runs one of the server's small programs from what is built, building first where a source changed: `node server/scripts/run-built.mjs add-person …`.
import { spawnSync } from 'node:child_process';
import { join } from 'node:path';
import { prepare, root } from './prepare.mjs';

const [name, ...rest] = process.argv.slice(2);
prepare();
const program = spawnSync(process.execPath, ['--enable-source-maps', join(root, `dist/server/${name}.js`), ...rest], {
	cwd: root,
	stdio: 'inherit',
});
process.exit(program.status ?? 1);

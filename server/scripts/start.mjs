// `npm start`: installs and builds where needed, then runs the server until it is stopped. A stop is passed on, so that the server closes its database.
import { spawn } from 'node:child_process';
import { join } from 'node:path';
import { prepare, root } from './prepare.mjs';

prepare();
const server = spawn(process.execPath, ['--enable-source-maps', join(root, 'dist/server/main.js'), ...process.argv.slice(2)], {
	cwd: root,
	stdio: 'inherit',
});
for (const signal of ['SIGTERM', 'SIGINT', 'SIGHUP']) process.on(signal, () => server.kill(signal === 'SIGHUP' ? 'SIGTERM' : signal));
server.on('exit', (code) => process.exit(code ?? 1));

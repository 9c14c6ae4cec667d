#!/usr/bin/env node
// The command line: installs and builds where needed (all of that on standard error), then runs the command where the person stands.
import { spawn } from 'node:child_process';
import { join } from 'node:path';
import { prepare, root } from './prepare.mjs';

prepare();
// npm goes to the checkout first and says where the person stands; files are named from there.
const cwd = process.cwd() === root ? (process.env.INIT_CWD ?? root) : process.cwd();
const command = spawn(process.execPath, ['--enable-source-maps', join(root, 'dist/server/cli.js'), ...process.argv.slice(2)], {
	cwd,
	stdio: 'inherit',
});
for (const signal of ['SIGTERM', 'SIGINT']) process.on(signal, () => command.kill(signal));
command.on('exit', (code) => process.exit(code ?? 1));

// One process at a time: for what several commands, started at once, must not do together. Only what Node brings: it runs before anything is
// installed.
import { linkSync, mkdirSync, readFileSync, renameSync, rmSync, unlinkSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';

const pauseMs = 200;

/**
 * Does the work while the file `path` names this process, and answers what it answered. Waits, without an end, for another live process that
 * holds it; a holder that is no more is put aside. Blocks: its callers have nothing else to do.
 */
export function alone(path, work) {
	mkdirSync(dirname(path), { recursive: true });
	while (!take(path)) Atomics.wait(new Int32Array(new SharedArrayBuffer(4)), 0, 0, pauseMs);
	try {
		return work();
	} finally {
		rmSync(path, { force: true });
	}
}

/** The lock appears whole, its holder inside: linked from a file of one's own, which fails where it is there. */
function take(path) {
	const own = `${path}.${process.pid}`;
	writeFileSync(own, String(process.pid));
	try {
		linkSync(own, path);
		return true;
	} catch (error) {
		if (error.code !== 'EEXIST') throw error;
		putAsideDead(path);
		return false;
	} finally {
		unlinkSync(own);
	}
}

function putAsideDead(path) {
	const holder = holderOf(path);
	if (holder === null || isAlive(holder)) return;
	// Renamed first: of two that saw the dead holder only one can, and a lock taken meanwhile is given back.
	const aside = `${path}.${process.pid}.dead`;
	try {
		renameSync(path, aside);
	} catch (error) {
		if (error.code === 'ENOENT') return;
		throw error;
	}
	if (holderOf(aside) === holder) rmSync(aside, { force: true });
	else renameSync(aside, path);
}

function holderOf(path) {
	try {
		const holder = Number(readFileSync(path, 'utf8'));
		return Number.isInteger(holder) && holder > 0 ? holder : null;
	} catch (error) {
		if (error.code === 'ENOENT') return null;
		throw error;
	}
}

function isAlive(pid) {
	try {
		process.kill(pid, 0);
		return true;
	} catch (error) {
		return error.code === 'EPERM';
	}
}

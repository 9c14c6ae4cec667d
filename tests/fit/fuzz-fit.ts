/**
 * Puts hostile inputs through `fit`, one for each seed: `npx tsx tests/fit/fuzz-fit.ts FROM TO`. Goes on where it was stopped by the
 * next seed that its last line names. Ends with 1 at the first fault, naming the seed.
 */
import { tryHostile } from './hostile-input.ts';

const [from = 1, to = 10_000] = process.argv.slice(2).map(Number);
const seen = { answered: 0, refused: 0 };
// Time of the processor, since the machine may be busy with others.
let slowest = { seed: 0, ms: 0 };
for (let seed = from; seed < to; seed++) {
	const start = process.cpuUsage();
	const end = tryHostile(seed);
	const { user, system } = process.cpuUsage(start);
	const ms = Math.round((user + system) / 1000);
	if (ms > slowest.ms) slowest = { seed, ms };
	if (typeof end === 'object') {
		console.error(`seed ${seed}: ${end.fault}`);
		process.exitCode = 1;
		break;
	}
	seen[end]++;
	if ((seed + 1 - from) % 5000 === 0 || seed === to - 1) {
		console.log(JSON.stringify({ from, next: seed + 1, ...seen, slowest }));
	}
}

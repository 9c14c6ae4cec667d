// npm run bench -- [--json] [--runs N] [--n UNITS] [--growth] [--list] [workload…]
// Measures each workload in turn with its yardstick, every measurement in a fresh process, and prints the median quotient. docs/bench.md.
import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { loadavg } from 'node:os';
import { join } from 'node:path';
import { parseArgs } from 'node:util';
import { build, install, root } from '../prepare.mjs';

const { values, positionals } = parseArgs({
	allowPositionals: true,
	options: {
		json: { type: 'boolean', default: false },
		list: { type: 'boolean', default: false },
		growth: { type: 'boolean', default: false },
		runs: { type: 'string', default: '7' },
		n: { type: 'string' },
		built: { type: 'string' },
	},
});

const worker = join(values.built ?? join(root, 'dist/server'), 'measure.js');
if (values.built === undefined) {
	install();
	if (!build()) process.exit(1);
}
if (!existsSync(worker)) stop(`There is no ${worker}.`);

const { built, notBuilt } = run([]);
if (values.list) {
	if (values.json) console.log(JSON.stringify({ built: built.map(({ name }) => name), notBuilt }));
	else {
		for (const { name, goal, unit } of built) console.log(`${name.padEnd(20)} goal ≤ ${short(goal)}, n counts ${unit}`);
		for (const name of notBuilt) console.log(`${name.padEnd(20)} not built yet`);
	}
	process.exit(0);
}
const names = positionals.length > 0 ? positionals : built.map(({ name }) => name);
for (const name of names) {
	if (notBuilt.includes(name)) stop(`${name} is not built yet.`);
	if (!built.some((one) => one.name === name)) stop(`There is no workload ${name}. --list names them.`);
}
const runs = Math.max(1, Number(values.runs));
let isMissed = false;
for (const name of names) {
	const workload = built.find((one) => one.name === name);
	const quotients = [];
	const products = [];
	for (let round = 0; round < runs; round++) {
		const order = round % 2 === 0 ? ['product', 'yardstick'] : ['yardstick', 'product'];
		const [first, second] = order.map((impl) => measure(workload, impl, 1));
		const [product, yardstick] = round % 2 === 0 ? [first, second] : [second, first];
		products.push(product);
		quotients.push(perUnit(product) / perUnit(yardstick));
	}
	const quotient = median(quotients);
	const { value, within } = workload.expected;
	// A run of fewer units has another mean.
	const isRight = values.n !== undefined ? null : products.every(({ check }) => Math.abs(check - value) <= within);
	const met = quotient <= workload.goal && isRight !== false;
	if (!met) isMissed = true;
	const summary = {
		summary: name,
		runs,
		quotient,
		least: Math.min(...quotients),
		most: Math.max(...quotients),
		goal: workload.goal,
		met,
		check: isRight,
		load: loadavg()[0],
	};
	if (values.growth) summary.growth = growthOf(workload);
	print(summary);
}
process.exitCode = isMissed ? 1 : 0;

/** Cost a unit of work at three times the size over that at the plain size: the same times `growth` where it grows as it should. */
function growthOf(workload) {
	const rounds = Array.from({ length: Math.min(runs, 3) }, () => {
		const large = measure(workload, 'product', 3);
		return perUnit(large) / perUnit(measure(workload, 'product', 1)) / workload.growth;
	});
	return median(rounds);
}

function measure({ name, units }, impl, times) {
	// As much time for either, whatever n is asked for.
	const share = values.n === undefined ? 1 : Number(values.n) / units.product;
	const count = Math.max(1, Math.round((units[impl] * share) / (times === 1 ? 1 : times)));
	const measured = run([name, impl, String(count), String(times)]);
	if (times === 1) print(measured);
	return measured;
}

function run(args) {
	const { status, stdout } = spawnSync(process.execPath, [worker, ...args], {
		cwd: root,
		encoding: 'utf8',
		stdio: ['ignore', 'pipe', 'inherit'],
	});
	if (status !== 0) stop(`The measurement ${args.join(' ')} failed. See the lines above.`);
	return JSON.parse(stdout);
}

function print(line) {
	if (values.json) return console.log(JSON.stringify(line));
	if (line.summary === undefined) {
		const also = line.also ? Object.entries(line.also).map(([key, value]) => `, ${key} ${short(value)}`) : [];
		return console.log(
			`  ${line.workload} ${line.impl}: ${line.n} in ${line.seconds.toFixed(3)} s, ${line.peakRssMB.toFixed(0)} MB, check ${line.check}${also.join('')}`,
		);
	}
	const growth = line.growth === undefined ? '' : `, at three times the size ${short(line.growth)} a unit`;
	const check = line.check === false ? ', CHECK WRONG' : '';
	console.log(
		`${line.summary}: median ${short(line.quotient)} (${short(line.least)} to ${short(line.most)}), goal ≤ ${short(line.goal)}: ${line.met ? 'met' : 'missed'}${check}${growth}; load ${line.load.toFixed(1)}`,
	);
}

function perUnit({ seconds, n }) {
	return seconds / n;
}

function median(numbers) {
	const sorted = numbers.toSorted((a, b) => a - b);
	const middle = sorted.length >> 1;
	return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}

function short(number) {
	return Number.isInteger(number) ? String(number) : number.toPrecision(3);
}

function stop(sentence) {
	console.error(sentence);
	process.exit(2);
}

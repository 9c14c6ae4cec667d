import { adjustWorkloads } from './bench/adjust-workloads.ts';
import { csvWorkloads } from './bench/csv-workloads.ts';
import { fitWorkloads } from './bench/fit-workloads.ts';
import { searchWorkloads } from './bench/search-workloads.ts';
import type { Workload } from './bench/workload.ts';

/**
 * One measurement in a process of its own: `node dist/server/measure.js <workload> <product|yardstick> [units] [times]` prints one line of
 * JSON. With no argument it prints what can be measured. bench/run-bench.mjs starts it and compares.
 */

const workloads: readonly Workload[] = [...fitWorkloads, ...adjustWorkloads, ...searchWorkloads, ...csvWorkloads];

/** Named in the plan of measurements, no program of ours yet. */
const notBuilt = ['las', 'laz', 'neighbours-2000', 'ifc-index', 'ifc-faces', 'ifc-view', 'json-5000', 'frame'];

const [name, impl, units, times] = process.argv.slice(2);
if (name === undefined) {
	const built = workloads.map(({ name, unit, units, goal, growth, expected }) => ({ name, unit, units, goal, growth, expected }));
	console.log(JSON.stringify({ built, notBuilt }));
} else {
	const workload = workloads.find((one) => one.name === name);
	if (!workload || (impl !== 'product' && impl !== 'yardstick')) throw new Error(`There is no ${name} ${impl}.`);
	const program = workload[impl](Number(times ?? 1));
	const start = process.hrtime.bigint();
	const { n, check, also } = program(Number(units ?? workload.units[impl]));
	const seconds = Number(process.hrtime.bigint() - start) / 1e9;
	const peakRssMB = process.resourceUsage().maxRSS / 1024;
	const extra = impl === 'product' && also ? { also: also() } : {};
	console.log(JSON.stringify({ workload: name, impl, n, seconds, peakRssMB, check: check(), ...extra }));
}

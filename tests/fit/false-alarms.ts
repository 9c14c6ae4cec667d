/**
 * How often a clean set raises a finding: `npx tsx tests/fit/false-alarms.ts SETS [sigma|none|even] [FROM] [COUNTS]`. Sets of 4, 6, 10 and 40 pairs,
 * levelled and free; what geometry alone says (weak-geometry, far-from-targets, no-redundancy) is no alarm. One line a cell.
 * none: without σ, and heights twice as coarse as plan; even: without σ, and all axes alike, as a fit without σ takes them to be.
 */
import { computeFit } from '#shared/fit/compute-fit.ts';
import { surveyScene } from './survey-scene.ts';

const [sets = '1000', sigma = 'sigma', first = '1', counts = '4,6,10,40'] = process.argv.slice(2);
const geometry = ['weak-geometry', 'far-from-targets', 'no-redundancy'];
for (const count of counts.split(',').map(Number)) {
	for (const fit of ['levelled', 'free'] as const) {
		const codes: Record<string, number> = {};
		let alarms = 0;
		for (let k = 0; k < Number(sets); k++) {
			const { input } = surveyScene(1_000_000 + Number(first) + k, fit, count, { sigmas: sigma === 'sigma', isEven: sigma === 'even' });
			const outcome = computeFit(input);
			if (!outcome.ok) throw new Error(outcome.refusal.message);
			const raised = outcome.result.findings.filter(({ code }) => !geometry.includes(code));
			if (raised.length > 0) alarms++;
			for (const { code } of raised) codes[code] = (codes[code] ?? 0) + 1;
		}
		console.log(JSON.stringify({ count, fit, sigma, sets: Number(sets), alarms, percent: (100 * alarms) / Number(sets), codes }));
	}
}

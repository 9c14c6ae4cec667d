import { existsSync, mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { CheckInput } from '#shared/check/check-input.ts';
import { runCheck } from '#shared/check/run-check.ts';
import type { ModelReading } from '#shared/model/model-schema.ts';
import { readIfcInChild } from '../features/model/read-ifc-in-child.ts';
import { simulatedSheet, simulateSurvey } from './simulate-survey.ts';
import { addMisses, countMiss, type MissCount, noMisses, spreadOf } from './weigh-misses.ts';

/**
 * The closed loop over a folder of models: reads each as the server does, displaces its checkpoints by known amounts, observes them with known
 * noise in turned and shifted frames, checks, and prints how the misses compare with the U that was told and whether the verdicts are as planted:
 * `npx tsx server/scripts/closed-loop.ts FOLDER [NAME-PART] [SEED]`
 */

const [, , from, part = '', seed = '1'] = process.argv;
if (from === undefined) throw new Error('Name the folder of models.');

/** At most so many of a model's checkpoints, the same share of each element. */
const mostCheckpoints = 40_000;

function loop(reading: ModelReading): { all: MissCount; byKind: Map<string, MissCount>; setups: number } {
	const step = Math.ceil(reading.checkpoints.length / mostCheckpoints);
	const checkpoints = reading.checkpoints.filter((_, index) => index % step === 0);
	const { displaced, setups, points } = simulateSurvey(checkpoints, Number(seed));
	const input: CheckInput = {
		elements: reading.elements.map((element) => ({ ...element, id: String(element.entityNumber) })),
		checkpoints: checkpoints.map((checkpoint) => ({ ...checkpoint, elementId: String(checkpoint.entityNumber) })),
		setups,
		points,
		sheet: simulatedSheet,
		stage: 'as-cast',
	};
	const { deviations, derived } = runCheck(input);
	const [all, byKind] = [noMisses(), new Map<string, MissCount>()];
	deviations.forEach((deviation, index) => {
		const kind = byKind.get(deviation.characteristic) ?? noMisses();
		byKind.set(deviation.characteristic, kind);
		countMiss(kind, deviation, displaced[index]!);
	});
	for (const kind of byKind.values()) addMisses(all, kind);
	const known = new Map(checkpoints.map(({ id }, index) => [id, displaced[index]!.deviationMm]));
	const sections = noMisses();
	for (const { characteristic, deviationMm, uncertaintyMm, from: ids } of derived) {
		if (characteristic !== 'section' || uncertaintyMm === null) continue;
		const miss = (deviationMm - ids.reduce((sum, id) => sum + known.get(id)!, 0)) / (uncertaintyMm / 2);
		sections.checkpoints++;
		sections.misses++;
		sections.sum += miss;
		sections.sumOfSquares += miss * miss;
		sections.largest = Math.max(sections.largest, Math.abs(miss));
	}
	if (sections.misses > 0) byKind.set('section (two faces)', sections);
	return { all, byKind, setups: setups.length };
}

function row(name: string, count: MissCount, setups: string): string {
	const { misses, sum, largest, checkpoints, notMeasured, wrongVerdicts, onLimit, tooClose } = count;
	const share = onLimit === 0 ? '' : `${((100 * tooClose) / onLimit).toFixed(1)} % of ${onLimit}`;
	const spread = misses === 0 ? '' : `${spreadOf(count).toFixed(3)} | ${(sum / misses).toFixed(3)} | ${largest.toFixed(1)}`;
	return `| ${name} | ${setups} | ${checkpoints} | ${notMeasured} | ${spread || ' | | '} | ${wrongVerdicts} | ${share} |`;
}

if (!existsSync(from)) {
	console.log(`There is no folder ${from}: nothing was run.`);
} else {
	const folder = mkdtempSync(join(tmpdir(), 'closed-loop-'));
	const [total, kinds] = [noMisses(), new Map<string, MissCount>()];
	let files = 0;
	console.log('| file | set-ups | checkpoints | not measured | spread | mean | largest | wrong verdicts | on the limit: too close |');
	console.log('| --- | --- | --- | --- | --- | --- | --- | --- | --- |');
	for (const name of readdirSync(from).filter((file) => file.endsWith('.ifc') && file.includes(part))) {
		const outcome = await readIfcInChild({ path: join(from, name), glbPath: join(folder, 'picture.glb'), timeMs: 600_000, memoryMb: 1536 });
		if (!outcome.ok || outcome.reading.checkpoints.length === 0) {
			console.log(`| ${name} | ${outcome.ok ? 'no checkpoints' : `refused: ${outcome.code}`} | | | | | | | |`);
			continue;
		}
		const { all, byKind, setups } = loop(outcome.reading);
		files++;
		addMisses(total, all);
		for (const [kind, count] of byKind) {
			const known = kinds.get(kind) ?? noMisses();
			kinds.set(kind, known);
			addMisses(known, count);
		}
		console.log(row(name, all, String(setups)));
	}
	rmSync(folder, { recursive: true, force: true });
	for (const [kind, count] of kinds) console.log(row(`all, ${kind}`, count, ''));
	console.log(row(`all of ${files} files`, total, ''));
	const isRight = Math.abs(spreadOf(total) - 1) <= 0.05 && total.notMeasured === 0 && total.wrongVerdicts === 0;
	console.log(isRight ? '\nU is right to 5 % and no verdict is wrong.' : '\nNot as it should be.');
	process.exitCode = isRight ? 0 : 1;
}

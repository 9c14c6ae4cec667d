import { randomUUID } from 'node:crypto';
import type { Checkpoint } from '#shared/model/model-schema.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { issueSheet, sheetToIssue } from '../../server/features/tolerance/issue-sheet.ts';
import type { Member } from '../../server/platform/platform.ts';
import type { TestServer } from '../routes/harness.ts';

type Point = readonly [number, number, number];

/** How far a checkpoint is built off its place, mm: along the normal, up, or (plan) east. */
export type Off = (checkpoint: Checkpoint) => number;

const yawRad = 0.7;
const shiftM: Point = [37, -12, 1.5];

/** A design point as an instrument sees it that stands at an origin of its own, turned about the vertical. */
function surveyed([x, y, z]: Point, about: Point): string {
	const [dx, dy, dz] = [x - about[0] - shiftM[0], y - about[1] - shiftM[1], z - about[2] - shiftM[2]];
	const [cos, sin] = [Math.cos(yawRad), Math.sin(yawRad)];
	return [cos * dx + sin * dy, cos * dy - sin * dx, dz].map((value) => value.toFixed(6)).join(',');
}

/** Four marks about the checkpoints, as a control list in the design frame and as targets, with one shot of each checkpoint, by its id. */
export function asBuilt(checkpoints: readonly Checkpoint[], off: Off = () => 0): { control: string; survey: string } {
	const [first] = checkpoints;
	if (first === undefined) throw new Error('Nothing to build.');
	const about = first.place;
	const marks: [string, Point][] = [
		['T1', [about[0] - 30, about[1] - 20, about[2]]],
		['T2', [about[0] + 35, about[1] - 25, about[2] + 2]],
		['T3', [about[0] + 30, about[1] + 30, about[2] + 1]],
		['T4', [about[0] - 25, about[1] + 35, about[2] - 1]],
	];
	const control = marks.map(([name, place]) => [name, ...place.map((value) => value.toFixed(6)), 0.001, 0.001].join(','));
	const targets = marks.map(([name, place]) => `${name},${surveyed(place, about)},0.001,0.001,0.001,CP`);
	const shots = checkpoints.map((checkpoint) => {
		const [x, y, z] = checkpoint.place;
		const [nx, ny, nz] = checkpoint.direction ?? (checkpoint.characteristic === 'level' ? [0, 0, 1] : [1, 0, 0]);
		const offM = off(checkpoint) / 1000;
		return `${checkpoint.id},${surveyed([x + nx * offM, y + ny * offM, z + nz * offM], about)},0.001,0.001,0.001,`;
	});
	return {
		control: `${['name,easting,northing,height,sigma_plan,sigma_height', ...control].join('\n')}\n`,
		survey: `${['name,x,y,z,sigma_x,sigma_y,sigma_z,code', ...targets, ...shots].join('\n')}\n`,
	};
}

/** ±20 mm for all, in plan a disc of 20 mm, guarded. */
export const plainSheet: ToleranceSheet = {
	name: 'Plain sheet',
	decision: 'guarded',
	rules: [
		{ id: 'plan', match: { characteristic: 'plan' }, lowerMm: null, upperMm: 20, shape: 'disc' },
		{ id: 'rest', match: {}, lowerMm: -20, upperMm: 20 },
	],
};

/** Issues a sheet on the site, as the project engineer. */
export async function issuedSheet(server: TestServer, member: Member, sheet: ToleranceSheet = plainSheet): Promise<string> {
	const sheetId = randomUUID();
	const toIssue = await sheetToIssue(sheetId, sheet);
	await server.platform.transaction((tx) => issueSheet(tx, member, toIssue, 'For a test.', server.platform.now()));
	return sheetId;
}

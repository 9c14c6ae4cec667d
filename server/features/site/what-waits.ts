import type { Role } from '#shared/permissions.ts';
import type { Line } from '#shared/site/contract.ts';

const words: Record<Line['knots'][number]['knot'], string> = {
	model: 'model',
	control: 'control',
	surveys: 'surveys',
	check: 'check',
	flags: 'flags',
	pours: 'pours',
	records: 'records',
};

/** What each role begins with where the line is still bare. */
const first: Record<Role, string> = {
	'project-engineer': 'the model comes first, and it is yours to bring in',
	'site-engineer': 'control and surveys are yours to bring in',
	contractor: 'your pours will stand here with what is off in them',
	'owners-representative': 'pours will come to you for release',
	observer: 'you will see what was measured and what was decided',
};

/** Where the site stands, as an invited person of these roles would find it: one sentence. */
export function whatWaits(roles: readonly Role[], line: Line): string {
	const there = line.knots.filter(({ state, figure }) => state !== 'open' && figure !== '');
	if (there.length === 0) {
		const [role] = roles;
		return `Nothing is on the site yet${role === undefined ? '' : `: ${first[role]}`}.`;
	}
	return `Waiting there: ${there.map(({ knot, figure }) => `${words[knot]} ${figure}`).join(' · ')}.`;
}

import type { Role } from '#shared/permissions.ts';
import type { SitePerson } from '#shared/site/people-contract.ts';
import { isoMoment } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { roleWords } from './role-words.ts';

type Holding = SitePerson['holdings'][number];

/** People under one head: a firm, or a side of the site. */
export interface PeopleGroup {
	key: string;
	head: string;
	people: SitePerson[];
}

const leading: readonly Role[] = ['project-engineer', 'site-engineer'];

/** The owner's side, who leads the site, each firm, who looks on: each person once in each group they belong to. Pure. */
export function peopleGroups(people: readonly SitePerson[]): PeopleGroup[] {
	const groups = new Map<string, PeopleGroup>();
	const groupOf = ({ role, companyId, companyName }: Holding): Omit<PeopleGroup, 'people'> => {
		if (role === 'owners-representative') return { key: '1', head: 'The owner’s side' };
		if (leading.includes(role)) return { key: '2', head: 'Who leads the site' };
		if (role === 'contractor') return { key: `3 ${companyName} ${companyId}`, head: companyName ?? 'Contractors' };
		return { key: '4', head: 'Who looks on' };
	};
	for (const person of people) {
		for (const holding of person.holdings) {
			const { key, head } = groupOf(holding);
			const group = groups.get(key) ?? { key, head, people: [] };
			groups.set(key, group);
			const known = group.people.find(({ userId }) => userId === person.userId);
			if (known === undefined) group.people.push({ ...person, holdings: [holding] });
			else known.holdings.push(holding);
		}
	}
	return [...groups.values()].sort((one, other) => one.key.localeCompare(other.key));
}

interface PeopleListProps {
	groups: readonly PeopleGroup[];
	meId: string;
	timeZone: string;
	onEnd: (person: SitePerson, holding: Holding) => void;
}

/** The people by side and firm, with their roles and the press that ends one. */
export function PeopleList({ groups, meId, timeZone, onEnd }: PeopleListProps) {
	return groups.map((group) => (
		<section key={group.key} aria-label={group.head} className="mb-5">
			<h2 className="m-0 mb-1 text-h2 font-strong">{group.head}</h2>
			<ul className="m-0 list-none border-t border-rule p-0">
				{group.people.map((person) => (
					<li key={person.userId} className="flex flex-wrap items-center gap-x-4 border-b border-rule py-2">
						<span className="min-w-0 basis-full tablet:basis-72">
							<span className="block font-strong">
								{person.name}
								{person.userId === meId && <span className="font-normal text-second"> (you)</span>}
							</span>
							{person.email !== null && <span className="block text-second break-all">{person.email}</span>}
						</span>
						<ul className="m-0 min-w-0 flex-1 list-none p-0">
							{person.holdings.map((holding) => (
								<li key={holding.membershipId} className="flex min-h-11 flex-wrap items-center gap-x-4">
									<span className="min-w-0 flex-1">{holdingWords(holding, timeZone)}</span>
									{holding.mayEnd && (
										<Button weight="plain" onClick={() => onEnd(person, holding)}>
											{person.userId === meId ? 'Leave' : 'End role'}
											<span className="sr-only"> of {person.name}</span>
										</Button>
									)}
								</li>
							))}
						</ul>
					</li>
				))}
			</ul>
		</section>
	));
}

/** "Contractor, leads its people", "Owner’s representative in the stead of R. Amadi, until 2026-12-24 17:00". */
export function holdingWords({ role, isLead, deputyForName, fromAt, untilAt }: Holding, timeZone: string): string {
	const parts = [
		isLead ? 'leads its people' : '',
		deputyForName === null || untilAt === null
			? ''
			: `in the stead of ${deputyForName}, ${isoMoment(fromAt, timeZone)} until ${isoMoment(untilAt, timeZone)}`,
	];
	return [roleWords([role]), ...parts.filter((part) => part !== '')].join(', ');
}

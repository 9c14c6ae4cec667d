import { useSuspenseQueries } from '@tanstack/react-query';
import { useMemo, useState } from 'react';
import { Link, useParams } from 'react-router-dom';
import type { StoredElement } from '#shared/model/contract.ts';
import { mayWith } from '#shared/permissions.ts';
import { PourForm } from '#src/features/pour/pour-form.tsx';
import { pourWord } from '#src/features/pour/pour-words.ts';
import { api } from '#src/lib/api.ts';
import { counted, moment } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** What is concreted together, by whom and when. */
export default function PoursPage() {
	const { siteId = '' } = useParams();
	const [isAdding, setIsAdding] = useState(false);
	const [{ data: site }, { data: pours }, { data: models }] = useSuspenseQueries({
		queries: [
			api.site.get.queryOptions({ input: { siteId } }),
			api.pour.list.queryOptions({ input: { siteId } }),
			api.model.list.queryOptions({ input: { siteId } }),
		],
	});
	const model = models.find((candidate) => candidate.revisions.some((revision) => revision.state === 'ready'));
	const revision = model?.revisions.find(({ state }) => state === 'ready');
	const mayAdd = mayWith(site.roles, 'pour.write');
	const whyNot = !mayAdd ? 'The project engineer adds pours.' : !revision ? 'Bring the model first: a pour is made of its elements.' : null;
	const checkId = site.line.newestCheckId;
	return (
		<>
			<Strip items={[counted(pours.length, 'pour')]} />
			<Headline
				title="Pours"
				acts={
					<Button weight="act" whyNot={whyNot} onClick={() => setIsAdding(true)}>
						Add a pour
					</Button>
				}
			>
				{pours.length === 0 ? 'No pour is planned yet' : `${counted(pours.length, 'pour')}, by the hour of the concrete`}
			</Headline>
			{pours.length === 0 && (
				<Notice kind="empty" title="Elements concreted together make a pour">
					A check can then be read pour by pour, and the contractor sees its own.
				</Notice>
			)}
			<ul className="m-0 flex list-none flex-col p-0">
				{pours.map((pour) => (
					<li key={pour.pourId} className="flex flex-wrap items-center gap-x-6 gap-y-1 border-b border-hair py-3">
						<b className="min-w-44">{pour.plannedAt ? moment(pour.plannedAt, site.timeZone, new Date()) : 'not planned'}</b>
						<span className="min-w-0 flex-1 basis-64">
							<Link
								to={`/sites/${siteId}/pours/${pour.pourId}`}
								className="flex min-h-8 items-center font-strong text-ink underline-offset-3 pointer-coarse:min-h-12"
							>
								Pour {pour.number}, {pour.name}
							</Link>
							<span className="text-second">
								{pour.companyName}, {counted(pour.elementCount, 'element')}
							</span>
						</span>
						<b className="min-w-40">{pourWord(pour)}</b>
						{checkId && (
							<Link
								to={`/sites/${siteId}/checks/${checkId}?pour=${pour.pourId}`}
								className="inline-flex min-h-11 items-center text-action underline underline-offset-3"
							>
								See its check
							</Link>
						)}
					</li>
				))}
			</ul>
			{isAdding && model && revision && (
				<Dialog isOpen onClose={() => setIsAdding(false)} title="Add a pour">
					<AddPour
						siteId={siteId}
						modelId={model.modelId}
						revisionId={revision.revisionId}
						companies={site.companies}
						timeZone={site.timeZone}
						onAdded={() => setIsAdding(false)}
					/>
				</Dialog>
			)}
		</>
	);
}

interface AddPourProps {
	siteId: string;
	modelId: string;
	revisionId: string;
	companies: readonly { companyId: string; name: string }[];
	timeZone: string;
	onAdded: () => void;
}

function AddPour({ siteId, modelId, revisionId, companies, timeZone, onAdded }: AddPourProps) {
	const [{ data: elements }] = useSuspenseQueries({ queries: [api.model.elements.queryOptions({ input: { siteId, revisionId } })] });
	const kinds = useMemo(() => kindsOf(elements), [elements]);
	return <PourForm siteId={siteId} companies={companies} modelId={modelId} kinds={kinds} timeZone={timeZone} onAdded={onAdded} />;
}

function kindsOf(elements: readonly StoredElement[]) {
	const counts = new Map<string, { storey: string; class: string; elementCount: number }>();
	for (const element of elements) {
		const key = `${element.storey}\u0000${element.class}`;
		const kind = counts.get(key);
		if (kind) kind.elementCount += 1;
		else counts.set(key, { storey: element.storey, class: element.class, elementCount: 1 });
	}
	return [...counts.values()].sort((a, b) => a.storey.localeCompare(b.storey) || a.class.localeCompare(b.class));
}

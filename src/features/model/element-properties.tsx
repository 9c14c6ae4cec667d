import type { ReactNode } from 'react';
import type { StoredCheckpoint, StoredElement } from '#shared/model/contract.ts';
import { metres, moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { requirementWords } from './checkpoint-table.tsx';
import { classWords, storeyOf } from './model-place.ts';

interface ElementPropertiesProps {
	element: StoredElement;
	/** The chosen one of its checkpoints. */
	checkpoint: StoredCheckpoint | null;
	/** Why it has no checkpoint. */
	whyNone: string | undefined;
	timeZone: string;
	acts: ReactNode;
}

/** What is known of the chosen element, and of the chosen checkpoint on it. */
export function ElementProperties({ element, checkpoint, whyNone, timeZone, acts }: ElementPropertiesProps) {
	const now = useNow();
	const { length, height, thickness } = element.sizesM;
	const rows: [string, string][] = [
		['Mark', element.mark],
		['Storey, class', `${storeyOf(element)}, ${classWords(element.class)}`],
		['Name, tag in the file', [element.name, element.tag].filter(Boolean).join(', ') || '–'],
		['Length, height, thickness', `${metres(length)}, ${metres(height)}, ${metres(thickness)} m`],
		...(element.boxM === null
			? []
			: ([
					['From, m', element.boxM.min.map((part) => metres(part)).join(', ')],
					['To, m', element.boxM.max.map((part) => metres(part)).join(', ')],
				] satisfies [string, string][])),
		['GlobalId', element.globalId || 'none'],
		['Checkpoints', whyNone === undefined ? String(element.checkpointCount) : `none, because ${whyNone}`],
	];
	return (
		<section aria-label={element.title} className="sheet px-4 py-3">
			<div className="mb-2 flex flex-wrap items-start gap-2">
				<h2 className="m-0 flex-1 basis-40 text-h2 leading-snug font-strong">
					{checkpoint === null ? element.title : `${checkpoint.label} of ${element.title}`}
				</h2>
				{acts}
			</div>
			<dl className="m-0 grid grid-cols-[auto_1fr] gap-x-4 gap-y-0.5">
				{[...(checkpoint === null ? [] : checkpointRows(checkpoint, timeZone, now)), ...rows].map(([name, value]) => (
					<div key={name} className="contents">
						<dt className="text-second">{name}</dt>
						<dd className="m-0 break-words [overflow-wrap:anywhere]">{value}</dd>
					</div>
				))}
			</dl>
		</section>
	);
}

function checkpointRows(checkpoint: StoredCheckpoint, timeZone: string, now: Date): [string, string][] {
	const { mark, characteristic, place, direction, isSoffit, requirement, choice, added } = checkpoint;
	const asked =
		characteristic === 'face'
			? 'along the face’s normal'
			: characteristic === 'level'
				? isSoffit
					? 'level of a soffit'
					: 'level'
				: 'place in plan';
	return [
		['Its mark', mark],
		['Asked', asked],
		['Place, m', place.map((part) => metres(part)).join(', ')],
		...(direction === null ? [] : ([['Normal', direction.map((part) => part.toFixed(4)).join(', ')]] satisfies [string, string][])),
		[
			'For a pour',
			`${requirementWords[requirement]}${choice === null ? '' : `: ${choice.reason === null ? '' : `${choice.reason}, `}${choice.by}, ${moment(choice.at, timeZone, now)}`}`,
		],
		...(added === null
			? []
			: ([['Placed by hand', `${added.reason}, ${added.by}, ${moment(added.at, timeZone, now)}`]] satisfies [string, string][])),
	];
}

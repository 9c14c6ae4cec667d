import { nameList } from '#shared/check/name-list.ts';
import { deviationSentence } from '#shared/check/sentence.ts';
import type { ShownPour } from '#shared/record/sealed-record.ts';
import { counted } from '#src/lib/format.ts';
import { leftOutByReason, Part, Sentences } from './shown-pour.tsx';

interface ShownDigestProps {
	shown: ShownPour;
	/** Against what was signed of it last, in sentences; null: nothing was signed of it before. */
	changed: readonly string[] | null;
}

/** Before all that is signed, what one must not overlook: counts, what is off and who accepted it, what was left out, what changed since. */
export function ShownDigest({ shown, changed }: ShownDigestProps) {
	const { checkpoints, leftOut, flags, elements } = shown;
	const off = checkpoints.filter(({ verdict }) => verdict !== 'within');
	const withinCount = checkpoints.length - off.length;
	const accepted = new Map(
		flags.flatMap(({ modelId, globalId, characteristic, concession, outcome }) => [
			[
				`${modelId} ${globalId} ${characteristic}`,
				concession === null
					? outcome
					: `accepted up to ${concession.upToMm} mm by ${[concession.decidedBy, concession.consentBy].filter(Boolean).join(' and ')}`,
			],
		]),
	);
	return (
		<div className="flex flex-col gap-4 border-b-2 border-b-ink pb-5">
			<p className="m-0 text-lead font-strong">
				{counted(elements.length, 'element')}, {counted(checkpoints.length, 'point')}: {withinCount} within, {off.length} not,{' '}
				{leftOut.length} left out
			</p>
			{off.length > 0 && (
				<Part title="What is off, and who accepted it">
					<Sentences
						sentences={off.map((point) => {
							const by = accepted.get(`${point.modelId} ${point.globalId} ${point.characteristic}`);
							return `${deviationSentence(point)} ${by === undefined ? 'Nobody accepted it.' : `${by.charAt(0).toUpperCase()}${by.slice(1)}.`}`;
						})}
					/>
				</Part>
			)}
			{leftOut.length > 0 && (
				<Part title="What was left out">
					<Sentences sentences={leftOutSentences(leftOut)} />
				</Part>
			)}
			<Part title="What changed since last time">
				{changed === null ? (
					<p className="m-0">Nothing of it was signed before.</p>
				) : changed.length === 0 ? (
					<p className="m-0">Nothing.</p>
				) : (
					<Sentences sentences={changed} />
				)}
			</Part>
		</div>
	);
}

/** One sentence a reason; each place by itself stands in the whole below. */
function leftOutSentences(leftOut: ShownPour['leftOut']): string[] {
	return leftOutByReason(leftOut).map(({ reason, by, labels }) => {
		const elements = [...new Set(labels.map((label) => label.split(': ')[0] ?? label))];
		return `${counted(labels.length, 'point')} on ${nameList(elements)}. ${reason} (${by})`;
	});
}

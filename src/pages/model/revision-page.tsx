import { useSuspenseQueries } from '@tanstack/react-query';
import { useMemo } from 'react';
import { Link, useParams } from 'react-router-dom';
import { ElementTable } from '#src/features/model/element-table.tsx';
import { frameWords } from '#src/features/model/frame-words.ts';
import { api } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';
import { FindingCard } from '#src/ui/finding-card.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** What one revision holds: elements by storey, where it lies, what was found and what was left out. */
export default function RevisionPage() {
	const { siteId = '', revisionId = '' } = useParams();
	const [{ data: revision }, { data: elements }] = useSuspenseQueries({
		queries: [
			api.model.revision.queryOptions({ input: { siteId, revisionId } }),
			api.model.elements.queryOptions({ input: { siteId, revisionId } }),
		],
	});
	const { reading } = revision;
	const whyNone = useMemo(() => new Map(reading.skipped.map((skipped) => [skipped.entityNumber, skipped.why])), [reading.skipped]);
	const without = elements.filter((element) => element.checkpointCount === 0).length;
	return (
		<>
			<Strip
				items={[
					<Link key="models" to={`/sites/${siteId}/model`} className="underline underline-offset-3">
						{revision.modelName}
					</Link>,
					`revision ${revision.number}`,
					revision.fileName,
					reading.schema,
					reading.unit,
					reading.project,
				]}
			/>
			<Headline title={`${revision.modelName}, revision ${revision.number}`}>
				{without === 0
					? `All ${counted(elements.length, 'element')} have checkpoints: ${counted(revision.checkpointCount, 'place')}`
					: `${counted(elements.length - without, 'element')} have ${counted(revision.checkpointCount, 'checkpoint')}; ${without} have none`}
			</Headline>
			<p className="mt-0 max-w-[75ch]">{frameWords(reading.mapConversion)} Everything is checked in the model’s own frame.</p>
			<div className="flex flex-col gap-6">
				{reading.findings.length > 0 && (
					<section aria-label="What was found in the file" className="flex flex-col gap-3">
						{reading.findings.map((finding) => (
							<FindingCard key={finding.code + finding.message} title={finding.message} />
						))}
					</section>
				)}
				<ElementTable elements={elements} whyNone={whyNone} />
			</div>
		</>
	);
}

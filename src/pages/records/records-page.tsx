import { useSuspenseQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { HashText } from '#src/features/record/hash-text.tsx';
import { actWords, holdPointWords } from '#src/features/record/record-words.ts';
import { api, client } from '#src/lib/api.ts';
import { counted, moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { saveBlob } from '#src/lib/save-blob.ts';
import { useMay, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** What was signed on the site, the newest first, with the chain's head. */
export default function RecordsPage() {
	const { siteId, timeZone } = useSite();
	const now = useNow();
	const mayChain = useMay('record.chain');
	const { data } = useSuspenseQuery(api.record.list.queryOptions({ input: { siteId } }));
	const { records, head, length } = data;
	const save = async () => saveBlob(await client.record.chain({ siteId }), `records-1-to-${length}.json`);
	return (
		<>
			<Strip
				items={[
					counted(length, 'record'),
					head && (
						<span>
							head <HashText sha256={head} />
						</span>
					),
				]}
			/>
			<Headline
				title="Records"
				acts={
					mayChain && (
						<Button whyNot={length === 0 ? 'Nothing is signed yet.' : null} onClick={save}>
							Save the whole chain
						</Button>
					)
				}
			>
				{length === 0 ? 'Nothing is signed yet' : `${counted(length, 'record')}, none of them ever changed`}
			</Headline>
			{length === 0 ? (
				<Notice kind="empty" title="What the owner’s representative signs is kept here">
					Each record holds all that was shown, its signature, and the hash of the one before. Anybody can verify it later without this
					server.
				</Notice>
			) : (
				<p className="m-0 mb-4 max-w-[75ch] text-second">
					Keep the head: a chain that does not extend it was written anew.{' '}
					<Link to="/verify" className="text-action underline underline-offset-3">
						Verify a record
					</Link>
				</p>
			)}
			<ul className="m-0 list-none p-0">
				{records.map((record) => (
					<li key={record.recordId} className="border-b border-hair">
						<Link
							to={`/sites/${siteId}/records/${record.recordId}`}
							className="flex min-h-14 flex-wrap items-center gap-x-6 gap-y-0.5 py-2 text-ink no-underline hover:bg-hair"
						>
							<b className="w-10 shrink-0 text-right">{record.sequence}</b>
							<span className="min-w-0 flex-1 basis-64">
								<b className="block">
									{actWords(record.act)}: pour {record.pourNumber}, {record.pourName}
								</b>
								<span className="text-second">
									{holdPointWords(record.holdPoint)}
									{record.endedBy &&
										`; ${record.endedBy.act === 'withdrawn' ? 'withdrawn' : 'replaced'} by record ${record.endedBy.sequence}`}
								</span>
							</span>
							<span className="text-second">
								{record.signedBy}, {moment(record.signedAt, timeZone, now)}
							</span>
						</Link>
					</li>
				))}
			</ul>
		</>
	);
}

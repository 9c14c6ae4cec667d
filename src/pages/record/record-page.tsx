import { useSuspenseQuery } from '@tanstack/react-query';
import { useMemo } from 'react';
import { Link } from 'react-router-dom';
import { sealedRecord } from '#shared/record/sealed-record.ts';
import { HashText } from '#src/features/record/hash-text.tsx';
import { RecordView } from '#src/features/record/record-view.tsx';
import { actWords } from '#src/features/record/record-words.ts';
import { api } from '#src/lib/api.ts';
import { moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { saveBlob } from '#src/lib/save-blob.ts';
import { useAddressId, useSite } from '#src/lib/session.ts';
import { Button, ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** One record as it was signed, and the file that proves it. */
export default function RecordPage() {
	const { siteId, timeZone } = useSite();
	const recordId = useAddressId('recordId');
	const now = useNow();
	const { data: record } = useSuspenseQuery(api.record.get.queryOptions({ input: { siteId, recordId } }));
	const { body } = useMemo(() => sealedRecord.parse(JSON.parse(record.text)), [record.text]);
	const { endedBy, pourId, pourNumber, pourName, signedBy, signedAt } = record;
	// The file is the text itself: its SHA-256 is the hash that stands here.
	const save = () => saveBlob(new Blob([record.text], { type: 'application/json' }), `record-${record.sequence}-pour-${pourNumber}.json`);
	return (
		<>
			<Strip
				items={[
					`record ${record.sequence}`,
					<Link key="pour" to={`/sites/${siteId}/pours/${pourId}`} className="text-action underline underline-offset-3">
						pour {pourNumber}
					</Link>,
					<span key="key">
						key <HashText sha256={record.keySha256.slice(0, 16)} />
					</span>,
				]}
			/>
			<Headline
				title={`Record ${record.sequence}`}
				acts={
					<>
						<ButtonLink to="/verify">Verify</ButtonLink>
						<Button weight="act" onClick={save}>
							Save the record
						</Button>
					</>
				}
			>
				{`${actWords(record.act)}: pour ${pourNumber}, ${pourName}, by ${signedBy}, ${moment(signedAt, timeZone, now)}`}
			</Headline>
			{endedBy && (
				<div className="mb-4">
					<Notice
						kind="stale"
						title={
							endedBy.act === 'withdrawn' ? `Withdrawn by record ${endedBy.sequence}` : `Record ${endedBy.sequence} stands in its place`
						}
					>
						It stays as it was signed and holds no longer.
					</Notice>
				</div>
			)}
			<RecordView body={body} sha256={record.sha256} at={(iso) => moment(new Date(iso), timeZone, now)} />
		</>
	);
}

import type { RecordBody } from '#shared/record/sealed-record.ts';
import { HashText } from './hash-text.tsx';
import { actWords, holdPointWords } from './record-words.ts';
import { Part, Sentences, ShownPourView } from './shown-pour.tsx';

interface RecordViewProps {
	body: RecordBody;
	sha256: string;
	at: (iso: string) => string;
}

/** A sealed record as a person reads it. */
export function RecordView({ body, sha256, at }: RecordViewProps) {
	const about = body.act === 'withdrawn' ? body.pour : body.shown.pour;
	return (
		<article className="sheet flex flex-col gap-5 px-5 py-5">
			<header>
				<p className="m-0 text-second">
					Record {body.sequence} of {body.site.name}
					{body.site.isInvented && ', an invented site'}
				</p>
				<h2 className="m-0 text-h2 font-strong">
					{actWords(body.act)}: pour {about.number}, {about.name}, {holdPointWords(about.holdPoint)}
				</h2>
			</header>
			<blockquote className="m-0 border-l-[7px] border-l-ink pl-4 text-lead">{body.statement}</blockquote>
			<p className="m-0">
				<b>{body.signer.name}</b>, {body.signer.as.join(' and ')}
				{body.signer.deputyFor && `, deputy of ${body.signer.deputyFor}`}, {at(body.signedAt)}. Recognised by {body.signer.recognised}.
			</p>
			{body.act !== 'withdrawn' && body.conditions.length > 0 && (
				<Part title="On condition">
					<Sentences
						sentences={body.conditions.map(
							({ text, owner, dueAt, proof }) => `${text}: ${owner}${dueAt === null ? '' : `, by ${at(dueAt)}`}. Shown by: ${proof}`,
						)}
					/>
				</Part>
			)}
			{body.act !== 'withdrawn' && <ShownPourView shown={body.shown} at={at} />}
			<Part title="Seal">
				<dl className="m-0 grid gap-x-4 gap-y-1 tablet:grid-cols-[max-content_1fr]">
					<dt className="text-second">This record</dt>
					<dd className="m-0">
						<HashText sha256={sha256} />
					</dd>
					<dt className="text-second">The one before</dt>
					<dd className="m-0">{body.previous === null ? 'none: it is the first' : <HashText sha256={body.previous} />}</dd>
					{body.act === 'withdrawn' && (
						<>
							<dt className="text-second">Withdraws</dt>
							<dd className="m-0">
								<HashText sha256={body.withdraws} />
							</dd>
						</>
					)}
					{body.act !== 'withdrawn' && body.supersedes !== null && (
						<>
							<dt className="text-second">In place of</dt>
							<dd className="m-0">
								<HashText sha256={body.supersedes} />
							</dd>
						</>
					)}
					<dt className="text-second">Engine</dt>
					<dd className="m-0">{body.engineVersion}</dd>
				</dl>
			</Part>
			<p className="m-0 text-small text-second">{body.caution}</p>
		</article>
	);
}

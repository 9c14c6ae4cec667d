import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import type { PourDetail } from '#shared/pour/contract.ts';
import { api } from '#src/lib/api.ts';
import { moment } from '#src/lib/format.ts';
import { fieldMoment, siteMoment } from '#src/lib/site-moment.ts';
import { Button } from '#src/ui/button.tsx';
import { ChoiceGroup } from '#src/ui/choice.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface WitnessPointsProps {
	siteId: string;
	pour: PourDetail;
	mayGiveNotice: boolean;
	maySay: boolean;
	timeZone: string;
	now: Date;
}

type Witness = PourDetail['witnessPoints'][number];

/** What one may come and see: notice is given, whoever was told came or did not. It holds up nothing. */
export function WitnessPoints({ siteId, pour, mayGiveNotice, maySay, timeZone, now }: WitnessPointsProps) {
	const [open, setOpen] = useState<'notice' | Witness | null>(null);
	if (pour.witnessPoints.length === 0 && !mayGiveNotice) return null;
	const close = () => setOpen(null);
	return (
		<section className="sheet px-4.5 py-4" aria-labelledby="witness">
			<h2 id="witness" className="m-0 text-h2 font-strong">
				Witness points
			</h2>
			{pour.witnessPoints.length === 0 && <p className="m-0 mt-2 text-second">No notice is given.</p>}
			<ul className="m-0 list-none p-0">
				{pour.witnessPoints.map((one) => (
					<li key={one.witnessId} className="flex flex-wrap items-center gap-x-4 gap-y-1 border-b border-hair py-2">
						<span className="min-w-0 flex-1 basis-60">
							<b className="block">{one.what}</b>
							<span className="text-second">
								{moment(one.at, timeZone, now)}, notice by {one.noticeBy}
							</span>
						</span>
						{one.hasCome === null ? (
							maySay ? (
								<Button onClick={() => setOpen(one)}>Came, or did not</Button>
							) : (
								<span className="text-second">not said yet whether anybody came</span>
							)
						) : (
							<span>
								{one.hasCome ? 'Came' : 'Did not come'}, says {one.saidBy}
								{one.note !== null && `: ${one.note}`}
							</span>
						)}
					</li>
				))}
			</ul>
			{mayGiveNotice && (
				<div className="mt-3">
					<Button onClick={() => setOpen('notice')}>Give notice</Button>
				</div>
			)}
			{open === 'notice' && (
				<Dialog isOpen onClose={close} title="Notice of a witness point">
					<NoticeForm siteId={siteId} pourId={pour.pourId} timeZone={timeZone} onDone={close} />
				</Dialog>
			)}
			{open !== null && open !== 'notice' && (
				<Dialog isOpen onClose={close} title={open.what}>
					<CameForm siteId={siteId} pourId={pour.pourId} witnessId={open.witnessId} onDone={close} />
				</Dialog>
			)}
		</section>
	);
}

const noticeSchema = z.object({ what: plainText(200), at: fieldMoment });

function NoticeForm({ siteId, pourId, timeZone, onDone }: { siteId: string; pourId: string; timeZone: string; onDone: () => void }) {
	const queries = useQueryClient();
	const give = useMutation(api.pour.giveNotice.mutationOptions());
	return (
		<Form
			schema={noticeSchema}
			values={{ what: '', at: '' }}
			onSubmit={async ({ what, at }) => {
				await give.mutateAsync({ siteId, pourId, what, at: siteMoment(at, timeZone) });
				await queries.invalidateQueries({ queryKey: api.pour.key() });
				onDone();
			}}
		>
			<TextField name="what" label="What can be seen" hint="Reinforcement before closing the form" />
			<TextField name="at" type="datetime-local" label="When" hint="By the site’s clock" isMono />
			<Submit next="The engineers and the owner’s representative are told. The work goes on, whoever comes.">Give notice</Submit>
		</Form>
	);
}

const cameSchema = z.object({ note: z.union([z.literal(''), plainText(300)]) });

function CameForm({ siteId, pourId, witnessId, onDone }: { siteId: string; pourId: string; witnessId: string; onDone: () => void }) {
	const queries = useQueryClient();
	const [came, setCame] = useState<'came' | 'not' | null>(null);
	const say = useMutation(api.pour.sayWitness.mutationOptions());
	return (
		<Form
			schema={cameSchema}
			values={{ note: '' }}
			onSubmit={async ({ note }) => {
				await say.mutateAsync({ siteId, pourId, witnessId, hasCome: came === 'came', note: note === '' ? null : note });
				await queries.invalidateQueries({ queryKey: api.pour.key() });
				onDone();
			}}
		>
			<ChoiceGroup<'came' | 'not'>
				legend="Who was told"
				value={came}
				onChange={setCame}
				options={[
					{ value: 'came', label: 'Came' },
					{ value: 'not', label: 'Did not come' },
				]}
				isRow
			/>
			<TextField name="note" label="Note" hint="May stay empty" />
			<Submit whyNot={came === null ? 'Say whether anybody came.' : null} next="It is said once and stays.">
				Say so
			</Submit>
		</Form>
	);
}

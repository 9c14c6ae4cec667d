import { useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { Link, useNavigate } from 'react-router-dom';
import type { PourDetail, ShownHoldPoint } from '#shared/pour/contract.ts';
import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import { CallForm } from '#src/features/pour/call-form.tsx';
import { ConcreteForm } from '#src/features/pour/concrete-form.tsx';
import { ListForm } from '#src/features/pour/list-form.tsx';
import { holdPointName, holdPointStateWords, pointInHand, pourWord } from '#src/features/pour/pour-words.ts';
import { ReadinessList } from '#src/features/pour/readiness-list.tsx';
import { WitnessPoints } from '#src/features/pour/witness-points.tsx';
import { ShownPourView } from '#src/features/record/shown-pour.tsx';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted, moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useAddressId, useMay, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';
import { HoldNotice } from './hold-notice.tsx';
import { PointCard } from './point-card.tsx';
import { pourActs } from './pour-acts.ts';
import { SignDialogBody } from './sign-dialog.tsx';
import { WithdrawDialogBody } from './withdraw-dialog.tsx';

type Opened = { kind: 'call' | 'sign' | 'begin' | 'end' } | { kind: 'list' | 'withdraw'; point: HoldPointKind };

/** One pour: may it be poured, why or why not, what is signed, and the one thing to do. */
export default function PourPage() {
	const site = useSite();
	const { siteId, timeZone } = site;
	const pourId = useAddressId('pourId');
	const now = useNow();
	const { data: pour } = useSuspenseQuery(api.pour.get.queryOptions({ input: { siteId, pourId } }));
	const point = pointInHand(pour);
	const { data: shown } = useSuspenseQuery(api.pour.shown.queryOptions({ input: { siteId, pourId, point } }));
	const navigate = useNavigate();
	// "Next: pour 8" after a signature leads here with the place to sign open.
	const [signNow, setSignNow] = useAddressState('sign');
	const [opened, setOpened] = useState<Opened | null>(null);
	const queries = useQueryClient();
	const refresh = () => queries.invalidateQueries({ queryKey: api.pour.key() });
	const submit = useMutation(api.pour.submit.mutationOptions({ onSettled: refresh }));
	const acts = pourActs({ site, pour, shown, point });
	const open: Opened | null = opened ?? (signNow !== null && acts.sign === null ? { kind: 'sign' } : null);
	const close = () => {
		setOpened(null);
		setSignNow(null);
	};
	const mayGiveNotice = useMay('pour.call') && pour.state === 'planned';
	const maySayWitness = useMay('pour.witness');
	const fault = submit.error;
	const at = (iso: string) => moment(new Date(iso), timeZone, now);
	return (
		<>
			<Strip
				items={[
					pour.companyName,
					<Link key="elements" to={`/sites/${siteId}/pours/${pourId}/elements`} className="text-action underline underline-offset-3">
						{counted(pour.elementCount, 'element')}
					</Link>,
					pour.plannedAt ? `concrete ${moment(pour.plannedAt, timeZone, now)}` : 'not planned',
					pour.partOf && (
						<Link key="origin" to={`/sites/${siteId}/pours/${pour.partOf.pourId}`} className="text-action underline underline-offset-3">
							rest of pour {pour.partOf.number}
						</Link>
					),
				]}
			/>
			<Headline
				title={`Pour ${pour.number}`}
				acts={
					<>
						{acts.call !== undefined && (
							<Button weight="act" whyNot={acts.call} onClick={() => setOpened({ kind: 'call' })}>
								Call the hold point
							</Button>
						)}
						{acts.submit !== undefined && (
							<Button weight="act" whyNot={acts.submit} isBusy={submit.isPending} onClick={() => submit.mutate({ siteId, pourId, point })}>
								Submit
							</Button>
						)}
						{acts.sign !== undefined && (
							<Button weight="act" whyNot={acts.sign} onClick={() => setOpened({ kind: 'sign' })}>
								Decide and sign
							</Button>
						)}
						{acts.begin !== undefined && (
							<Button whyNot={acts.begin} onClick={() => setOpened({ kind: 'begin' })}>
								Concrete begins
							</Button>
						)}
						{acts.end !== undefined && (
							<Button weight="act" onClick={() => setOpened({ kind: 'end' })}>
								Cast
							</Button>
						)}
					</>
				}
			>
				{headline(pour, shown)}
			</Headline>
			<div className="flex flex-col gap-6">
				{fault && (
					<Notice kind="wrong" title={refusalOf(fault).message}>
						Nothing was changed.
					</Notice>
				)}
				{pour.hold && <HoldNotice siteId={siteId} pourId={pourId} hold={pour.hold} />}
				<section aria-labelledby="readiness">
					<h2 id="readiness" className="m-0 mb-2 text-h2 font-strong">
						{holdPointName(point)}: {shown.readiness.every(({ isGood }) => isGood) ? 'ready' : 'not ready'}
					</h2>
					<ReadinessList sentences={shown.readiness} />
					{shown.shown.carriedOver.map((sentence) => (
						<p key={sentence} className="m-0 mt-2 text-second">
							{sentence}
						</p>
					))}
				</section>
				<div className="grid gap-4 tablet:grid-cols-2">
					{(['before-pour', 'after-pour'] as const).map((kind) => (
						<PointCard
							key={kind}
							siteId={siteId}
							pour={pour}
							point={pour.points[kind]}
							withdraw={acts.withdraw[kind]}
							onSetList={() => setOpened({ kind: 'list', point: kind })}
							onWithdraw={() => setOpened({ kind: 'withdraw', point: kind })}
						/>
					))}
				</div>
				<WitnessPoints siteId={siteId} pour={pour} mayGiveNotice={mayGiveNotice} maySay={maySayWitness} timeZone={timeZone} now={now} />
				<section className="sheet px-5 py-5" aria-labelledby="shown">
					<h2 id="shown" className="m-0 mb-3 text-h2 font-strong">
						What is signed
					</h2>
					<ShownPourView shown={shown.shown} at={at} />
				</section>
			</div>
			{open !== null && (
				<Dialog isOpen onClose={close} title={dialogTitle(open, pour)}>
					{open.kind === 'call' && (
						<CallForm siteId={siteId} pourId={pourId} point={pour.points[point]} timeZone={timeZone} now={now} onCalled={close} />
					)}
					{open.kind === 'list' && <ListForm siteId={siteId} pourId={pourId} point={pour.points[open.point]} onSet={close} />}
					{(open.kind === 'begin' || open.kind === 'end') && (
						<ConcreteForm
							siteId={siteId}
							pourId={pourId}
							act={open.kind}
							elements={shown.shown.elements}
							timeZone={timeZone}
							now={now}
							onDone={(restPourId) => {
								close();
								if (restPourId !== null) navigate(`/sites/${siteId}/pours/${restPourId}`);
							}}
						/>
					)}
					{open.kind === 'sign' && (
						<SignDialogBody
							pour={pour}
							shown={shown}
							point={pour.points[point]}
							siteId={siteId}
							at={at}
							timeZone={timeZone}
							onClose={close}
						/>
					)}
					{open.kind === 'withdraw' && (
						<WithdrawDialogBody siteId={siteId} pourId={pourId} point={open.point} timeZone={timeZone} onWithdrawn={close} />
					)}
				</Dialog>
			)}
		</>
	);
}

function headline(pour: PourDetail, { shown }: ShownHoldPoint): string {
	const name = `Pour ${pour.number}, ${pour.name}`;
	const word = pourWord(pour);
	if (word !== 'Not released') return `${name}: ${word.charAt(0).toLowerCase()}${word.slice(1)}`;
	const state = holdPointStateWords(pour.before);
	return shown.isReady ? `${name} is ready, ${state}` : `${name} is not ready`;
}

function dialogTitle(open: Opened, pour: PourDetail): string {
	const name = `pour ${pour.number}, ${pour.name}`;
	switch (open.kind) {
		case 'call':
			return `Call ${name}`;
		case 'list':
			return `${holdPointName(open.point)}: the list of ${name}`;
		case 'begin':
			return `Concrete begins: ${name}`;
		case 'end':
			return `Concrete ends: ${name}`;
		case 'sign':
			return `Pour ${pour.number}, ${pour.name}: what you sign`;
		case 'withdraw':
			return `Withdraw the release of ${name}`;
	}
}

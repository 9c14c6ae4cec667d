import { type ReactNode, useMemo } from 'react';
import { Link, useNavigate } from 'react-router-dom';
import { deviationSentence } from '#shared/check/sentence.ts';
import type { FlagSummary } from '#shared/flag/contract.ts';
import { flagTitle } from '#shared/flag/flag-name.ts';
import { glyphKindOf, planTurnRad } from '#src/ui/glyph-kind.ts';
import { Rod, rodScaleMm } from '#src/ui/rod.tsx';
import { useIsBelow } from '#src/ui/screen-width.ts';
import { type Column, Table } from '#src/ui/table.tsx';
import { deadlineWords, offWords, stateWords } from './flag-words.ts';

interface FlagTableProps {
	siteId: string;
	flags: readonly FlagSummary[];
	chosen: ReadonlySet<string>;
	onChoose: (chosen: ReadonlySet<string>) => void;
	timeZone: string;
	now: Date;
	empty: ReactNode;
}

const keyOf = ({ flagId }: FlagSummary): string => flagId;

/** Flags, a row each: what is off, where it stands, until when. Thousands are drawn by window. */
export function FlagTable({ siteId, flags, chosen, onChoose, timeZone, now, empty }: FlagTableProps) {
	const navigate = useNavigate();
	const isPhone = useIsBelow('tablet');
	const scaleMm = useMemo(
		() =>
			rodScaleMm(
				flags.map(({ worst }) => worst?.limitsMm ?? null),
				flags.map(({ worst }) => worst?.deviationMm ?? null),
			),
		[flags],
	);
	const columns = useMemo((): Column<FlagSummary>[] => {
		const toggle = (flagId: string): void => {
			const next = new Set(chosen);
			if (!next.delete(flagId)) next.add(flagId);
			onChoose(next);
		};
		const isAll = flags.length > 0 && flags.every(({ flagId }) => chosen.has(flagId));
		return [
			{
				key: 'choose',
				head: (
					<input
						type="checkbox"
						aria-label="Choose all that are shown"
						checked={isAll}
						onChange={() => onChoose(isAll ? new Set() : new Set(flags.map(keyOf)))}
						className="size-5 align-middle accent-ink"
					/>
				),
				widthPx: 44,
				cell: ({ flagId, number }) => (
					<label className="grid size-11 place-items-center">
						<input
							type="checkbox"
							aria-label={`Choose flag ${number}`}
							checked={chosen.has(flagId)}
							onChange={() => toggle(flagId)}
							className="size-5 accent-ink"
						/>
					</label>
				),
			},
			{
				key: 'flag',
				head: 'Flag',
				isRowHead: true,
				cell: (flag) => (
					<Link
						to={`/sites/${siteId}/flags/${flag.flagId}`}
						className="flex w-0 min-w-full items-center gap-2.5 text-ink no-underline hover:underline"
					>
						<span className="min-w-0 flex-1 leading-tight">
							<span className={`font-strong ${isPhone ? 'line-clamp-2 whitespace-normal' : 'block truncate'}`}>{flagTitle(flag)}</span>
							<span className="block truncate text-small text-second">
								{isPhone ? phoneWords(flag, timeZone, now) : `no. ${flag.number}, ${offWords(flag)}`}
							</span>
						</span>
						{isPhone && <FlagRod flag={flag} scaleMm={scaleMm} widthPx={84} />}
					</Link>
				),
			},
			{
				key: 'rod',
				head: 'Worst',
				onlyFrom: 'tablet',
				widthPx: 120,
				cell: (flag) => <FlagRod flag={flag} scaleMm={scaleMm} widthPx={104} />,
			},
			{
				key: 'state',
				head: 'Where it stands',
				onlyFrom: 'tablet',
				widthPx: 150,
				cell: (flag) => <span className="line-clamp-2 leading-tight whitespace-normal">{stateWords(flag, now)}</span>,
			},
			{
				key: 'deadline',
				head: 'Answer',
				onlyFrom: 'tablet',
				widthPx: 186,
				cell: (flag) => {
					const [by, distance] = deadlineWords(flag, timeZone, now).split(', ');
					return (
						<span className="block leading-tight">
							{by}
							<span className="block text-small">{flag.timeAsked === null ? distance : <b>more time asked</b>}</span>
						</span>
					);
				},
			},
			{
				key: 'pour',
				head: 'Pour',
				onlyFrom: 'cabin',
				widthPx: 90,
				cell: ({ pours }) => pours.map(({ number }) => number).join(', ') || '–',
			},
			{ key: 'company', head: 'Company', onlyFrom: 'cabin', widthPx: 170, cell: ({ companyName }) => companyName ?? '–' },
		];
	}, [chosen, onChoose, flags, siteId, timeZone, now, isPhone, scaleMm]);
	return (
		<Table
			caption="Flags"
			columns={columns}
			rows={flags}
			keyOf={keyOf}
			onOpen={(flagId) => navigate(`/sites/${siteId}/flags/${flagId}`)}
			scrollClass="max-h-[max(20rem,calc(100dvh-17rem))]"
			rowHeightPx={isPhone ? 78 : 58}
			empty={empty}
		/>
	);
}

/** The worst place with its sign; a dash where it was not kept. */
function FlagRod({ flag: { worst, kind }, scaleMm, widthPx }: { flag: FlagSummary; scaleMm: number; widthPx: number }) {
	if (worst === null) return <span className="text-second">–</span>;
	const judged = { ...worst, characteristic: kind };
	return (
		<Rod
			deviationMm={worst.deviationMm}
			limitsMm={worst.limitsMm}
			expandedUncertaintyMm={worst.expandedUncertaintyMm}
			scaleMm={scaleMm}
			glyph={glyphKindOf(judged)}
			sentence={deviationSentence({ ...judged, notMeasuredReason: null })}
			isPlan={kind === 'plan'}
			turnRad={planTurnRad(worst.offsetMm)}
			widthPx={widthPx}
		/>
	);
}

/** The deadline without how far off it is, or where the flag stands: all that a phone's row has room for. */
function phoneWords(flag: FlagSummary, timeZone: string, now: Date): string {
	return deadlineWords(flag, timeZone, now).split(', ')[0] || stateWords(flag, now);
}

import { type ReactNode, useMemo } from 'react';
import { Link, useNavigate } from 'react-router-dom';
import type { FlagSummary } from '#shared/flag/contract.ts';
import { Glyph } from '#src/ui/glyph.tsx';
import { useIsBelow } from '#src/ui/screen-width.ts';
import { type Column, Table } from '#src/ui/table.tsx';
import { deadlineWords, flagTitle, offWords, stateWords } from './flag-words.ts';

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
						{/* Which way an element is off is its points' to say: a wedge here could point the wrong way. */}
						<span className="w-4.5 shrink-0">{flag.verdict !== 'outside' && <Glyph kind="close" />}</span>
						<span className="min-w-0 leading-tight">
							<span className="block truncate font-strong">{flagTitle(flag)}</span>
							<span className="block truncate text-small text-second">
								{isPhone ? `${offWords(flag)} · ${stateWords(flag, now)}` : `no. ${flag.number}, ${offWords(flag)}`}
							</span>
							{isPhone && <span className="block truncate text-small">{deadlineWords(flag, timeZone, now)}</span>}
						</span>
					</Link>
				),
			},
			{ key: 'state', head: 'Where it stands', onlyFrom: 'tablet', cell: (flag) => stateWords(flag, now) },
			{
				key: 'deadline',
				head: 'Answer',
				onlyFrom: 'tablet',
				widthPx: 230,
				cell: (flag) => (
					<>
						{deadlineWords(flag, timeZone, now)}
						{flag.timeAsked !== null && <b className="block text-small">more time asked</b>}
					</>
				),
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
	}, [chosen, onChoose, flags, siteId, timeZone, now, isPhone]);
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

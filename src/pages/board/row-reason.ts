import type { PourBoardRow } from '#shared/pour/contract.ts';
import { moment } from '#src/lib/format.ts';

/** A row's one sentence with its hour by the site's clock: "6 flags; Fennick Forms to answer by Fri 5 Dec 17:00". */
export function rowReason({ words, moment: said }: Pick<PourBoardRow, 'words' | 'moment'>, timeZone: string, now: Date): string {
	if (said === null) return words;
	const when = moment(said.at, timeZone, now);
	return said.word === '' ? `${words}, ${when}` : `${words} ${said.word} ${when}`;
}

import { z } from 'zod';

/** At most so many of each: a list that is longer is no list of what is next. */
export const mostActs = 5;
export const mostWaiting = 8;

/** One thing to do: the verb on the button, where it begins (below /sites/:siteId/), why, and by when. */
export const boardAct = z.object({
	verb: z.string(),
	path: z.string(),
	why: z.string(),
	by: z.date().nullable(),
	/** `by` is the hour of the concrete it should be done before. */
	isBefore: z.boolean(),
});
export type BoardAct = z.infer<typeof boardAct>;

/** "R. Amadi: release pour 8, since 08:10". */
export const waitingOn = z.object({ who: z.string(), what: z.string(), since: z.date().nullable(), by: z.date().nullable() });

export const board = z.object({ next: z.array(boardAct).max(mostActs), waiting: z.array(waitingOn).max(mostWaiting) });
export interface Board extends z.infer<typeof board> {}
export const boardAnswer: z.ZodType<Board> = board;

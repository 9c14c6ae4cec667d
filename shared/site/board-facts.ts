import type { FlagSummary } from '../flag/contract.ts';
import type { Role } from '../permissions.ts';
import type { PourSummary } from '../pour/contract.ts';
import type { HoldPointKind, HoldPointState } from '../pour/pour-life.ts';
import type { BoardAct } from './board-schema.ts';
import type { NextFacts } from './next-acts.ts';

/** What the two lists are told from, as the person may see it. Times are dates; `now` is an argument. */
export interface BoardFacts extends Omit<NextFacts, 'pourCount'> {
	now: Date;
	userId: string;
	companyIds: readonly string[];
	flags: readonly FlagSummary[];
	pours: readonly PourSummary[];
	holdPoints: readonly {
		pourId: string;
		kind: HoldPointKind;
		state: HoldPointState;
		readyFrom: Date | null;
		calledAt: Date | null;
		submittedAt: Date | null;
	}[];
	/** Conditions of releases that are not met. */
	conditions: readonly { pourId: string; text: string; owner: string; dueAt: Date | null }[];
	/** Holds that stand on pours and that this person has not said to have seen. */
	unseenHolds: readonly { pourId: string; reasons: readonly string[]; raisedAt: Date }[];
	/** Adopted fits without their second person; none where the site asks for none. */
	uncheckedFits: readonly {
		fitId: string;
		number: number;
		surveyId: string;
		setupId: string;
		adoptedById: string | null;
		adoptedAt: Date | null;
	}[];
	drafts: readonly { sheetId: string; name: string }[];
	/** Null: not this person's to see. */
	invitations: readonly { email: string; sentAt: Date }[] | null;
	/** Who holds each role now, by name. */
	holders: Readonly<Partial<Record<Role, readonly string[]>>>;
}

/** One thing that is open: whose it is, and how it is told to them and to others. */
export interface Task {
	role: Role;
	/** Of a contractor's: the company. */
	company?: { id: string; name: string };
	/** Who may not do it though the role may. */
	notFor?: string;
	act: BoardAct;
	/** "release pour 8", after who. */
	what: string;
	since?: Date | null;
}

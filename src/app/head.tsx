import type { ReactNode } from 'react';
import { Link, useNavigate } from 'react-router-dom';
import { AccountMenu, SunPress } from '#src/features/account/account-menu.tsx';
import { useMe } from '#src/lib/session.ts';
import { Mark } from '#src/ui/mark.tsx';

interface HeadProps {
	/** Beside the mark: the site's name. */
	children?: ReactNode;
	memberRole: string;
	/** On a phone in place of the mark: "‹ Surveys". */
	back?: { to: string; word: string } | null;
}

/** The head of every signed-in page. */
export function Head({ children, memberRole, back = null }: HeadProps) {
	const me = useMe();
	const navigate = useNavigate();
	return (
		<header className="mx-auto flex h-14 w-full max-w-[1920px] items-center gap-2.5 px-4 tablet:h-13 tablet:gap-4 tablet:px-6">
			{back && (
				<Link to={back.to} className="flex min-h-12 min-w-0 items-center gap-1.5 pr-2 font-strong text-ink no-underline tablet:hidden">
					<span aria-hidden="true">‹</span>
					<span className="truncate">{back.word}</span>
				</Link>
			)}
			<Link
				to="/sites"
				className={`items-center gap-2.5 text-lead font-heavy tracking-[-0.01em] text-ink no-underline ${back ? 'hidden tablet:flex' : 'flex'}`}
			>
				<Mark />
				<span>Batterboard</span>
			</Link>
			<span className="min-w-0 truncate text-second max-tablet:hidden">{children}</span>
			<span className="ml-auto flex shrink-0 items-center gap-2.5">
				<SunPress />
				<span className="text-second max-cabin:hidden">{memberRole}</span>
				<span className="max-tablet:hidden">{me.name}</span>
				<AccountMenu person={me} role={memberRole} onSignedOut={() => navigate('/sign-in')} />
			</span>
		</header>
	);
}

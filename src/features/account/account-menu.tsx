import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useId } from 'react';
import { Link } from 'react-router-dom';
import type { Person } from '#shared/account/person.ts';
import { api } from '#src/lib/api.ts';
import { type ColourSetWish, chooseColourSet, useColourSet } from '#src/lib/colour-set.ts';
import { Button } from '#src/ui/button.tsx';
import { Segmented } from '#src/ui/chip.tsx';

const wishes: readonly { value: ColourSetWish; label: string }[] = [
	{ value: 'device', label: 'As the device' },
	{ value: 'light', label: 'Light' },
	{ value: 'dark', label: 'Dark' },
	{ value: 'sun', label: 'Sun' },
];

/** "Ida Roen" → "IR". */
export function initialsOf(name: string): string {
	const words = name.trim().split(/\s+/);
	return ((words[0]?.[0] ?? '') + (words.length > 1 ? (words.at(-1)?.[0] ?? '') : '')).toUpperCase();
}

interface AccountMenuProps {
	person: Person;
	/** "Project engineer"; empty where one is on no site. */
	role: string;
	onSignedOut: () => void;
}

/** Who one is, the colours of this device, and the way out. Opens below the initials. */
export function AccountMenu({ person, role, onSignedOut }: AccountMenuProps) {
	const menuId = useId();
	const { wish } = useColourSet();
	const closeMenu = () => document.getElementById(menuId)?.hidePopover();
	const queries = useQueryClient();
	const signOut = useMutation(
		api.account.signOut.mutationOptions({
			onSuccess: () => {
				queries.clear();
				queries.setQueryData(api.account.me.queryKey(), null);
				onSignedOut();
			},
		}),
	);
	return (
		<>
			<button
				type="button"
				popoverTarget={menuId}
				aria-label={`${initialsOf(person.name)}, ${person.name}: colours and sign out`}
				className="grid size-8 shrink-0 place-items-center rounded-full bg-action text-small font-medium text-on-action pointer-coarse:size-12"
			>
				{initialsOf(person.name)}
			</button>
			<div
				id={menuId}
				popover="auto"
				className="inset-auto top-14 right-4 m-0 w-[min(20rem,calc(100vw-2rem))] rounded-corner border border-rule bg-sheet p-4.5 text-ink shadow-lift"
			>
				<p className="m-0 font-strong">{person.name}</p>
				<p className="m-0 text-second">{[role, person.email].filter(Boolean).join(' · ')}</p>
				<div className="my-4">
					<p className="m-0 mb-2 font-medium" aria-hidden="true">
						Colours on this device
					</p>
					<Segmented legend="Colours on this device" options={wishes} value={wish} onChange={chooseColourSet} />
				</div>
				<p className="m-0 mb-4">
					<Link
						to="/account"
						onClick={closeMenu}
						className="inline-flex text-action underline underline-offset-3 min-h-6 items-center pointer-coarse:min-h-12"
					>
						Your account: sessions, sign-in, units
					</Link>
				</p>
				<Button onClick={() => signOut.mutate({})} isBusy={signOut.isPending}>
					Sign out
				</Button>
				{signOut.isError && (
					<p role="alert" className="m-0 mt-2">
						You are still signed in: the server was not reached. Try again.
					</p>
				)}
			</div>
		</>
	);
}

/** One press to ink on white for full daylight, and back to what was before. Kept on this device. */
export function SunPress() {
	const { wish } = useColourSet();
	const isSun = wish === 'sun';
	return (
		<button
			type="button"
			aria-pressed={isSun}
			title={isSun ? 'Back to the device’s colours' : 'Ink on white, for a screen in the sun'}
			onClick={() => chooseColourSet(isSun ? 'device' : 'sun')}
			className="inline-flex min-h-9 items-center justify-center gap-2 rounded-round border border-rule px-3 hover:border-ink aria-pressed:border-ink aria-pressed:shadow-[inset_0_0_0_1px_var(--color-ink)] max-tablet:w-12 max-tablet:px-0 pointer-coarse:min-h-12"
		>
			<svg width="18" height="18" viewBox="-9 -9 18 18" aria-hidden="true">
				<circle r="3.4" className="fill-none stroke-current" strokeWidth="1.600" />
				<path
					d="M0 -8V-5.600M0 8V5.600M-8 0H-5.600M8 0H5.600M-5.700 -5.700L-4 -4M5.700 5.700L4 4M-5.700 5.700L-4 4M5.700 -5.700L4 -4"
					className="stroke-current"
					strokeWidth="1.600"
				/>
			</svg>
			<span className="max-tablet:sr-only">Sun</span>
		</button>
	);
}

import { type ButtonHTMLAttributes, type ReactNode, useId, useState } from 'react';
import { Link, type LinkProps } from 'react-router-dom';

/** `act`: the one thing to do here. `quiet`: what else can be done. `plain`: in a line of text or a head. */
export type ButtonWeight = 'act' | 'quiet' | 'plain';

const base =
	'inline-flex items-center justify-center gap-2 rounded-corner font-medium text-center leading-tight no-underline select-none pointer-coarse:min-h-12';
const weights: Record<ButtonWeight, string> = {
	act: 'min-h-11 px-4.5 py-1.5 bg-action text-on-action border-[1.5px] border-action hover:not-aria-disabled:brightness-115',
	quiet: 'min-h-11 px-4.5 py-1.5 bg-transparent text-action border-[1.5px] border-action hover:not-aria-disabled:bg-hair',
	plain:
		'min-h-9 px-2 py-1 text-action border-[1.5px] border-transparent underline underline-offset-3 decoration-1 hover:not-aria-disabled:decoration-2',
};
const cannot =
	'aria-disabled:cursor-not-allowed aria-disabled:border-dashed aria-disabled:border-second aria-disabled:bg-transparent aria-disabled:text-second';

/** The classes of a button, for what must be another element. */
export function buttonClass(weight: ButtonWeight = 'quiet', more = ''): string {
	return `${base} ${weights[weight]} ${cannot} ${more}`;
}

interface ButtonProps extends Omit<ButtonHTMLAttributes<HTMLButtonElement>, 'disabled' | 'children'> {
	children: ReactNode;
	weight?: ButtonWeight;
	/** It is being done: it cannot be pressed twice, and says so. */
	isBusy?: boolean;
	/** Why it cannot act now. The button stays, is reached by the keyboard, and says this. */
	whyNot?: string | null | undefined;
}

/** A button. One that cannot act stays and says why, on hover, focus and press. */
export function Button({
	children,
	weight = 'quiet',
	isBusy = false,
	whyNot = null,
	className = '',
	onClick,
	type = 'button',
	...rest
}: ButtonProps) {
	const reasonId = useId();
	const [side, setSide] = useState<'left' | 'right'>('right');
	const isOff = isBusy || Boolean(whyNot);
	// The reason hangs towards the middle of the screen, so that it is never cut off.
	const turn = (button: Element) => setSide(button.getBoundingClientRect().left < window.innerWidth / 2 ? 'left' : 'right');
	return (
		<span className={`group relative inline-flex ${className}`}>
			<button
				{...rest}
				type={type}
				className={buttonClass(weight, 'w-full')}
				aria-disabled={isOff || undefined}
				aria-busy={isBusy || undefined}
				aria-describedby={whyNot ? reasonId : rest['aria-describedby']}
				onPointerEnter={(event) => {
					turn(event.currentTarget);
					rest.onPointerEnter?.(event);
				}}
				onFocus={(event) => {
					turn(event.currentTarget);
					rest.onFocus?.(event);
				}}
				onClick={(event) => {
					if (isOff) {
						event.preventDefault();
						return;
					}
					onClick?.(event);
				}}
			>
				{isBusy && <Working />}
				{children}
			</button>
			{whyNot && (
				<span
					id={reasonId}
					role="tooltip"
					className={`pointer-events-none invisible absolute top-full z-20 mt-1 w-max max-w-72 rounded-corner bg-ink px-3 py-2 text-left text-small text-ground opacity-0 shadow-lift group-focus-within:visible group-focus-within:opacity-100 group-hover:visible group-hover:opacity-100 max-tablet:fixed max-tablet:inset-x-4 max-tablet:top-auto max-tablet:bottom-20 max-tablet:w-auto max-tablet:max-w-none ${side === 'left' ? 'left-0' : 'right-0'}`}
				>
					{whyNot}
				</span>
			)}
		</span>
	);
}

function Working() {
	return (
		<svg width="18" height="10" viewBox="0 0 18 10" aria-hidden="true" className="shrink-0">
			{[3, 9, 15].map((x, index) => (
				<circle
					key={x}
					cx={x}
					cy="5"
					r="2.4"
					className="fill-current motion-safe:animate-pulse"
					style={{ animationDelay: `${index * 150}ms` }}
				/>
			))}
		</svg>
	);
}

interface ButtonLinkProps extends Omit<LinkProps, 'className'> {
	weight?: ButtonWeight;
	className?: string;
}

/** A way to another page that looks like a button, because it begins an act. */
export function ButtonLink({ weight = 'quiet', className = '', ...rest }: ButtonLinkProps) {
	return <Link {...rest} className={buttonClass(weight, className)} />;
}

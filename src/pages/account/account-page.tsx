import { ChangePasswordForm } from '#src/features/account/change-password-form.tsx';
import { PreferencesForm } from '#src/features/account/preferences-form.tsx';
import { SecondFactors } from '#src/features/account/second-factors.tsx';
import { SessionList } from '#src/features/account/session-list.tsx';
import { useMe } from '#src/lib/session.ts';
import { Headline } from '#src/ui/headline.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** One's own account: where one is signed in, what is asked at sign-in, and how one reads the product. */
export default function AccountPage() {
	const me = useMe();
	return (
		<div className="max-w-[62rem] pt-4">
			<Strip items={[me.email]} />
			<Headline title="Your account">{me.name}</Headline>
			<section aria-labelledby="sessions" className="mb-8">
				<h2 id="sessions" className="m-0 mb-1 text-h2 font-strong">
					Where you are signed in
				</h2>
				<SessionList />
			</section>
			<section aria-labelledby="factors" className="mb-8">
				<h2 id="factors" className="m-0 mb-2 text-h2 font-strong">
					Besides the password
				</h2>
				<SecondFactors />
			</section>
			<section aria-labelledby="preferences" className="mb-8">
				<h2 id="preferences" className="m-0 mb-2 text-h2 font-strong">
					How you read it
				</h2>
				<PreferencesForm />
			</section>
			<section aria-labelledby="password">
				<h2 id="password" className="m-0 mb-2 text-h2 font-strong">
					Password
				</h2>
				<ChangePasswordForm />
			</section>
		</div>
	);
}

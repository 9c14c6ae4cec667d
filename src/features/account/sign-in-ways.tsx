import { useState } from 'react';
import { Button } from '#src/ui/button.tsx';
import { MailedCodeForm } from './mailed-code-form.tsx';
import { PasskeyPress } from './passkey-press.tsx';
import { SecondForm } from './second-form.tsx';
import { SignInForm } from './sign-in-form.tsx';

/** All ways in: password or mailed code, each with a second code where one is set up, and a passkey. */
export function SignInWays({ onSignedIn }: { onSignedIn: () => void }) {
	const [stepToken, setStep] = useState<string | null>(null);
	const [isByMail, setByMail] = useState(false);
	if (stepToken !== null) return <SecondForm stepToken={stepToken} onSignedIn={onSignedIn} onLeave={() => setStep(null)} />;
	return (
		<>
			{isByMail ? <MailedCodeForm onSignedIn={onSignedIn} onSecond={setStep} /> : <SignInForm onSignedIn={onSignedIn} onSecond={setStep} />}
			<div className="mt-5 flex flex-col gap-2.5 border-t border-rule pt-5">
				<PasskeyPress onSignedIn={onSignedIn} />
				<Button onClick={() => setByMail(!isByMail)}>{isByMail ? 'With the password' : 'With a code by mail'}</Button>
			</div>
		</>
	);
}

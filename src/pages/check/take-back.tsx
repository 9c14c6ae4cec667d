import { useMutation } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button } from '#src/ui/button.tsx';
import { Notice } from '#src/ui/notice.tsx';

interface TakeBackProps {
	siteId: string;
	checkId: string;
	until: Date;
	onDone: () => Promise<void>;
}

/** "Take back, 2:41 left": for as long as nobody is told that the check is published. */
export function TakeBack({ siteId, checkId, until, onDone }: TakeBackProps) {
	const [leftMs, setLeftMs] = useState(() => until.getTime() - Date.now());
	useEffect(() => {
		const timer = setInterval(() => setLeftMs(until.getTime() - Date.now()), 1000);
		return () => clearInterval(timer);
	}, [until]);
	const take = useMutation({ mutationFn: () => client.check.takeBack({ siteId, checkId }), onSuccess: onDone });
	if (take.error) return <Notice kind="wrong" title={refusalOf(take.error).message} />;
	if (leftMs <= 0) return null;
	const seconds = Math.ceil(leftMs / 1000);
	return (
		<Button isBusy={take.isPending} onClick={() => take.mutate()}>
			<span>
				Take back<span aria-hidden="true">, {`${Math.floor(seconds / 60)}:${String(seconds % 60).padStart(2, '0')}`} left</span>
			</span>
		</Button>
	);
}

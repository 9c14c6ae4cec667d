import { z } from 'zod';

/** Whether a pour asks for a checkpoint: always, by the pour's sampling plan, or not at all (which needs a reason, said before the check). */
export const requirements = ['required', 'by-sample', 'left-out'] as const;
export const requirement = z.enum(requirements);
export type Requirement = z.infer<typeof requirement>;

/** What was left out of a check, as it stood when the check was asked for. */
export const leftOutCheckpoint = z.object({ checkpointId: z.string(), reason: z.string(), by: z.string() });
export type LeftOutCheckpoint = z.infer<typeof leftOutCheckpoint>;

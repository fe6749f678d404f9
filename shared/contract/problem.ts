import * as z from 'zod';

/**
 * What every fault is told as (RFC 9457). `id` stands in the server's log beside the request; `where` is the path of the field that cannot
 * be used, where there is one.
 */
export const problem = z.strictObject({
  type: z.literal('about:blank'),
  title: z.string(),
  status: z.int(),
  detail: z.string(),
  where: z.string().optional(),
  id: z.string(),
});

export type ProblemDetails = z.infer<typeof problem>;

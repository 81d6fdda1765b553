import type { FastifyReply } from 'fastify';
import type { RunEntry } from '../runs.ts';
import type { StatusInfo } from './schemas.ts';
import { jobPath, statusInfoOf } from './status-info.ts';

/** The answer to a run that was just started: 201 with its address in Location. */
export function created(reply: FastifyReply, entry: RunEntry): StatusInfo {
  reply.code(201).header('location', jobPath(entry.record.id));
  return statusInfoOf(entry);
}

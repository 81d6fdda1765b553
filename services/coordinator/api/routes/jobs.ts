import { z } from 'zod';
import { created } from '../created.ts';
import { pageOf } from '../job-page.ts';
import { type ApiRoute, route } from '../route.ts';
import { jobList, jobListQuery, statusInfo } from '../schemas.ts';
import { statusInfoOf } from '../status-info.ts';

export const jobParams = z.object({ jobID: z.string().describe('Id of the run') });

export const jobRoutes: readonly ApiRoute[] = [
  route({
    method: 'GET',
    path: '/jobs',
    operationId: 'getJobs',
    summary: 'Runs, the newest first',
    query: jobListQuery,
    answers: { 200: { description: 'A page of runs; the link "next" leads to the next one', schema: jobList } },
    problems: [],
    handle: async ({ query, api }) => pageOf(await api.runs.list(), query),
  }),
  route({
    method: 'GET',
    path: '/jobs/{jobID}',
    operationId: 'getStatus',
    summary: 'How a run stands',
    params: jobParams,
    answers: { 200: { description: 'The status', schema: statusInfo } },
    problems: [404],
    handle: async ({ params, api }) => statusInfoOf(await api.runs.get(params.jobID)),
  }),
  route({
    method: 'DELETE',
    path: '/jobs/{jobID}',
    operationId: 'dismiss',
    summary: 'Stop a run after the jobs in hand',
    description: 'What is done is kept. A run that has ended stays as it is: its own status is the answer.',
    params: jobParams,
    answers: { 200: { description: 'The status after that', schema: statusInfo } },
    problems: [404],
    handle: async ({ params, api }) => statusInfoOf(await api.runs.cancel(params.jobID)),
  }),
  route({
    method: 'POST',
    path: '/jobs/{jobID}/rerun',
    operationId: 'rerun',
    summary: 'Run the same request again',
    description: 'What was set aside is tried again, what is done is kept. Makes a new job.',
    params: jobParams,
    answers: { 201: { description: 'The new run; its address is in the header Location', schema: statusInfo } },
    problems: [404, 409, 422],
    handle: async ({ params, api, reply }) => {
      const { request } = await api.runs.get(params.jobID);
      // Again: the basin file may name other places now, and the coordinator may have been given other folders.
      await api.allowed.request(request);
      return created(reply, await api.runs.rerun(params.jobID));
    },
  }),
];

import { BasinloomError } from '../../../../shared/contract/errors.ts';
import { linksOfResults } from '../result-links.ts';
import { type ApiRoute, route } from '../route.ts';
import { failuresOf } from '../run-failures.ts';
import { failures, results } from '../schemas.ts';
import { jobParams } from './jobs.ts';

export const resultRoutes: readonly ApiRoute[] = [
  route({
    method: 'GET',
    path: '/jobs/{jobID}/results',
    operationId: 'getResults',
    summary: 'Links to maps, tables, report, catalogue, failures and lineage',
    description:
      'Of a run that failed: the reason why, with the status that fits it. The links lead into the store of the run, ' +
      'as file: or s3: URLs; a later run into the same store replaces what they lead to.',
    params: jobParams,
    answers: { 200: { description: 'Links by name of the output', schema: results } },
    problems: [404, 409, 422],
    handle: async ({ params, api }) => {
      const { record, store } = await api.runs.get(params.jobID);
      const run = record.id;
      if (record.state === 'running') throw new BasinloomError('RESULTS_NOT_READY', { run });
      if (record.state === 'stopped') throw new BasinloomError('RESULTS_NONE', { run });
      if (record.state === 'failed') {
        throw record.error
          ? BasinloomError.fromRecord(record.error)
          : new BasinloomError('INTERNAL', { detail: 'failed without a reason' });
      }
      return linksOfResults(run, store, api.openStore(store));
    },
  }),
  route({
    method: 'GET',
    path: '/jobs/{jobID}/failures',
    operationId: 'getFailures',
    summary: 'What was set aside, with reasons',
    description: 'While the run is on its way: what was set aside so far.',
    params: jobParams,
    answers: { 200: { description: 'Failures and notes', schema: failures } },
    problems: [404],
    handle: async ({ params, api }) => {
      const { record, store } = await api.runs.get(params.jobID);
      return failuresOf(record, api.openStore(store));
    },
  }),
];

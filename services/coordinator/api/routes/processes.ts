import { z } from 'zod';
import { BasinloomError } from '../../../../shared/contract/errors.ts';
import { SOFTWARE } from '../../../../shared/service/software.ts';
import { created } from '../created.ts';
import { type ApiRoute, route } from '../route.ts';
import {
  execute,
  type Link,
  link,
  PROCESS_ID,
  processDescription,
  processList,
  runRequest,
  statusInfo,
} from '../schemas.ts';

const SELF = `/processes/${PROCESS_ID}`;
const processParams = z.object({ processID: z.string().describe(`Only ${PROCESS_ID}`) });

const EXECUTE_LINK: Link = {
  href: `${SELF}/execution`,
  rel: 'http://www.opengis.net/def/rel/ogc/1.0/execute',
  type: 'application/json',
  title: 'start a run (POST)',
};

const SUMMARY = {
  id: PROCESS_ID,
  version: SOFTWARE.version,
  title: 'Run a basin',
  description: 'From scenes and weather to seamless maps of evapotranspiration, tables of volumes and a report.',
  jobControlOptions: ['async-execute', 'dismiss'],
  outputTransmission: ['reference'],
};

export const processRoutes: readonly ApiRoute[] = [
  route({
    method: 'GET',
    path: '/processes',
    operationId: 'getProcesses',
    summary: 'What can be run',
    answers: { 200: { description: 'The processes', schema: processList } },
    problems: [],
    handle: async () => ({
      processes: [{ ...SUMMARY, links: [{ href: SELF, rel: 'self', type: 'application/json' }, EXECUTE_LINK] }],
      links: [{ href: '/processes', rel: 'self', type: 'application/json' }],
    }),
  }),
  route({
    method: 'GET',
    path: '/processes/{processID}',
    operationId: 'getProcessDescription',
    summary: 'Inputs and outputs of a process',
    params: processParams,
    answers: { 200: { description: 'The description', schema: processDescription } },
    problems: [404],
    handle: async ({ params }) => {
      checkProcess(params.processID);
      return {
        ...SUMMARY,
        inputs: inputs(),
        outputs: OUTPUTS,
        links: [{ href: SELF, rel: 'self', type: 'application/json' }, EXECUTE_LINK],
      };
    },
  }),
  route({
    method: 'POST',
    path: '/processes/{processID}/execution',
    operationId: 'execute',
    summary: 'Start a run',
    description:
      'Answers when the run is on its way. Basin file, output and every place that the basin file names must lie in ' +
      'the folders and addresses that the coordinator may use.',
    params: processParams,
    body: execute,
    answers: { 201: { description: 'The run; its address is in the header Location', schema: statusInfo } },
    problems: [404, 409, 422],
    handle: async ({ params, body, api, reply }) => {
      checkProcess(params.processID);
      return created(reply, await api.runs.start(await api.allowed.request(body.inputs)));
    },
  }),
];

function checkProcess(process: string): void {
  if (process !== PROCESS_ID) throw new BasinloomError('PROCESS_NOT_FOUND', { process: process.slice(0, 100) });
}

/** The inputs of the process as its description lists them: the members of the request. */
function inputs() {
  const described = Object.entries(runRequest.shape).map(([name, member]) => {
    const { $schema, ...schema } = z.toJSONSchema(member);
    const title = name;
    const minOccurs = member.safeParse(undefined).success ? 0 : 1;
    return [name, { title, description: schema.description ?? '', schema, minOccurs, maxOccurs: 1 }];
  });
  return Object.fromEntries(described);
}

const one = { title: 'link', description: '', schema: schemaOf(link) };
const many = { ...one, schema: { type: 'array', items: schemaOf(link) } };

const OUTPUTS = {
  report: { ...one, title: 'Report', description: 'One self-contained HTML page' },
  collection: { ...one, title: 'Catalogue', description: 'STAC 1.1 collection of the products' },
  products: { ...many, title: 'Maps', description: 'Cloud Optimized GeoTIFF, one variable each' },
  tables: { ...many, title: 'Tables', description: 'CSV: zones, seams, anchors, adjustments, overlaps, bounds' },
  failures: { ...one, title: 'Failures', description: 'What was set aside, with reasons' },
  lineage: { ...one, title: 'Lineage', description: 'From every map back to scenes, anchors and parameters' },
};

function schemaOf(schema: z.ZodType): object {
  const { $schema, ...rest } = z.toJSONSchema(schema);
  return rest;
}

import { z } from 'zod';
import type { RunRequest } from '../runs.ts';

/** The one process that the API offers. */
export const PROCESS_ID = 'basin-run';

/** The schemas that have a name in the OpenAPI document. */
export const namedSchemas = z.registry<{ id: string }>();

function named<S extends z.ZodType>(id: string, schema: S): S {
  namedSchemas.add(schema, { id });
  return schema;
}

const count = z.number().int().min(0);
const moment = z.iso.datetime();

export const link = named(
  'link',
  z.object({
    href: z.string().describe('Where it leads'),
    rel: z.string().optional().describe('How it relates to this document'),
    type: z.string().optional().describe('Media type'),
    title: z.string().optional(),
  }),
);
export type Link = z.output<typeof link>;
const links = z.array(link);

export const problem = named(
  'problem',
  z.object({
    type: z.string().describe('URI of the kind of problem, or about:blank'),
    title: z.string().describe('The kind of problem in words'),
    status: z.number().int().min(400).max(599).describe('HTTP status'),
    detail: z.string().describe('What is wrong here'),
    instance: z.string().describe('Names this answer, in the log too'),
    code: z.string().describe('Code of the error table; it does not change'),
    remedy: z.string().describe('What to do'),
    errors: z
      .array(z.object({ code: z.string(), detail: z.string() }))
      .optional()
      .describe('All that is wrong, where it is more than one thing'),
  }),
);
export type Problem = z.output<typeof problem>;

const place = z.string().min(1).max(4096);

export const runRequest = named(
  'runRequest',
  z.strictObject({
    basinFile: place.describe('Path of the basin file on the machine of the coordinator'),
    set: z
      .record(z.string().max(200), z.string().max(4096))
      .optional()
      .describe('Values of the basin file to change, by dotted key: { "grid.tile": "256" }; each is read as YAML'),
    out: place.optional().describe('Folder or s3://bucket/prefix of the output instead of the one in the basin file'),
  }),
) satisfies z.ZodType<RunRequest>;

export const execute = named(
  'execute',
  z.strictObject({
    inputs: runRequest,
    response: z.literal('document').optional().describe('The only form of results there is'),
  }),
);

export const JOB_STATUSES = ['accepted', 'running', 'successful', 'failed', 'dismissed'] as const;
export const jobStatus = z.enum(JOB_STATUSES);
export type JobStatus = z.output<typeof jobStatus>;

export const stageCounts = named(
  'stageCounts',
  z.object({
    total: count.describe('Jobs of the stage'),
    done: count.describe('Done in this run'),
    kept: count.describe('Found done from an earlier run'),
    setAside: count.describe('Failed for good and set aside'),
  }),
);

export const statusInfo = named(
  'statusInfo',
  z.object({
    jobID: z.string(),
    processID: z.string(),
    type: z.literal('process'),
    status: jobStatus,
    message: z.string().describe('The status in words'),
    created: moment,
    started: moment.optional(),
    finished: moment.optional(),
    updated: moment,
    progress: z.number().int().min(0).max(100).describe('Share of the work that is done, %, roughly'),
    basin: z.string().describe('Name of the basin'),
    basinFile: z.string(),
    stages: z.record(z.string(), stageCounts).describe('Counts of every stage that has begun'),
    setAside: count.describe('Tiles, scenes, passes and products that were set aside or noted; see failures'),
    exception: z
      .object({
        type: z.string(),
        title: z.string(),
        status: z.number().int(),
        detail: z.string(),
        code: z.string(),
        remedy: z.string(),
      })
      .optional()
      .describe('Why the run failed'),
    links,
  }),
);
export type StatusInfo = z.output<typeof statusInfo>;

/** A parameter that may be given several times, or once with commas. */
const listOf = <T extends z.ZodType>(item: T) =>
  z.preprocess((value) => [value].flat().flatMap((text) => String(text).split(',')), z.array(item));

export const jobListQuery = z.strictObject({
  limit: z.coerce.number().int().min(1).max(1000).default(10).describe('Most runs in one answer'),
  status: listOf(jobStatus)
    .optional()
    .describe(`Only runs of these statuses: ${JOB_STATUSES.join(', ')}`),
  processID: listOf(z.string()).optional().describe(`Only runs of these processes; all are of ${PROCESS_ID}`),
  type: listOf(z.literal('process')).optional().describe('Only jobs of these types; all are "process"'),
  after: z.string().optional().describe('The page after this run; taken from the link "next"'),
});
export type JobListQuery = z.output<typeof jobListQuery>;

export const jobList = named('jobList', z.object({ jobs: z.array(statusInfo), links }));

export const landingPage = named('landingPage', z.object({ title: z.string(), description: z.string(), links }));

export const confClasses = named('confClasses', z.object({ conformsTo: z.array(z.string()) }));

const summary = {
  id: z.string(),
  version: z.string(),
  title: z.string(),
  description: z.string(),
  jobControlOptions: z.array(z.enum(['sync-execute', 'async-execute', 'dismiss'])),
  outputTransmission: z.array(z.enum(['value', 'reference'])),
  links,
};
const jsonSchema = z.record(z.string(), z.unknown()).describe('JSON Schema');
const input = {
  title: z.string(),
  description: z.string(),
  schema: jsonSchema,
};

export const processSummary = named('processSummary', z.object(summary));
export const processList = named('processList', z.object({ processes: z.array(processSummary), links }));
export const processDescription = named(
  'process',
  z.object({
    ...summary,
    inputs: z.record(z.string(), z.object({ ...input, minOccurs: count, maxOccurs: count })),
    outputs: z.record(z.string(), z.object(input)),
  }),
);

export const results = named(
  'results',
  z.record(z.string(), z.union([link, z.array(link)])).describe('Links to the outputs, by their names'),
);
export type Results = z.output<typeof results>;

const leftOut = named(
  'leftOut',
  z.object({
    kind: z.enum(['scene', 'pass', 'tile', 'product']),
    id: z.string(),
    gap: z.boolean().describe('True when the products lack something that was asked for'),
    error: z.object({
      code: z.string(),
      message: z.string(),
      remedy: z.string(),
      retryable: z.boolean(),
      parameters: z.record(z.string(), z.union([z.string(), z.number()])),
    }),
  }),
);

export const failures = named(
  'failures',
  z.object({
    jobID: z.string(),
    status: jobStatus,
    failures: z.array(leftOut).describe('What left a gap'),
    notes: z.array(leftOut).describe('What was left out or is doubtful, without a gap'),
    links,
  }),
);
export type Failures = z.output<typeof failures>;

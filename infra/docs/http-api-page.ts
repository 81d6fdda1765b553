import { problemsOf } from '../../services/coordinator/api/openapi.ts';
import { BODY_LIMIT, statusOf } from '../../services/coordinator/api/problem.ts';
import { changesSomething } from '../../services/coordinator/api/route.ts';
import { STREAM_EVENTS } from '../../services/coordinator/api/routes/events.ts';
import { ROUTES } from '../../services/coordinator/api/routes.ts';
import { JOB_STATUSES, type JobStatus } from '../../services/coordinator/api/schemas.ts';
import { ERROR_TABLE, type ErrorCode } from '../../shared/contract/error-table.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import { code, page, table } from './markdown.ts';

const STATUS_MEANING: Readonly<Record<JobStatus, string>> = {
  accepted: 'it is being planned: scenes, weather and region are read, no stage has begun',
  running: 'its stages are at work',
  successful: 'it is complete, perhaps with gaps: see `message`, `setAside` and the failures',
  failed: 'it ended with the error in `exception`',
  dismissed: 'it was stopped on request; a rerun goes on where it was',
};

const START = `curl -i -X POST http://localhost:8080/processes/basin-run/execution \\
  -H "Authorization: Bearer $BASINLOOM_TOKEN" -H "Content-Type: application/json" \\
  -d '{ "inputs": { "basinFile": "/data/orrin/basin.yaml", "set": { "grid.tile": "256" } } }'`;

const REST = `JOB=http://localhost:8080/jobs/20250801T060000Z-17   # from the header Location

curl $JOB                                             # how it stands
curl -N $JOB/events                                   # what happens, as it happens
curl $JOB/failures                                    # what was set aside
curl $JOB/results                                     # links to maps, tables and report
curl -X DELETE -H "Authorization: Bearer $BASINLOOM_TOKEN" $JOB        # stop
curl -X POST -H "Authorization: Bearer $BASINLOOM_TOKEN" $JOB/rerun    # try again what was set aside
curl "http://localhost:8080/jobs?status=failed&limit=20"               # look for runs`;

/** docs/reference/http-api.md: the routes of the coordinator. */
export function httpApiPage(): string {
  return page('HTTP API', [
    'The coordinator starts, shows, stops and repeats runs over HTTP. `GET /openapi.json` describes every request and ' +
      'answer as OpenAPI 3.1; `GET /` links to the rest. Jobs are shaped like those of OGC API - Processes - Part 1: ' +
      'Core, with members of our own (`basin`, `basinFile`, `stages`, `setAside`); its core conformance class is not ' +
      'claimed, because inputs by reference and raw results have no meaning here.',
    '## Requests',
    table(['Request', 'What it does', 'Token', 'Answers'], ROUTES.map(rowOf)),
    `HEAD works wherever GET does, except for the events. Bodies are JSON of ${BODY_LIMIT / 1024} KiB at most; unknown names are errors.`,
    '## Examples',
    fence(START),
    fence(REST),
    '## Statuses of a run',
    JOB_STATUSES.map((status) => `- ${code(status)}: ${STATUS_MEANING[status]}`).join('\n'),
    '`progress` is rough: jobs within a stage are counted, the shares of the stages are those of the demo basin.',
    '## Events',
    list(STREAM_EVENTS),
    'The stream begins anew with every connection: `Last-Event-ID` is not needed, since the first event says how the ' +
      'run stands. Comment lines keep a silent connection alive.',
    '## Problems',
    'What goes wrong is told as `application/problem+json` (RFC 9457) with the `code` and `remedy` of the error table ' +
      '([errors.md](errors.md)) and an `instance` that stands in the log too. Where several things are wrong, `errors` ' +
      'lists all. Errors of the table that the API answers with have these statuses:',
    table(['Status', 'Codes'], statusRows()),
    'The results of a failed run answer with its error.',
    '## Who may do what',
    [
      '- The API listens on 127.0.0.1 unless `BASINLOOM_HTTP_HOST` says otherwise. On a loopback address it answers to ' +
        'the names localhost, 127.0.0.1 and [::1] only.',
      '- To look needs no token: let only those reach the port who may see every run. It speaks plain HTTP; across a ' +
        'network put a proxy with TLS before it.',
      '- To change something needs `Authorization: Bearer <token>` with the value of `BASINLOOM_TOKEN`. Without a token ' +
        'in the settings nothing can be changed.',
      '- Basin file, `out` and every place that the basin file names must lie in the folders of `BASINLOOM_ROOTS`, ' +
        'links followed. URLs must begin with one of `BASINLOOM_URLS`: same scheme, host and port, whole names of the ' +
        'path, no user or password, no `..` in any spelling. The key `engine` is not among them: the coordinator has ' +
        'its own queue.',
      '- What lies inside the roots is trusted: a station list may name tables anywhere, and ' +
        'whoever can write there can change a file after it was checked.',
    ].join('\n'),
  ]);
}

function rowOf(route: (typeof ROUTES)[number]): string[] {
  const answers = [...Object.keys(route.answers), ...problemsOf(route)].join(', ');
  return [code(`${route.method} ${route.path}`), route.summary, changesSomething(route) ? 'yes' : 'no', answers];
}

function list(entries: Readonly<Record<string, string>>): string {
  return Object.entries(entries)
    .map(([name, meaning]) => `- ${code(name)}: ${meaning}`)
    .join('\n');
}

/** By status, the codes that have it; all others are 500. */
function statusRows(): string[][] {
  const codes = Object.keys(ERROR_TABLE) as ErrorCode[];
  const byStatus = Map.groupBy(codes, (name) => statusOf(new BasinloomError(name)));
  return [...byStatus].sort(([a], [b]) => a - b).map(([status, names]) => [String(status), names.map(code).join(', ')]);
}

function fence(text: string): string {
  return `\`\`\`sh\n${text}\n\`\`\``;
}

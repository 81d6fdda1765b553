import { randomUUID } from 'node:crypto';
import {
  type FastifyBaseLogger,
  type FastifyInstance,
  type FastifyReply,
  type FastifyRequest,
  fastify,
  LogController,
} from 'fastify';
import type { Logger } from 'pino';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import type { Store } from '../../../shared/store/store.ts';
import type { Runs } from '../runs.ts';
import { AllowedPlaces } from './allowed.ts';
import { answerClientError } from './client-error.ts';
import { EventStreams } from './event-stream.ts';
import { checkLoopbackHost, checkToken, SECURITY_HEADERS } from './guards.ts';
import { openApiDocument } from './openapi.ts';
import { parseCall } from './parse-call.ts';
import { BODY_LIMIT, PROBLEM_TYPE, problemOf } from './problem.ts';
import { type ApiParts, type ApiRoute, changesSomething } from './route.ts';
import { methodsOf, ROUTES } from './routes.ts';

export interface ApiOptions {
  readonly runs: Runs;
  /** Of requests that change something; without it they are refused. */
  readonly token?: string;
  /** Absolute folders in which all that a request names must lie. */
  readonly roots: readonly string[];
  /** How the URLs begin that a request may name. */
  readonly urls: readonly string[];
  readonly log: Logger;
  readonly openStore: (location: string) => Store;
  /** True when only this machine is served: other names in the Host header are refused. */
  readonly isLocal: boolean;
  /** Most event streams at a time. */
  readonly maxStreams: number;
  /** How often a silent event stream shows that it lives, ms. */
  readonly heartbeatMs: number;
}

/** How long a request may take to come in, and an idle connection stays, ms. Answers may take as long as they need. */
const TIMEOUTS = { requestTimeout: 30_000, keepAliveTimeout: 10_000, http: { headersTimeout: 10_000 } };

const SECRETS = ['authorization', 'headers.authorization', 'req.headers.authorization', 'token', '*.token'];

/** The HTTP API, not listening yet. @throws BasinloomError ENVIRONMENT for roots or urls that are none */
export function buildApi(options: ApiOptions): FastifyInstance {
  const { runs, token, log, openStore, isLocal, maxStreams: limit, heartbeatMs } = options;
  const parts: ApiParts = {
    runs,
    allowed: new AllowedPlaces(options),
    streams: new EventStreams({ limit, heartbeatMs }),
    openStore,
    document: openApiDocument(ROUTES),
    log,
  };
  const app = fastify({
    ...TIMEOUTS,
    bodyLimit: BODY_LIMIT,
    genReqId: () => randomUUID(),
    loggerInstance: log.child({ part: 'api' }, { redact: SECRETS }) as FastifyBaseLogger,
    logController: new LogController({ disableRequestLogging: true }),
    clientErrorHandler: answerClientError,
    frameworkErrors: (error, request, reply) => answerProblem(error, request, reply),
  });
  readJsonOnly(app);
  app.addHook('onRequest', async (request, reply) => {
    reply.headers(SECURITY_HEADERS);
    if (isLocal) checkLoopbackHost(request.headers.host);
  });
  app.addHook('onResponse', async (request, reply) => logAnswer(request, reply));
  app.addHook('preClose', async () => parts.streams.close());
  app.setErrorHandler(answerProblem);
  app.setNotFoundHandler(answerNotFound);
  for (const route of ROUTES) addRoute(app, route, parts, token);
  return app;
}

function addRoute(app: FastifyInstance, route: ApiRoute, api: ApiParts, token: string | undefined): void {
  app.route({
    method: route.method,
    url: route.path.replaceAll(/\{(\w+)\}/g, ':$1'),
    // A stream has no head without its body.
    exposeHeadRoute: !Object.values(route.answers).some(({ mediaType }) => mediaType === 'text/event-stream'),
    // Before the body is read: who may not change anything need not be listened to.
    onRequest: async (request) => {
      if (changesSomething(route)) checkToken(token, request.headers.authorization);
    },
    handler: async (request, reply) => route.handle({ ...parseCall(route, request), api, request, reply }),
  });
}

/** JSON is the only body; none at all is fine where none is needed, whatever its header says. */
function readJsonOnly(app: FastifyInstance): void {
  app.removeAllContentTypeParsers();
  const parse = app.getDefaultJsonParser('error', 'error');
  app.addContentTypeParser('application/json', { parseAs: 'string' }, (request, body, done) => {
    if (body === '') done(null, undefined);
    else parse(request, body as string, done);
  });
}

function answerProblem(error: unknown, request: FastifyRequest, reply: FastifyReply): FastifyReply {
  const problem = problemOf(error, `urn:uuid:${request.id}`);
  if (problem.status >= 500) request.log.error({ err: error, instance: problem.instance }, 'request failed');
  if (problem.status === 401) reply.header('www-authenticate', 'Bearer realm="basinloom"');
  if (problem.status === 503) reply.header('retry-after', '10');
  // Here too: an address that cannot be read gets no further than this.
  reply.headers(SECURITY_HEADERS);
  return reply.code(problem.status).type(PROBLEM_TYPE).send(JSON.stringify(problem));
}

function answerNotFound(request: FastifyRequest, reply: FastifyReply): FastifyReply {
  const path = request.url.replace(/\?.*$/, '').slice(0, 200);
  const allowed = methodsOf(path);
  if (allowed.length === 0) return answerProblem(new BasinloomError('REQUEST_ADDRESS', { path }), request, reply);
  reply.header('allow', allowed.join(', '));
  const { method } = request;
  const error = new BasinloomError('REQUEST_METHOD', { path, method, allowed: allowed.join(' or ') });
  return answerProblem(error, request, reply);
}

/** One line an answer; those that only look are many, and of little interest. */
function logAnswer(request: FastifyRequest, reply: FastifyReply): void {
  const level = request.method === 'GET' || request.method === 'HEAD' ? 'debug' : 'info';
  const line = {
    method: request.method,
    url: request.url,
    status: reply.statusCode,
    ms: Math.round(reply.elapsedTime),
  };
  request.log[level](line, 'answered');
}

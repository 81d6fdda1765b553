import { SOFTWARE } from '../../../../shared/service/software.ts';
import { type ApiRoute, route } from '../route.ts';
import { confClasses, type Link, landingPage } from '../schemas.ts';

const REL = 'http://www.opengis.net/def/rel/ogc/1.0';
const OPENAPI_TYPE = 'application/vnd.oai.openapi+json;version=3.1';

const LINKS: readonly Link[] = [
  { href: '/', rel: 'self', type: 'application/json', title: 'this document' },
  { href: '/openapi.json', rel: 'service-desc', type: OPENAPI_TYPE, title: 'the API in the words of OpenAPI 3.1' },
  { href: '/conformance', rel: `${REL}/conformance`, type: 'application/json', title: 'standards that it holds to' },
  { href: '/conformance', rel: 'conformance', type: 'application/json', title: 'standards that it holds to' },
  { href: '/processes', rel: `${REL}/processes`, type: 'application/json', title: 'what can be run' },
  { href: '/jobs', rel: `${REL}/job-list`, type: 'application/json', title: 'runs' },
];

/**
 * Conformance classes that hold as a whole. Jobs are shaped like OGC API - Processes - Part 1, but its core class is
 * not claimed: inputs by reference and raw results have no meaning here.
 */
const CONFORMS_TO = ['core', 'landing-page', 'json'].map(
  (name) => `http://www.opengis.net/spec/ogcapi-common-1/1.0/conf/${name}`,
);

export const landingRoutes: readonly ApiRoute[] = [
  route({
    method: 'GET',
    path: '/',
    operationId: 'getLandingPage',
    summary: 'Links to everything else',
    answers: { 200: { description: 'The links', schema: landingPage } },
    problems: [],
    handle: async () => ({
      title: SOFTWARE.name,
      description: 'Runs of basin-wide evapotranspiration maps: start, watch, stop, repeat, fetch.',
      links: LINKS,
    }),
  }),
  route({
    method: 'GET',
    path: '/conformance',
    operationId: 'getConformance',
    summary: 'Standards that the API holds to',
    answers: { 200: { description: 'Conformance classes', schema: confClasses } },
    problems: [],
    handle: async () => ({ conformsTo: CONFORMS_TO }),
  }),
  route({
    method: 'GET',
    path: '/openapi.json',
    operationId: 'getApiDefinition',
    summary: 'This description, as OpenAPI 3.1',
    answers: { 200: { description: 'The OpenAPI document', mediaType: OPENAPI_TYPE } },
    problems: [],
    handle: async ({ api, reply }) => {
      reply.type(OPENAPI_TYPE);
      return JSON.stringify(api.document);
    },
  }),
];

import { pino } from 'pino';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { buildApi } from '../../../services/coordinator/api/build-api.ts';
import { openApiDocument } from '../../../services/coordinator/api/openapi.ts';
import { ROUTES } from '../../../services/coordinator/api/routes.ts';
import { confClasses, landingPage } from '../../../services/coordinator/api/schemas.ts';
import { LocalStore } from '../../../shared/store/local-store.ts';
import { apiServer } from '../../support/api-server.ts';
import { FakeRuns } from '../../support/fake-runs.ts';

type Node = Record<string, unknown>;
interface Operation {
  readonly operationId: string;
  readonly summary: string;
  readonly parameters: readonly { name: string; in: string; required: boolean; schema: Node }[];
  readonly requestBody?: { readonly content: Record<string, { schema: Node }> };
  readonly responses: Record<string, Node>;
  readonly security: readonly object[];
}
interface Document extends Node {
  readonly openapi: string;
  readonly info: Node;
  readonly paths: Record<string, Record<string, Operation>>;
  readonly components: { readonly schemas: Record<string, Node>; readonly responses: Record<string, Node> };
}

const document = JSON.parse(JSON.stringify(openApiDocument(ROUTES))) as Document;
const operations = Object.entries(document.paths).flatMap(([path, item]) =>
  Object.entries(item).map(([method, operation]) => ({ path, method, operation })),
);

function* nodesIn(value: unknown): Generator<Node> {
  if (typeof value !== 'object' || value === null) return;
  if (!Array.isArray(value)) yield value as Node;
  for (const child of Object.values(value)) yield* nodesIn(child);
}

function resolve(reference: string): unknown {
  const [hash, ...path] = reference.split('/');
  expect(hash).toBe('#');
  return path.reduce<unknown>((node, name) => (node as Node | undefined)?.[name], document);
}

// Rules are those of the OpenAPI Specification 3.1.1 (section named) and RFC 9457.
describe('the OpenAPI document', () => {
  it('has the version and the members that section 4.8.1 and 4.8.2 require', () => {
    expect(document.openapi).toMatch(/^3\.1\.\d+$/);
    expect(document.info).toMatchObject({ title: expect.any(String), version: expect.any(String) });
    expect(Object.keys(document).sort()).toEqual(['components', 'info', 'openapi', 'paths', 'servers']);
  });

  it('refers only to what it holds, and holds nothing that is not referred to (4.8.23)', () => {
    const references = new Set([...nodesIn(document)].flatMap(({ $ref }) => (typeof $ref === 'string' ? [$ref] : [])));
    expect(references.size).toBeGreaterThan(15);
    for (const reference of references) expect(resolve(reference), reference).toBeTypeOf('object');
    for (const part of ['schemas', 'responses'] as const) {
      for (const name of Object.keys(document.components[part])) {
        expect(name).toMatch(/^[a-zA-Z0-9._-]+$/);
        expect(references).toContain(`#/components/${part}/${name}`);
      }
    }
  });

  it('has paths and path parameters that fit each other (4.8.8, 4.8.12)', () => {
    for (const { path, operation } of operations) {
      expect(path).toMatch(/^\//);
      const inPath = [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => name);
      const declared = operation.parameters.filter((parameter) => parameter.in === 'path');
      expect(declared.map(({ name }) => name)).toEqual(inPath);
      for (const { required } of declared) expect(required).toBe(true);
      for (const { schema } of operation.parameters) expect(schema).toBeTypeOf('object');
    }
    const ids = operations.map(({ operation }) => operation.operationId);
    expect(new Set(ids).size).toBe(ids.length);
  });

  it('has answers of known status, each with a description and content (4.8.16, 4.8.17)', () => {
    for (const { operation } of operations) {
      const statuses = Object.keys(operation.responses);
      expect(statuses.some((status) => /^2\d\d$/.test(status))).toBe(true);
      for (const [status, response] of Object.entries(operation.responses)) {
        expect(status).toMatch(/^[1-5]\d\d$/);
        const target = typeof response.$ref === 'string' ? (resolve(response.$ref) as Node) : response;
        expect(target.description).toBeTruthy();
        // RFC 9457, section 3: every problem has this media type.
        const types = Object.keys(target.content as Node);
        if (Number(status) >= 400) expect(types).toEqual(['application/problem+json']);
        else expect(types).toHaveLength(1);
      }
      expect(statuses).toEqual(expect.arrayContaining(['400', '500']));
    }
  });

  it('has schemas of the dialect 2020-12 without an id or dialect of their own (4.8.24)', () => {
    for (const node of nodesIn(document.components.schemas)) {
      expect(node).not.toHaveProperty('$schema');
      expect(node).not.toHaveProperty('$id');
      expect(node).not.toHaveProperty('nullable');
    }
    // Each can be read back as a JSON Schema: zod refuses what it does not know.
    const $defs = document.components.schemas;
    for (const name of Object.keys($defs)) {
      const text = JSON.stringify({ $ref: `#/$defs/${name}`, $defs }).replaceAll('#/components/schemas/', '#/$defs/');
      expect(() => z.fromJSONSchema(JSON.parse(text)), name).not.toThrow();
    }
  });

  it('asks for the token wherever something changes, and only there', () => {
    for (const { method, operation } of operations) {
      const changes = method !== 'get';
      expect(operation.security).toEqual(changes ? [{ token: [] }] : []);
      expect('401' in operation.responses).toBe(changes);
      expect('403' in operation.responses).toBe(changes);
    }
  });

  it('describes what the request is checked against', () => {
    const { runRequest } = document.components.schemas as Record<string, { properties: Record<string, Node> }>;
    expect(runRequest).toMatchObject({ required: ['basinFile'], additionalProperties: false });
    for (const member of Object.values(runRequest.properties)) expect(member.description).toBeTruthy();
    const limit = document.paths['/jobs'].get.parameters.find(({ name }) => name === 'limit');
    expect(limit?.schema).toEqual({ type: 'integer', minimum: 1, maximum: 1000, default: 10 });
    expect(limit?.required).toBe(false);
  });
});

/** What the router says of itself, a tree of lines such as "│   └── /:jobID (GET, HEAD)", as methods with paths. */
function routesIn(tree: string): string[] {
  const above: string[] = [];
  return tree.split('\n').flatMap((line) => {
    const [, indent, part, methods = ''] = /^([│ ]*)[├└]── (\S+)(?: \(([A-Z, ]+)\))?$/.exec(line) ?? [];
    if (part === undefined) return [];
    const depth = indent.length / 4;
    const path = [...above.slice(0, depth), part].join('').replaceAll(/:(\w+)/g, '{$1}');
    above[depth] = part;
    const all = methods.split(', ').filter((method) => method !== '');
    // HEAD comes with GET (RFC 9110, section 9.3.2).
    return all.filter((method) => method !== 'HEAD').map((method) => `${method} ${path}`);
  });
}

describe('document and server', () => {
  it('have the same operations', async () => {
    const app = buildApi({
      runs: new FakeRuns('/'),
      roots: [],
      urls: [],
      log: pino({ enabled: false }),
      openStore: (location) => new LocalStore(location),
      isLocal: true,
      maxStreams: 1,
      heartbeatMs: 1000,
    });
    await app.ready();
    const served = routesIn(app.printRoutes({ commonPrefix: false }));
    await app.close();
    expect(served.sort()).toEqual(operations.map(({ method, path }) => `${method.toUpperCase()} ${path}`).sort());
    expect(served.length).toBe(ROUTES.length);
  });

  it('are joined: what is served is this document, and every link of the landing page leads somewhere', async () => {
    const server = await apiServer();
    try {
      const answer = await server.fetch('/openapi.json');
      expect(answer.headers.get('content-type')).toMatch(/^application\/vnd\.oai\.openapi\+json/);
      expect(await answer.json()).toEqual(document);
      const { links } = landingPage.strict().parse(await (await server.fetch('/')).json());
      for (const { href, type } of links) {
        const target = await server.fetch(href);
        expect(target.status, href).toBe(200);
        expect(target.headers.get('content-type')).toContain(type?.split(';')[0]);
      }
      // OGC 19-072 (OGC API - Common - Part 1), /req/landing-page/root-success: these relations
      expect(links.map(({ rel }) => rel)).toEqual(expect.arrayContaining(['self', 'service-desc', 'conformance']));
      // OGC 18-062r2, /req/core/landingpage-success: and these
      const ogc = 'http://www.opengis.net/def/rel/ogc/1.0';
      expect(links.map(({ rel }) => rel)).toEqual(expect.arrayContaining([`${ogc}/conformance`, `${ogc}/processes`]));
      const { conformsTo } = confClasses.parse(await (await server.fetch('/conformance')).json());
      expect(conformsTo).toContain('http://www.opengis.net/spec/ogcapi-common-1/1.0/conf/core');
    } finally {
      await server.close();
    }
  });
});

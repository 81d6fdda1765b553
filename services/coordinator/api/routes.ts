import type { ApiRoute } from './route.ts';
import { eventRoutes } from './routes/events.ts';
import { jobRoutes } from './routes/jobs.ts';
import { landingRoutes } from './routes/landing.ts';
import { processRoutes } from './routes/processes.ts';
import { resultRoutes } from './routes/results.ts';

/** Every operation of the API. */
export const ROUTES: readonly ApiRoute[] = [
  ...landingRoutes,
  ...processRoutes,
  ...jobRoutes,
  ...resultRoutes,
  ...eventRoutes,
];

/** The methods that an address answers, for any of its operations; empty where there is nothing. */
export function methodsOf(path: string): string[] {
  const methods = ROUTES.filter((route) => patternOf(route.path).test(path)).map(({ method }) => method);
  return methods.flatMap((method) => (method === 'GET' ? ['GET', 'HEAD'] : [method]));
}

function patternOf(template: string): RegExp {
  return new RegExp(`^${template.replaceAll('.', '\\.').replaceAll(/\{\w+\}/g, '[^/]+')}$`);
}

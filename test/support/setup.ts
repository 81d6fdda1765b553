import { installRedis } from './redis.ts';

/** Once before all tests. */
export default function setup(): void {
  installRedis();
}

import { fileURLToPath } from 'node:url';
import asc from 'assemblyscript/asc';

/**
 * Builds flux-kernel.wasm from assembly/: `npm ci` does it by itself. SIMD of the standard only: relaxed SIMD gives
 * other bits on other machines.
 */
const here = (name: string) => fileURLToPath(new URL(name, import.meta.url));
const { error, stderr } = await asc.main([
  here('./assembly/index.ts'),
  '--outFile',
  here('./flux-kernel.wasm'),
  '--optimizeLevel',
  '3',
  '--shrinkLevel',
  '0',
  '--converge',
  '--noAssert',
  '--runtime',
  'stub',
  '--enable',
  'simd',
  '--use',
  'abort=',
]);
if (error) {
  process.stderr.write(`${error.message}\n${stderr.toString()}`);
  process.exitCode = 1;
}

// The METRIC chain of the kernel (level land) in plain C: the same equations, start and number of passes, with libm
// in place of the kernel's own functions and fits, left to the compiler to vectorise.
// Compiled by test/bench/kernel.ts; prints the median pixels per second and writes the day fraction for comparison.
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

enum { RED, NIR, ALBEDO, LST, ELEVATION, SUN_UP, AIR, VAPOUR, WIND, REFERENCE, INPUTS };
enum { RN, G, H, LE, EF, DAY, OUTPUTS };
#define BLOCK 256

typedef struct {
  float slope, zero, datum, lapse, turbidity, sun;
} Parameters;

static inline void terms(float w, float lnr, float *a, float *b) {
  float wp = fmaxf(w, 0.0f), st = fminf(fmaxf(w * -0.125f, 0.0f), 1.0f);
  float y = sqrtf(1.0f + 200.0f * wp), x = sqrtf(y), x1 = x + 1.0f;
  float psi = logf(x1 * x1 * (y + 1.0f) * 0.125f) + 2.0f * atanf(1.0f / x) - 1.57079633f;
  *a = lnr + 5.0f * st - psi;
  *b = 2.99573227f + 4.75f * st - 2.0f * logf((1.0f + sqrtf(1.0f + 2.0f * wp)) / (1.0f + sqrtf(1.0f + 0.1f * wp)));
}

static void chain(float *const *planesIn, float *const *planesOut, long n, const Parameters *given) {
  const Parameters kept = *given, *p = &kept;
  float lnr[BLOCK], drive[BLOCK], heat[BLOCK], w[BLOCK], wb[BLOCK], gb[BLOCK];
  for (long base = 0; base < n; base += BLOCK) {
    // Local pointers and ivdep: without them the compiler fears that planes overlap, and does not vectorise.
    const float *in[INPUTS];
    float *out[OUTPUTS];
    for (int k = 0; k < INPUTS; k++) in[k] = planesIn[k];
    for (int k = 0; k < OUTPUTS; k++) out[k] = planesOut[k];
#pragma GCC ivdep
    for (int j = 0; j < BLOCK; j++) {
      long i = base + j;
      float red = in[RED][i], nir = in[NIR][i], lst = in[LST][i], z = in[ELEVATION][i], up = in[SUN_UP][i];
      float df = nir - red, sm = nir + red, ndvi = df / sm, savi = 1.1f * df / (sm + 0.1f);
      float lai = savi > 0.687f ? 6.0f : fminf(fmaxf(logf((0.69f - savi) * (1.0f / 0.59f)) * (-1.0f / 0.91f), 0.0f), 6.0f);
      float emis = ndvi < 0.0f ? 0.985f : lai > 3.0f ? 0.98f : 0.95f + 0.01f * lai;
      float pr = 101.3f * powf(1.0f - (0.0065f / 293.0f) * z, 5.26f);
      float water = 0.14f * in[VAPOUR][i] * pr + 2.1f;
      float tau = 0.35f + 0.627f * expf(-0.00146f * pr / (p->turbidity * up) - 0.075f * powf(water / up, 0.4f));
      float air = in[AIR][i] - p->lapse * z, a2 = air * air, t2 = lst * lst;
      float lw = 5.67e-8f * (0.85f * powf(-logf(tau), 0.09f) * a2 * a2 - t2 * t2);
      float rn = (1.0f - in[ALBEDO][i]) * p->sun * tau * fmaxf(up, 0.0f) + emis * lw;
      float g = ndvi < 0.0f ? 0.5f * rn
                            : lai < 0.5f ? 1.8f * (lst - 273.15f) + 0.084f * rn : rn * (0.05f + 0.18f * expf(-0.521f * lai));
      float dT = p->slope * ((lst - p->zero) + p->lapse * (z - p->datum)), u = in[WIND][i];
      out[RN][i] = rn;
      out[G][i] = g;
      lnr[j] = 5.29831737f - logf(fmaxf(0.018f * lai, 0.005f));
      drive[j] = 16.0f * 9.81f * dT / (lst * u * u);
      heat[j] = pr * (float)(1000.0 / (1.01 * 287.0) * 1004.0 * 0.41 * 0.41) * dT * u / (lst - dT);
      float neutral = drive[j] * lnr[j] * lnr[j] / 2.99573227f;
      wb[j] = neutral / (1.0f + 0.24f * (sqrtf(sqrtf(1.0f + 200.0f * fmaxf(neutral, 0.0f))) - 1.0f));
    }
    for (int pass = 0; pass < 5; pass++) {
      for (int j = 0; j < BLOCK; j++) {
        float now = pass ? w[j] : wb[j], a, b;
        terms(now, lnr[j], &a, &b);
        float g = drive[j] * a * a / b - now;
        if (pass) {
          float rise = g - gb[j], ratio = rise != 0.0f ? (now - wb[j]) / rise : -0.5f;
          w[j] = now - g * fminf(-0.25f, fmaxf(-1.6f, ratio));
        } else {
          w[j] = now + 0.65f * g;
        }
        wb[j] = now;
        gb[j] = g;
      }
    }
#pragma GCC ivdep
    for (int j = 0; j < BLOCK; j++) {
      long i = base + j;
      float a, b, av = out[RN][i] - out[G][i];
      terms(w[j], lnr[j], &a, &b);
      float h = heat[j] / (a * b), le = av - h;
      out[H][i] = h;
      out[LE][i] = le;
      out[EF][i] = le / av;
      out[DAY][i] = 0.0036f * le / ((2.501f - 0.00236f * (in[LST][i] - 273.15f)) * in[REFERENCE][i]);
    }
  }
}

static double seconds(void) {
  struct timespec t;
  clock_gettime(CLOCK_MONOTONIC, &t);
  return t.tv_sec + t.tv_nsec * 1e-9;
}
static int ascending(const void *a, const void *b) {
  double d = *(const double *)a - *(const double *)b;
  return d < 0 ? -1 : d > 0;
}

// kernel INPUT OUTPUT PIXELS RUNS: INPUT holds the planes one after another, then the parameters.
int main(int argc, char **argv) {
  if (argc != 5) return 2;
  long n = atol(argv[3]);
  int runs = atoi(argv[4]);
  float *in[INPUTS], *out[OUTPUTS];
  Parameters p;
  FILE *f = fopen(argv[1], "rb");
  if (!f) return 1;
  for (int k = 0; k < INPUTS; k++) {
    in[k] = aligned_alloc(64, n * 4 + 4096);
    if (fread(in[k], 4, n, f) != (size_t)n) return 1;
  }
  if (fread(&p, sizeof p, 1, f) != 1) return 1;
  fclose(f);
  for (int k = 0; k < OUTPUTS; k++) out[k] = aligned_alloc(64, n * 4 + 4096);
  double *times = malloc(runs * sizeof(double));
  chain(in, out, n, &p);
  for (int r = 0; r < runs; r++) {
    double start = seconds();
    chain(in, out, n, &p);
    times[r] = seconds() - start;
  }
  qsort(times, runs, sizeof(double), ascending);
  printf("%.0f\n", n / times[runs / 2]);
  f = fopen(argv[2], "wb");
  fwrite(out[DAY], 4, n, f);
  fclose(f);
  return 0;
}

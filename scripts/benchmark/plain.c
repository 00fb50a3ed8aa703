/* The three graphs of the benchmark in plain C, with the same formulas and filters as rtfx, a block at a time: each
   stage of the filters and the clip run over the whole block in loops that the compiler can vectorise as they stand.
   TAPS1..3 (every second tap of the halfbands) and N1..3 are generated in front of this file; blocks are 64 frames. */
#include <math.h>
#include <string.h>

enum { BLOCK = 64, LANES = 16, PAST = 64, PAD = 5, DRY = 47 };

static double sine(double cycles) {
    double t = cycles - 0.5, q = copysign(0.25 - fabs(fabs(t) - 0.25), -t), s = q * q;
    double e = -0.6925067010720717;
    e = e * s + 3.817365633469135;
    e = e * s - 15.09450614073429;
    e = e * s + 42.05868995395094;
    e = e * s - 76.70585968962867;
    e = e * s + 81.60524927557977;
    e = e * s - 41.341702240398284;
    e = e * s + 6.283185307179585;
    return q * e;
}

typedef struct { double line[PAST + 4 * BLOCK]; } Line;
typedef struct { Line in, even, odd; } Half;

/* y[i] = sum of taps[k] x[i - k]; x has n - 1 older samples before it */
static void fir(const double *taps, int n, const double *x, int m, double *y) {
    for (int i0 = 0; i0 < m; i0 += LANES) {
        double sum[LANES] = {0};
        for (int k = 0; k < n; k++)
            for (int i = 0; i < LANES; i++) sum[i] += taps[k] * x[i0 + i - k];
        for (int i = 0; i < LANES; i++) y[i0 + i] = sum[i];
    }
}

static void up(Half *f, const double *taps, int n, const double *x, int m, double *y) {
    double filtered[4 * BLOCK], *now = f->in.line + n - 1;
    memcpy(now, x, m * sizeof *x);
    fir(taps, n, now, m, filtered);
    for (int i = 0; i < m; i++) {
        y[2 * i] = 2 * filtered[i];
        y[2 * i + 1] = now[i - (n / 2 - 1)];
    }
    memmove(f->in.line, f->in.line + m, (n - 1) * sizeof *x);
}

static void down(Half *f, const double *taps, int n, const double *x, int m, double *y) {
    double *even = f->even.line + n - 1, *odd = f->odd.line + n - 1;
    for (int i = 0; i < m; i++) {
        even[i] = x[2 * i];
        odd[i] = x[2 * i + 1];
    }
    fir(taps, n, even, m, y);
    for (int i = 0; i < m; i++) y[i] += 0.5 * odd[i - n / 2];
    memmove(f->even.line, f->even.line + m, (n - 1) * sizeof *x);
    memmove(f->odd.line, f->odd.line + m, (n - 1) * sizeof *x);
}

typedef struct {
    Half u[3], d[3];
    double phase, last, root, a0, a1, pad[PAD], dry[DRY];
    double hs1, hs2, ls1, ls2;
} State;

static void clip(State *s, const double *x, int m, double drive, double *y) {
    double p[16 * BLOCK + 1], r[16 * BLOCK + 1], a[16 * BLOCK + 2];
    p[0] = s->last;
    a[0] = s->a0;
    a[1] = s->a1;
    for (int j = 0; j < m; j++) p[2 * j + 2] = x[j] * drive;
    for (int j = 0; j < m; j++) p[2 * j + 1] = p[2 * j] + (p[2 * j + 2] - p[2 * j]) * 0.5;
    for (int j = 0; j <= 2 * m; j++) r[j] = sqrt(1 + p[j] * p[j]);
    for (int j = 0; j < 2 * m; j++) a[j + 2] = (p[j] + p[j + 1]) / (r[j] + r[j + 1]);
    for (int j = 0; j < m; j++) y[j] = (a[2 * j] + 3 * (a[2 * j + 1] + a[2 * j + 2]) + a[2 * j + 3]) * 0.125;
    s->last = p[2 * m];
    s->a0 = a[2 * m];
    s->a1 = a[2 * m + 1];
}

static double carrier(State *s, double step) {
    double y = sine(s->phase);
    s->phase += step;
    if (s->phase >= 1) s->phase -= 1;
    return y;
}

static void driven(State *s, const double *x, double *y, double drive, double step) {
    double x2[2 * BLOCK], x4[4 * BLOCK], x8[8 * BLOCK], wet[8 * BLOCK + PAD];
    up(&s->u[0], TAPS1, N1, x, BLOCK, x2);
    up(&s->u[1], TAPS2, N2, x2, 2 * BLOCK, x4);
    up(&s->u[2], TAPS3, N3, x4, 4 * BLOCK, x8);
    memcpy(wet, s->pad, sizeof s->pad);
    clip(s, x8, 8 * BLOCK, drive, wet + PAD);
    memcpy(s->pad, wet + 8 * BLOCK, sizeof s->pad);
    down(&s->d[2], TAPS3, N3, wet, 4 * BLOCK, x4);
    down(&s->d[1], TAPS2, N2, x4, 2 * BLOCK, x2);
    down(&s->d[0], TAPS1, N1, x2, BLOCK, y);
    for (int i = 0; i < BLOCK; i++) y[i] *= carrier(s, step);
}

typedef void (*Graph)(const float *, double *, State *, const double *);

void repeat(Graph graph, const float *in, double *out, long blocks, State *s, const double *c) {
    for (long i = 0; i < blocks; i++) graph(in + i * BLOCK, out + 2 * i * BLOCK, s, c);
}

int state_size(void) { return sizeof(State); }
void reset(State *s) { memset(s, 0, sizeof *s); }

void balanced(const float *in, double *out, State *s, const double *c) {
    for (long i = 0; i < BLOCK; i++) out[2 * i] = out[2 * i + 1] = in[i] * carrier(s, c[0]);
}

void driven_balanced(const float *in, double *out, State *s, const double *c) {
    double x[BLOCK], y[BLOCK];
    for (int i = 0; i < BLOCK; i++) x[i] = in[i];
    driven(s, x, y, c[1], c[0]);
    for (int i = 0; i < BLOCK; i++) out[2 * i] = out[2 * i + 1] = y[i];
}

static double svf(double x, const double *c, double *s1, double *s2, double *low) {
    double band = (*s1 + c[0] * (x - *s2)) / (1 + c[0] * (c[0] + c[1]));
    *low = *s2 + c[0] * band;
    *s1 = 2 * band - *s1;
    *s2 = 2 * *low - *s2;
    return x - c[1] * band - *low;
}

void six_blocks(const float *in, double *out, State *s, const double *c) {
    double thin[BLOCK], wet[BLOCK], dry[BLOCK + DRY], low;
    for (int i = 0; i < BLOCK; i++) thin[i] = svf(in[i], c + 3, &s->hs1, &s->hs2, &low);
    driven(s, thin, wet, c[1], c[0]);
    memcpy(dry, s->dry, sizeof s->dry);
    for (int i = 0; i < BLOCK; i++) dry[DRY + i] = in[i];
    memcpy(s->dry, dry + BLOCK, sizeof s->dry);
    for (int i = 0; i < BLOCK; i++) {
        svf((1 - c[2]) * dry[i] + c[2] * wet[i], c + 5, &s->ls1, &s->ls2, &low);
        out[2 * i] = out[2 * i + 1] = low;
    }
}

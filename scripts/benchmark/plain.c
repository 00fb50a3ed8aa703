/* The three graphs of the benchmark in plain C, sample by sample, with the same formulas and filters as rtfx.
   TAPS1..3 (every second tap of the halfbands) are generated in front of this file. */
#include <math.h>
#include <string.h>

#define DOUBLES(n) (sizeof(double) * (n))

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

typedef struct { double line[2][128]; int at; } History;

static void put(History *h, double x, int n) {
    h->at = h->at ? h->at - 1 : n - 1;
    h->line[0][h->at] = x;
    h->line[0][h->at + n] = x;
}

static double dot(const double *taps, const double *x, int n) {
    double sum = 0;
    for (int i = 0; i < n; i++) sum += taps[i] * x[i];
    return sum;
}

typedef struct { History in, even, odd; } Half;

static void up(Half *f, const double *taps, int n, double x, double *y) {
    put(&f->in, x, n);
    const double *line = f->in.line[0] + f->in.at;
    y[0] = 2 * dot(taps, line, n);
    y[1] = line[n / 2 - 1];
}

static double down(Half *f, const double *taps, int n, double even, double odd) {
    put(&f->even, even, n);
    double plain = 0.5 * f->odd.line[0][f->odd.at + n / 2 - 1];
    put(&f->odd, odd, n);
    return dot(taps, f->even.line[0] + f->even.at, n) + plain;
}

typedef struct {
    Half u[3], d[3];
    double phase, last, root, a0, a1, pad[8];
    int pad_at;
    double hs1, hs2, ls1, ls2, dry[64];
    int dry_at;
} State;

static void raise8(State *s, double x, double *y8) {
    double y2[2], y4[4];
    up(&s->u[0], TAPS1, N1, x, y2);
    for (int i = 0; i < 2; i++) up(&s->u[1], TAPS2, N2, y2[i], y4 + 2 * i);
    for (int i = 0; i < 4; i++) up(&s->u[2], TAPS3, N3, y4[i], y8 + 2 * i);
}

static double lower8(State *s, const double *y8) {
    double y2[2], y4[4];
    for (int i = 0; i < 4; i++) y4[i] = down(&s->d[2], TAPS3, N3, y8[2 * i], y8[2 * i + 1]);
    for (int i = 0; i < 2; i++) y2[i] = down(&s->d[1], TAPS2, N2, y4[2 * i], y4[2 * i + 1]);
    return down(&s->d[0], TAPS1, N1, y2[0], y2[1]);
}

static double clip(State *s, double x, double drive) {
    double v = x * drive, m = s->last + (v - s->last) * 0.5;
    double rm = sqrt(1 + m * m), rv = sqrt(1 + v * v);
    double b0 = (s->last + m) / (s->root + rm), b1 = (m + v) / (rm + rv);
    double y = (s->a0 + 3 * (s->a1 + b0) + b1) * 0.125;
    s->last = v; s->root = rv; s->a0 = b0; s->a1 = b1;
    return y;
}

static double carrier(State *s, double step) {
    double y = sine(s->phase);
    s->phase += step;
    if (s->phase >= 1) s->phase -= 1;
    return y;
}

static double wait5(State *s, double x) {
    s->pad[s->pad_at & 7] = x;
    return s->pad[(s->pad_at++ - 5) & 7];
}

static double driven(State *s, double x, double drive, double step) {
    double y8[8];
    raise8(s, x, y8);
    for (int j = 0; j < 8; j++) y8[j] = wait5(s, clip(s, y8[j], drive));
    return lower8(s, y8) * carrier(s, step);
}

typedef void (*Graph)(const float *, double *, long, State *, const double *);

void repeat(Graph graph, const float *in, double *out, long n, long blocks, State *s, const double *c) {
    for (long i = 0; i < blocks; i++) graph(in + i * n, out + 2 * i * n, n, s, c);
}

int state_size(void) { return sizeof(State); }
void reset(State *s) { memset(s, 0, sizeof *s); s->root = 1; }

void balanced(const float *in, double *out, long n, State *s, const double *c) {
    for (long i = 0; i < n; i++) out[2 * i] = out[2 * i + 1] = in[i] * carrier(s, c[0]);
}

void driven_balanced(const float *in, double *out, long n, State *s, const double *c) {
    for (long i = 0; i < n; i++) out[2 * i] = out[2 * i + 1] = driven(s, in[i], c[1], c[0]);
}

static double svf(double x, const double *c, double *s1, double *s2, double *low) {
    double band = (*s1 + c[0] * (x - *s2)) / (1 + c[0] * (c[0] + c[1]));
    *low = *s2 + c[0] * band;
    *s1 = 2 * band - *s1;
    *s2 = 2 * *low - *s2;
    return x - c[1] * band - *low;
}

void six_blocks(const float *in, double *out, long n, State *s, const double *c) {
    double low;
    for (long i = 0; i < n; i++) {
        double thin = svf(in[i], c + 3, &s->hs1, &s->hs2, &low);
        double wet = driven(s, thin, c[1], c[0]);
        s->dry[s->dry_at & 63] = in[i];
        double dry = s->dry[(s->dry_at++ - 47) & 63];
        svf((1 - c[2]) * dry + c[2] * wet, c + 5, &s->ls1, &s->ls2, &low);
        out[2 * i] = out[2 * i + 1] = low;
    }
}

/* Reader for the bench cases: volumes.csv + flows.csv -> row-compressed balance matrix.
 * dc/dt = M c + f*cfeed with M_ij = q(j->i)/V_i, M_ii = -(sum of outflows of i)/V_i, columns sorted in each row. */
#ifndef NET_H
#define NET_H
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <math.h>
#include <time.h>
#include <sys/resource.h>

typedef struct {
  int64_t n, nnz;
  int64_t *rp, *ci;   /* CSR */
  double *a;
  double *vol, *fin, *fout; /* feed flow into / flow out of each cell */
  double Q, V;
} Net;

static double now(void) {
  struct timespec t;
  clock_gettime(CLOCK_MONOTONIC, &t);
  return t.tv_sec + 1e-9 * t.tv_nsec;
}

/* peak memory of this process, kB */
static long peak_kB(void) {
  struct rusage u;
  getrusage(RUSAGE_SELF, &u);
  return u.ru_maxrss;
}

static char *slurp(const char *dir, const char *name, size_t *len) {
  char p[4096];
  snprintf(p, sizeof p, "%s/%s", dir, name);
  FILE *f = fopen(p, "rb");
  if (!f) { perror(p); exit(2); }
  fseek(f, 0, SEEK_END);
  *len = (size_t)ftell(f);
  rewind(f);
  char *b = malloc(*len + 1);
  if (fread(b, 1, *len, f) != *len) exit(2);
  b[*len] = 0;
  fclose(f);
  return b;
}

static Net net_read(const char *dir) {
  Net g;
  size_t len;
  char *b = slurp(dir, "volumes.csv", &len), *s;
  int64_t n = -1;
  for (size_t i = 0; i < len; i++) n += b[i] == '\n';
  g.n = n;
  g.vol = malloc(n * sizeof(double));
  g.fin = calloc(n, sizeof(double));
  g.fout = calloc(n, sizeof(double));
  s = strchr(b, '\n') + 1;
  for (int64_t i = 0; i < n; i++) {
    long id = strtol(s + 1, &s, 10);
    g.vol[id] = strtod(s + 1, &s);
    s++;
  }
  free(b);
  b = slurp(dir, "flows.csv", &len);
  int64_t m = -1;
  for (size_t i = 0; i < len; i++) m += b[i] == '\n';
  int64_t *fr = malloc(m * sizeof *fr), *to = malloc(m * sizeof *to), k = 0;
  double *q = malloc(m * sizeof *q), *dg = calloc(n, sizeof *dg);
  s = strchr(b, '\n') + 1;
  for (int64_t r = 0; r < m; r++) {
    int64_t f, t;
    if (*s == 'c') f = strtol(s + 1, &s, 10); else { f = -1; s = strchr(s, ','); }
    s++;
    if (*s == 'c') t = strtol(s + 1, &s, 10); else { t = -1; s = strchr(s, ','); }
    double v = strtod(s + 1, &s);
    s++;
    if (f >= 0) dg[f] += v;
    if (f < 0) { if (t >= 0) g.fin[t] += v; }
    else if (t < 0) g.fout[f] += v;
    else { fr[k] = f; to[k] = t; q[k] = v; k++; }
  }
  free(b);
  g.nnz = k + n;
  g.rp = calloc(n + 2, sizeof(int64_t));
  g.ci = malloc(g.nnz * sizeof(int64_t));
  g.a = malloc(g.nnz * sizeof(double));
  for (int64_t e = 0; e < k; e++) g.rp[to[e] + 1]++;
  for (int64_t i = 0; i < n; i++) g.rp[i + 1] += g.rp[i] + 1;
  int64_t *pos = malloc(n * sizeof *pos);
  for (int64_t i = 0; i < n; i++) { pos[i] = g.rp[i]; g.ci[pos[i]] = i; g.a[pos[i]++] = -dg[i] / g.vol[i]; }
  for (int64_t e = 0; e < k; e++) { int64_t i = to[e]; g.ci[pos[i]] = fr[e]; g.a[pos[i]++] = q[e] / g.vol[i]; }
  for (int64_t i = 0; i < n; i++)
    for (int64_t p = g.rp[i] + 1; p < g.rp[i + 1]; p++) {
      int64_t c = g.ci[p], r = p; double v = g.a[p];
      while (r > g.rp[i] && g.ci[r - 1] > c) { g.ci[r] = g.ci[r - 1]; g.a[r] = g.a[r - 1]; r--; }
      g.ci[r] = c; g.a[r] = v;
    }
  free(fr); free(to); free(q); free(dg); free(pos);
  g.Q = g.V = 0;
  for (int64_t i = 0; i < n; i++) { g.Q += g.fin[i]; g.V += g.vol[i]; }
  return g;
}

static void net_mul(const Net *g, const double *x, double *y) {
  for (int64_t i = 0; i < g->n; i++) {
    double s = 0;
    for (int64_t p = g->rp[i]; p < g->rp[i + 1]; p++) s += g->a[p] * x[g->ci[p]];
    y[i] = s;
  }
}
static double dotp(int64_t n, const double *a, const double *b) {
  double s = 0;
  for (int64_t i = 0; i < n; i++) s += a[i] * b[i];
  return s;
}
static void write_curve(const char *path, int n, const double *t, const double *e) {
  FILE *f = fopen(path, "w");
  if (!f) { perror(path); exit(2); }
  fprintf(f, "t_min,E_per_min\n");
  for (int i = 0; i < n; i++) fprintf(f, "%.17g,%.17g\n", t[i], e[i]);
  fclose(f);
}
#endif

/* P3 peer: KINSOL Newton (line search) + KLU, 4 unknowns per cell. and, as the expert's variant, KINSOL + SPGMR with
 * the 4x4 diagonal block of each cell as preconditioner. usage: p3_kinsol CASEDIR [amd|colamd|spgmr|spbcgs] */
#include <kinsol/kinsol.h>
#include <nvector/nvector_serial.h>
#include <sunlinsol/sunlinsol_klu.h>
#include <sunlinsol/sunlinsol_spgmr.h>
#include <sunlinsol/sunlinsol_spbcgs.h>
#include <sunmatrix/sunmatrix_sparse.h>
#include "net.h"
#define K1 2.0
#define K2 0.5
static Net g;
static const double feed[4] = {1.0, 1.2, 0.0, 0.0};
static int64_t *cp, *cr; static double *cx; /* column-compressed flow part */
static int fun(N_Vector u, N_Vector fv, void *d) {
  double *c = N_VGetArrayPointer(u), *f = N_VGetArrayPointer(fv);
  for (int64_t i = 0; i < g.n; i++) {
    double s[4];
    for (int k = 0; k < 4; k++) s[k] = g.fin[i] / g.vol[i] * feed[k];
    for (int64_t p = g.rp[i]; p < g.rp[i + 1]; p++) { const double *x = c + 4 * g.ci[p]; for (int k = 0; k < 4; k++) s[k] += g.a[p] * x[k]; }
    const double *x = c + 4 * i;
    double r1 = K1 * x[0] * x[1], r2 = K2 * x[2] * x[1];
    f[4 * i] = s[0] - r1; f[4 * i + 1] = s[1] - r1 - r2; f[4 * i + 2] = s[2] + r1 - r2; f[4 * i + 3] = s[3] + r2;
  }
  return 0;
}
/* local block d(reaction)/d(A,B,R,S), row-major */
static void blk(const double *x, double *b) {
  double a1 = K1 * x[1], a2 = K1 * x[0], b1 = K2 * x[1], b2 = K2 * x[2];
  double t[16] = {-a1, -a2, 0, 0, -a1, -a2 - b2, -b1, 0, a1, a2 - b2, -b1, 0, 0, b2, b1, 0};
  memcpy(b, t, sizeof t);
}
static int jac(N_Vector u, N_Vector fu, SUNMatrix J, void *d, N_Vector t1, N_Vector t2) {
  int64_t *ip = SM_INDEXPTRS_S(J), *iv = SM_INDEXVALS_S(J), k = 0;
  double *v = SM_DATA_S(J), *c = N_VGetArrayPointer(u), b[16];
  for (int64_t j = 0; j < g.n; j++) {
    blk(c + 4 * j, b);
    for (int s = 0; s < 4; s++) {
      ip[4 * j + s] = k;
      for (int64_t p = cp[j]; p < cp[j + 1]; p++) {
        if (cr[p] != j) { iv[k] = 4 * cr[p] + s; v[k++] = cx[p]; continue; }
        for (int r = 0; r < 4; r++) if (r == s || (s < 3 && b[4 * r + s] != 0) || (s == 1) ) { iv[k] = 4 * j + r; v[k++] = b[4 * r + s] + (r == s ? cx[p] : 0); }
      }
    }
  }
  ip[4 * g.n] = k;
  return 0;
}
static double *P; /* inverted 4x4 blocks */
static int psetup(N_Vector u, N_Vector us, N_Vector f, N_Vector fs, void *d) {
  double *c = N_VGetArrayPointer(u);
  for (int64_t i = 0; i < g.n; i++) {
    double b[16], *q = P + 16 * i;
    blk(c + 4 * i, b);
    for (int64_t p = cp[i]; p < cp[i + 1]; p++) if (cr[p] == i) for (int k = 0; k < 4; k++) b[5 * k] += cx[p];
    for (int k = 0; k < 16; k++) q[k] = k % 5 == 0;
    for (int k = 0; k < 4; k++) {
      double t = 1 / b[5 * k];
      for (int j = 0; j < 4; j++) { b[4 * k + j] *= t; q[4 * k + j] *= t; }
      for (int r = 0; r < 4; r++) if (r != k) {
        double m = b[4 * r + k];
        for (int j = 0; j < 4; j++) { b[4 * r + j] -= m * b[4 * k + j]; q[4 * r + j] -= m * q[4 * k + j]; }
      }
    }
  }
  return 0;
}
static int psolve(N_Vector u, N_Vector us, N_Vector f, N_Vector fs, N_Vector v, void *d) {
  double *x = N_VGetArrayPointer(v);
  for (int64_t i = 0; i < g.n; i++) {
    double t[4], *q = P + 16 * i, *y = x + 4 * i;
    for (int k = 0; k < 4; k++) t[k] = q[4 * k] * y[0] + q[4 * k + 1] * y[1] + q[4 * k + 2] * y[2] + q[4 * k + 3] * y[3];
    memcpy(y, t, sizeof t);
  }
  return 0;
}
static int jtimes(N_Vector v, N_Vector Jv, N_Vector u, booleantype *nu, void *d) {
  double *c = N_VGetArrayPointer(u), *x = N_VGetArrayPointer(v), *f = N_VGetArrayPointer(Jv), b[16];
  for (int64_t i = 0; i < g.n; i++) {
    double s[4] = {0};
    blk(c + 4 * i, b);
    for (int k = 0; k < 4; k++) for (int j = 0; j < 4; j++) s[k] += b[4 * k + j] * x[4 * i + j];
    for (int64_t p = g.rp[i]; p < g.rp[i + 1]; p++) for (int k = 0; k < 4; k++) s[k] += g.a[p] * x[4 * g.ci[p] + k];
    memcpy(f + 4 * i, s, sizeof s);
  }
  return 0;
}
int main(int argc, char **argv) {
  double t0 = now();
  g = net_read(argv[1]);
  double tread = now() - t0;
  const char *mode = argc > 2 ? argv[2] : "amd";
  int amd = !strcmp(mode, "amd"), bcg = !strcmp(mode, "spbcgs"), kry = bcg || !strcmp(mode, "spgmr");
  t0 = now();
  int64_t n = g.n;
  cp = calloc(n + 2, 8); cr = malloc(g.nnz * 8); cx = malloc(g.nnz * 8);
  for (int64_t p = 0; p < g.nnz; p++) cp[g.ci[p] + 1]++;
  for (int64_t i = 0; i < n; i++) cp[i + 1] += cp[i];
  int64_t *w = malloc(n * 8);
  memcpy(w, cp, n * 8);
  for (int64_t i = 0; i < n; i++) for (int64_t p = g.rp[i]; p < g.rp[i + 1]; p++) { int64_t q = w[g.ci[p]]++; cr[q] = i; cx[q] = g.a[p]; }
  SUNContext ctx;
  SUNContext_Create(NULL, &ctx);
  N_Vector u = N_VNew_Serial(4 * n, ctx), sc = N_VNew_Serial(4 * n, ctx);
  N_VConst(1.0, sc);
  double *c = N_VGetArrayPointer(u);
  for (int64_t i = 0; i < n; i++) { c[4 * i] = 0.3; c[4 * i + 1] = 0.4; c[4 * i + 2] = 0.5; c[4 * i + 3] = 0.2; }
  void *km = KINCreate(ctx);
  KINInit(km, fun, u);
  KINSetFuncNormTol(km, 1e-12);
  KINSetScaledStepTol(km, 1e-14);
  SUNLinearSolver ls;
  if (kry) {
    P = malloc(n * 16 * sizeof *P);
    if (bcg) ls = SUNLinSol_SPBCGS(u, SUN_PREC_RIGHT, 500, ctx);
    else { ls = SUNLinSol_SPGMR(u, SUN_PREC_RIGHT, 60, ctx); SUNLinSol_SPGMRSetMaxRestarts(ls, 10); }
    KINSetLinearSolver(km, ls, NULL);
    KINSetPreconditioner(km, psetup, psolve);
    KINSetJacTimesVecFn(km, jtimes);
    KINSetMaxSetupCalls(km, 1);
  } else {
    SUNMatrix A = SUNSparseMatrix(4 * n, 4 * n, 4 * g.nnz + 12 * n, CSC_MAT, ctx);
    ls = SUNLinSol_KLU(u, A, ctx);
    if (amd) SUNLinSol_KLUSetOrdering(ls, 0);
    KINSetLinearSolver(km, ls, A);
    KINSetJacFn(km, jac);
    KINSetMaxSetupCalls(km, 1);
  }
  int fl = KINSol(km, u, KIN_LINESEARCH, sc, sc);
  double el = now() - t0, q = 0, a = 0, r = 0, b = 0, s = 0, mn = 1;
  for (int64_t i = 0; i < n; i++) { double f = g.fout[i]; q += f; a += f * c[4 * i]; b += f * c[4 * i + 1]; r += f * c[4 * i + 2]; s += f * c[4 * i + 3]; }
  for (int64_t i = 0; i < 4 * n; i++) if (c[i] < mn) mn = c[i];
  long it, nj; double fn;
  KINGetNumNonlinSolvIters(km, &it);
  long lin = 0, lunz = 0;
  double flops = 0;
  KINGetFuncNorm(km, &fn);
  nj = it;
  if (kry) KINGetNumLinIters(km, &lin);
  else { KINGetNumJacEvals(km, &nj); sun_klu_numeric *num = SUNLinSol_KLUGetNumeric(ls); lunz = num->lnz + num->unz;
    sun_klu_common *cm = SUNLinSol_KLUGetCommon(ls); klu_l_flops(SUNLinSol_KLUGetSymbolic(ls), num, cm); flops = cm->flops; }
  printf("{\"peak_kB\": %ld, \"peer\": \"KINSOL line search + %s\", \"N\": %ld, \"unknowns\": %ld, \"read_s\": %.4f, \"solve_s\": %.6f, \"flag\": %d, \"newton_its\": %ld, \"jacobians\": %ld, \"residual\": %.3g, \"krylov_its\": %ld, \"lu_nnz\": %ld, \"lu_flops\": %.6g, \"min_c\": %.3g, \"conversion_A\": %.12f, \"yield_R\": %.12f, \"outlet\": [%.12f, %.12f, %.12f, %.12f]}\n", peak_kB(),
         bcg ? "SPBCGS, block Jacobi" : kry ? "SPGMR, block Jacobi" : amd ? "KLU (AMD)" : "KLU (COLAMD)", (long)n, (long)(4 * n), tread, el, fl, it, nj, fn, lin, lunz, flops, mn, 1 - a / q, r / q, a / q, b / q, r / q, s / q);
  return 0;
}

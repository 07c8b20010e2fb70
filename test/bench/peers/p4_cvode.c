/* P4 peer: CVODE BDF, dense Jacobian, 12 compartments x 4 species. usage: p4_cvode CASEDIR RTOL ATOL OUT.csv [REPEAT] [klu] */
#include <cvode/cvode.h>
#include <nvector/nvector_serial.h>
#include <sunlinsol/sunlinsol_dense.h>
#include <sunmatrix/sunmatrix_dense.h>
#include <sunlinsol/sunlinsol_klu.h>
#include <sunmatrix/sunmatrix_sparse.h>
#include "net.h"
#define KF 1e6
#define KR 2.5e5
#define KS 0.8
static Net g;
static const double feed[4] = {1.0, 0.0, 0.7, 0.0};
static int rhs(realtype t, N_Vector y, N_Vector yd, void *u) {
  double *c = N_VGetArrayPointer(y), *d = N_VGetArrayPointer(yd);
  for (int i = 0; i < g.n; i++) {
    double s[4];
    for (int k = 0; k < 4; k++) s[k] = g.fin[i] / g.vol[i] * feed[k];
    for (int64_t p = g.rp[i]; p < g.rp[i + 1]; p++) for (int k = 0; k < 4; k++) s[k] += g.a[p] * c[4 * g.ci[p] + k];
    const double *x = c + 4 * i;
    double r1 = KF * x[0] - KR * x[1], r2 = KS * x[1] * x[2];
    d[4 * i] = s[0] - r1;
    d[4 * i + 1] = s[1] + r1 - r2;
    d[4 * i + 2] = s[2] - r2;
    d[4 * i + 3] = s[3] + r2;
  }
  return 0;
}
static int jac(realtype t, N_Vector y, N_Vector fy, SUNMatrix J, void *u, N_Vector a, N_Vector b, N_Vector e) {
  double *c = N_VGetArrayPointer(y);
  SUNMatZero(J);
  for (int i = 0; i < g.n; i++) {
    for (int64_t p = g.rp[i]; p < g.rp[i + 1]; p++) for (int k = 0; k < 4; k++) SM_ELEMENT_D(J, 4 * i + k, 4 * g.ci[p] + k) += g.a[p];
    int q = 4 * i;
    double b2 = KS * c[q + 2], c2 = KS * c[q + 1];
    SM_ELEMENT_D(J, q, q) -= KF; SM_ELEMENT_D(J, q, q + 1) += KR;
    SM_ELEMENT_D(J, q + 1, q) += KF; SM_ELEMENT_D(J, q + 1, q + 1) -= KR + b2; SM_ELEMENT_D(J, q + 1, q + 2) -= c2;
    SM_ELEMENT_D(J, q + 2, q + 1) -= b2; SM_ELEMENT_D(J, q + 2, q + 2) -= c2;
    SM_ELEMENT_D(J, q + 3, q + 1) += b2; SM_ELEMENT_D(J, q + 3, q + 2) += c2;
  }
  return 0;
}
/* sparse variant, row-compressed: flow part per species plus the local reaction entries */
static int jsp(realtype t, N_Vector y, N_Vector fy, SUNMatrix J, void *u, N_Vector a, N_Vector b, N_Vector e) {
  static const int has[4][4] = {{1, 1, 0, 0}, {1, 1, 1, 0}, {0, 1, 1, 0}, {0, 1, 1, 1}};
  double *c = N_VGetArrayPointer(y), *v = SM_DATA_S(J);
  int64_t *ip = SM_INDEXPTRS_S(J), *iv = SM_INDEXVALS_S(J), k = 0;
  for (int i = 0; i < g.n; i++) {
    double p1 = KS * c[4 * i + 2], p2 = KS * c[4 * i + 1];
    double B[4][4] = {{-KF, KR, 0, 0}, {KF, -KR - p1, -p2, 0}, {0, -p1, -p2, 0}, {0, p1, p2, 0}};
    for (int r = 0; r < 4; r++) {
      ip[4 * i + r] = k;
      for (int64_t p = g.rp[i]; p < g.rp[i + 1]; p++) {
        int64_t j = g.ci[p];
        if (j != i) { iv[k] = 4 * j + r; v[k++] = g.a[p]; continue; }
        for (int s = 0; s < 4; s++) if (has[r][s]) { iv[k] = 4 * i + s; v[k++] = B[r][s] + (r == s ? g.a[p] : 0); }
      }
    }
  }
  ip[4 * g.n] = k;
  return 0;
}
int main(int argc, char **argv) {
  double rtol = atof(argv[2]), atol = atof(argv[3]), best = 1e9;
  int rep = argc > 5 ? atoi(argv[5]) : 1, klu = argc > 6;
  g = net_read(argv[1]);
  static double Y[200][4], T[200];
  long nst, nr, nse;
  for (int r = 0; r < rep; r++) {
    double t0 = now(), t;
    SUNContext ctx;
    SUNContext_Create(NULL, &ctx);
    N_Vector y = N_VNew_Serial(4 * g.n, ctx);
    N_VConst(0, y);
    void *cv = CVodeCreate(CV_BDF, ctx);
    CVodeInit(cv, rhs, 0, y);
    CVodeSStolerances(cv, rtol, atol);
    CVodeSetMaxNumSteps(cv, 1000000);
    SUNMatrix A = klu ? SUNSparseMatrix(4 * g.n, 4 * g.n, 4 * g.nnz + 12 * g.n, CSR_MAT, ctx) : SUNDenseMatrix(4 * g.n, 4 * g.n, ctx);
    SUNLinearSolver ls = klu ? SUNLinSol_KLU(y, A, ctx) : SUNLinSol_Dense(y, A, ctx);
    CVodeSetLinearSolver(cv, ls, A);
    CVodeSetJacFn(cv, klu ? jsp : jac);
    for (int k = 0; k < 200; k++) {
      double x = k / 199.0;
      T[k] = 4000 * x * x * x;
      if (k) { int f = CVode(cv, T[k], y, &t, CV_NORMAL); if (f < 0) return 1; }
      memcpy(Y[k], N_VGetArrayPointer(y) + 44, 4 * sizeof(double));
    }
    CVodeGetNumSteps(cv, &nst);
    CVodeGetNumRhsEvals(cv, &nr);
    CVodeGetNumLinSolvSetups(cv, &nse);
    double el = now() - t0;
    if (el < best) best = el;
    CVodeFree(&cv); SUNLinSolFree(ls); SUNMatDestroy(A); N_VDestroy(y); SUNContext_Free(&ctx);
  }
  FILE *f = fopen(argv[4], "w");
  fprintf(f, "t_min,A,B,C,D\n");
  for (int k = 0; k < 200; k++) fprintf(f, "%.17g,%.17g,%.17g,%.17g,%.17g\n", T[k], Y[k][0], Y[k][1], Y[k][2], Y[k][3]);
  fclose(f);
  printf("{\"peak_kB\": %ld, \"peer\": \"CVODE BDF %s\", \"rtol\": %g, \"solve_s\": %.6f, \"steps\": %ld, \"rhs\": %ld, \"setups\": %ld}\n", peak_kB(), klu ? "KLU" : "dense", rtol, best, nst, nr, nse);
  return 0;
}

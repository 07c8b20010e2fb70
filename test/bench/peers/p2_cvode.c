/* P2 peer: CVODE BDF on the lattice pulse response.
 * usage: p2_cvode CASEDIR klu|klu-amd|spgmr-jacobi|spgmr-ilu0|adams RTOL ATOLFAC OUT.csv */
#include <cvode/cvode.h>
#include <nvector/nvector_serial.h>
#include <sunlinsol/sunlinsol_klu.h>
#include <sunlinsol/sunlinsol_spgmr.h>
#include <sunmatrix/sunmatrix_sparse.h>
#include <sunnonlinsol/sunnonlinsol_fixedpoint.h>
#include "net.h"

static Net g;
static double *ilu; static int64_t *dia; static int use_ilu;
static long nrhs;

static int rhs(realtype t, N_Vector y, N_Vector yd, void *u) {
  nrhs++;
  net_mul(&g, N_VGetArrayPointer(y), N_VGetArrayPointer(yd));
  return 0;
}
static int jac(realtype t, N_Vector y, N_Vector fy, SUNMatrix J, void *u, N_Vector a, N_Vector b, N_Vector c) {
  memcpy(SM_INDEXPTRS_S(J), g.rp, (g.n + 1) * sizeof(int64_t));
  memcpy(SM_INDEXVALS_S(J), g.ci, g.nnz * sizeof(int64_t));
  memcpy(SM_DATA_S(J), g.a, g.nnz * sizeof(double));
  return 0;
}
static int psetup(realtype t, N_Vector y, N_Vector fy, booleantype jok, booleantype *jcur, realtype gam, void *u) {
  *jcur = SUNFALSE;
  if (!use_ilu) {
    for (int64_t i = 0; i < g.n; i++) ilu[i] = 1.0 / (1.0 - gam * g.a[dia[i]]);
    return 0;
  }
  for (int64_t p = 0; p < g.nnz; p++) ilu[p] = -gam * g.a[p];
  for (int64_t i = 0; i < g.n; i++) ilu[dia[i]] += 1.0;
  for (int64_t i = 0; i < g.n; i++) {
    for (int64_t p = g.rp[i]; p < dia[i]; p++) {
      int64_t k = g.ci[p];
      double l = ilu[p] *= ilu[dia[k]];       /* pivots are kept inverted */
      int64_t r = p + 1;
      for (int64_t q = dia[k] + 1; q < g.rp[k + 1]; q++) {
        while (r < g.rp[i + 1] && g.ci[r] < g.ci[q]) r++;
        if (r < g.rp[i + 1] && g.ci[r] == g.ci[q]) ilu[r] -= l * ilu[q];
      }
    }
    ilu[dia[i]] = 1.0 / ilu[dia[i]];
  }
  return 0;
}
static int psolve(realtype t, N_Vector y, N_Vector fy, N_Vector r, N_Vector z, realtype gam, realtype del, int lr, void *u) {
  double *b = N_VGetArrayPointer(r), *x = N_VGetArrayPointer(z);
  if (!use_ilu) { for (int64_t i = 0; i < g.n; i++) x[i] = b[i] * ilu[i]; return 0; }
  for (int64_t i = 0; i < g.n; i++) {
    double s = b[i];
    for (int64_t p = g.rp[i]; p < dia[i]; p++) s -= ilu[p] * x[g.ci[p]];
    x[i] = s;
  }
  for (int64_t i = g.n - 1; i >= 0; i--) {
    double s = x[i];
    for (int64_t p = dia[i] + 1; p < g.rp[i + 1]; p++) s -= ilu[p] * x[g.ci[p]];
    x[i] = s * ilu[dia[i]];
  }
  return 0;
}
static int jtimes(N_Vector v, N_Vector Jv, realtype t, N_Vector y, N_Vector fy, void *u, N_Vector tmp) {
  net_mul(&g, N_VGetArrayPointer(v), N_VGetArrayPointer(Jv));
  return 0;
}

int main(int argc, char **argv) {
  const char *mode = argv[2];
  double rtol = atof(argv[3]), afac = atof(argv[4]);
  double t0 = now();
  g = net_read(argv[1]);
  double tread = now() - t0;
  SUNContext ctx;
  SUNContext_Create(NULL, &ctx);
  N_Vector y = N_VNew_Serial(g.n, ctx);
  double *c = N_VGetArrayPointer(y), cm = 0;
  for (int64_t i = 0; i < g.n; i++) { c[i] = g.fin[i] / g.Q / g.vol[i]; if (c[i] > cm) cm = c[i]; }
  dia = malloc(g.n * sizeof *dia);
  for (int64_t i = 0; i < g.n; i++) for (int64_t p = g.rp[i]; p < g.rp[i + 1]; p++) if (g.ci[p] == i) dia[i] = p;
  int adams = !strcmp(mode, "adams");
  void *cv = CVodeCreate(adams ? CV_ADAMS : CV_BDF, ctx);
  CVodeInit(cv, rhs, 0, y);
  /* absolute tolerance relative to the mean level 1/V that the pulse spreads to */
  CVodeSStolerances(cv, rtol, afac * rtol / g.V);
  CVodeSetMaxNumSteps(cv, 10000000);
  SUNLinearSolver ls = NULL;
  SUNMatrix A = NULL;
  if (!strncmp(mode, "klu", 3)) {
    A = SUNSparseMatrix(g.n, g.n, g.nnz, CSR_MAT, ctx);
    ls = SUNLinSol_KLU(y, A, ctx);      /* default ordering is COLAMD */
    if (!strcmp(mode, "klu-amd")) SUNLinSol_KLUSetOrdering(ls, 0);
    CVodeSetLinearSolver(cv, ls, A);
    CVodeSetJacFn(cv, jac);
  } else if (adams) {
    CVodeSetNonlinearSolver(cv, SUNNonlinSol_FixedPoint(y, 0, ctx));
  } else {
    use_ilu = !strcmp(mode, "spgmr-ilu0");
    ilu = malloc((use_ilu ? g.nnz : g.n) * sizeof *ilu);
    ls = SUNLinSol_SPGMR(y, SUN_PREC_LEFT, 10, ctx);
    CVodeSetLinearSolver(cv, ls, NULL);
    CVodeSetPreconditioner(cv, psetup, psolve);
    CVodeSetJacTimes(cv, NULL, jtimes);
  }
  double tau = g.V / g.Q, T[200], E[200], t;
  t0 = now();
  for (int k = 0; k < 200; k++) {
    T[k] = 3 * tau * k / 199;
    if (k) { int f = CVode(cv, T[k], y, &t, CV_NORMAL); if (f < 0) { fprintf(stderr, "cvode flag %d\n", f); return 1; } }
    E[k] = dotp(g.n, g.fout, c);
  }
  double el = now() - t0;
  long nst = 0, nset = 0, nli = 0, nni = 0;
  CVodeGetNumSteps(cv, &nst);
  CVodeGetNumNonlinSolvIters(cv, &nni);
  if (!adams) { CVodeGetNumLinSolvSetups(cv, &nset); CVodeGetNumLinIters(cv, &nli); }
  double lunz = 0, flops = 0;
  if (!strncmp(mode, "klu", 3)) {
    sun_klu_numeric *num = SUNLinSol_KLUGetNumeric(ls);
    lunz = (double)num->lnz + (double)num->unz + (double)((sun_klu_symbolic *)SUNLinSol_KLUGetSymbolic(ls))->nzoff;
    sun_klu_common *cm = SUNLinSol_KLUGetCommon(ls);
    klu_l_flops(SUNLinSol_KLUGetSymbolic(ls), num, cm);
    flops = cm->flops;
  }
  write_curve(argv[5], 200, T, E);
  printf("{\"peak_kB\": %ld, \"peer\": \"CVODE %s\", \"N\": %ld, \"nnz\": %ld, \"rtol\": %g, \"read_s\": %.4f, \"solve_s\": %.6f, \"steps\": %ld, \"rhs\": %ld, \"newton_its\": %ld, \"setups\": %ld, \"krylov_its\": %ld, \"lu_nnz\": %.0f, \"lu_flops\": %.6g}\n", peak_kB(),
         mode, (long)g.n, (long)g.nnz, rtol, tread, el, nst, nrhs, nni, nset, nli, lunz, flops);
  return 0;
}

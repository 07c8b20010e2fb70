/* P2 peer: ARKODE explicit Runge-Kutta, order 5. usage: p2_arkode CASEDIR RTOL ATOLFAC OUT.csv */
#include <arkode/arkode_erkstep.h>
#include <nvector/nvector_serial.h>
#include "net.h"
static Net g;
static int rhs(realtype t, N_Vector y, N_Vector yd, void *u) {
  net_mul(&g, N_VGetArrayPointer(y), N_VGetArrayPointer(yd));
  return 0;
}
int main(int argc, char **argv) {
  double rtol = atof(argv[2]), t0 = now(), T[200], E[200], t;
  g = net_read(argv[1]);
  double tread = now() - t0, tau = g.V / g.Q;
  SUNContext ctx;
  SUNContext_Create(NULL, &ctx);
  N_Vector y = N_VNew_Serial(g.n, ctx);
  double *c = N_VGetArrayPointer(y);
  for (int64_t i = 0; i < g.n; i++) c[i] = g.fin[i] / g.Q / g.vol[i];
  void *ark = ERKStepCreate(rhs, 0, y, ctx);
  ERKStepSStolerances(ark, rtol, atof(argv[3]) * rtol / g.V);
  ERKStepSetOrder(ark, 5);
  ERKStepSetMaxNumSteps(ark, 10000000);
  t0 = now();
  for (int k = 0; k < 200; k++) {
    T[k] = 3 * tau * k / 199;
    if (k && ERKStepEvolve(ark, T[k], y, &t, ARK_NORMAL) < 0) return 1;
    E[k] = dotp(g.n, g.fout, c);
  }
  double el = now() - t0;
  long st, rh;
  ERKStepGetNumSteps(ark, &st);
  ERKStepGetNumRhsEvals(ark, &rh);
  write_curve(argv[4], 200, T, E);
  printf("{\"peak_kB\": %ld, \"peer\": \"ARKODE explicit order 5\", \"N\": %ld, \"nnz\": %ld, \"rtol\": %g, \"read_s\": %.4f, \"solve_s\": %.6f, \"steps\": %ld, \"rhs\": %ld}\n", peak_kB(),
         (long)g.n, (long)g.nnz, rtol, tread, el, st, rh);
  return 0;
}

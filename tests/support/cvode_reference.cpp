#include "support/cvode_reference.h"

#include <cvode/cvode.h>
#include <nvector/nvector_serial.h>
#include <sundials/sundials_context.h>
#include <sunlinsol/sunlinsol_band.h>
#include <sunmatrix/sunmatrix_band.h>

#include <algorithm>
#include <cmath>
#include <stdexcept>
#include <string>

#include "support/cpu_time.h"

namespace hearthfront::testing {
namespace {

// Everything the right-hand side reads.
struct Equations {
  std::size_t n = 0;
  std::vector<double> centre, inverse_volume, conductance;  // conductance[i] between cells i-1 and i
  std::vector<double> diffusivity, slope;
  double half_cell = 0;
  double factor = 1;
  ReferencePiece piece{};
};

double area(const ReferenceProblem& p, double x) {
  switch (p.shape) {
    case ReferenceShape::cylinder:
      return (p.face_m.back() - x) / p.face_m.back();
    case ReferenceShape::bore:
      return (p.bore_radius_m + x) / p.bore_radius_m;
    case ReferenceShape::plate:
      break;
  }
  return 1.0;
}

Equations make_equations(const ReferenceProblem& p) {
  Equations e;
  e.n = p.face_m.size() - 1;
  for (std::size_t i = 0; i < e.n; ++i) {
    const double inner = p.face_m[i], outer = p.face_m[i + 1];
    e.centre.push_back(0.5 * (inner + outer));
    // Areas are linear in x, so the mean of the two faces is exact.
    e.inverse_volume.push_back(2.0 / ((outer - inner) * (area(p, inner) + area(p, outer))));
  }
  e.conductance.assign(e.n + 1, 0.0);
  for (std::size_t i = 1; i < e.n; ++i)
    e.conductance[i] = area(p, p.face_m[i]) / (e.centre[i] - e.centre[i - 1]);
  e.diffusivity.resize(e.n);
  e.slope.resize(e.n);
  e.half_cell = e.centre[0];
  e.factor = p.diffusivity_factor;
  return e;
}

// Agren 1986 as published: D = 4.53e-7 [1 + y(1-y) 8339.9/T] exp{-(1/T - 2.221e-4)(17767 - 26436 y)},
// y = x/(1-x) in mole fractions; and dD/dC.
void fill_diffusivity(Equations& e, const double* c, bool with_slope) {
  constexpr double site = 55.845 / 12.011;
  const double t = e.piece.temperature_k;
  const double inverse_t = 1.0 / t - 2.221e-4;
  const double hump = 8339.9 / t;
  double* __restrict d = e.diffusivity.data();
  double* __restrict s = e.slope.data();
  for (std::size_t i = 0; i < e.n; ++i) {
    const double y = site * c[i] / (100.0 - c[i]);
    const double bulge = 1.0 + y * (1.0 - y) * hump;
    d[i] = e.factor * 4.53e-7 * bulge * std::exp(-inverse_t * (17767.0 - 26436.0 * y));
    if (with_slope) {
      const double dy = site * 100.0 / ((100.0 - c[i]) * (100.0 - c[i]));
      s[i] = d[i] * dy * ((1.0 - 2.0 * y) * hump / bulge + inverse_t * 26436.0);
    }
  }
}

int right_hand_side(double, N_Vector state, N_Vector rate, void* user) {
  Equations& e = *static_cast<Equations*>(user);
  const double* c = N_VGetArrayPointer(state);
  double* f = N_VGetArrayPointer(rate);
  fill_diffusivity(e, c, false);
  const double metal = e.half_cell / e.diffusivity[0];
  double in = (e.piece.equilibrium_wt_pct - c[0]) / (1.0 / e.piece.transfer_m_per_s + metal);
  for (std::size_t i = 0; i + 1 < e.n; ++i) {
    const double out =
        e.conductance[i + 1] * 0.5 * (e.diffusivity[i] + e.diffusivity[i + 1]) * (c[i] - c[i + 1]);
    f[i] = (in - out) * e.inverse_volume[i];
    in = out;
  }
  f[e.n - 1] = in * e.inverse_volume[e.n - 1];
  return 0;
}

int jacobian(double, N_Vector state, N_Vector, SUNMatrix matrix, void* user, N_Vector, N_Vector, N_Vector) {
  Equations& e = *static_cast<Equations*>(user);
  const double* c = N_VGetArrayPointer(state);
  fill_diffusivity(e, c, true);
  const auto column = [&](std::size_t j) {
    return SUNBandMatrix_Column(matrix, static_cast<sunindextype>(j));
  };
  SUNMatZero(matrix);
  const double metal = e.half_cell / e.diffusivity[0];
  const double transfer = 1.0 / (1.0 / e.piece.transfer_m_per_s + metal);
  const double drive = e.piece.equilibrium_wt_pct - c[0];
  column(0)[0] =
      transfer * (drive * transfer * metal * e.slope[0] / e.diffusivity[0] - 1.0) * e.inverse_volume[0];
  for (std::size_t i = 1; i < e.n; ++i) {
    const double mean = 0.5 * (e.diffusivity[i - 1] + e.diffusivity[i]);
    const double drop = c[i - 1] - c[i];
    const double by_outer = e.conductance[i] * (0.5 * e.slope[i - 1] * drop + mean);
    const double by_inner = e.conductance[i] * (0.5 * e.slope[i] * drop - mean);
    column(i - 1)[0] -= by_outer * e.inverse_volume[i - 1];
    column(i)[-1] -= by_inner * e.inverse_volume[i - 1];
    column(i - 1)[1] += by_outer * e.inverse_volume[i];
    column(i)[0] += by_inner * e.inverse_volume[i];
  }
  return 0;
}

void check(int code, const char* what) {
  if (code < 0) throw std::runtime_error(std::string(what) + " failed with code " + std::to_string(code));
}

// Frees SUNDIALS objects in the reverse order of their making.
struct Session {
  SUNContext context = nullptr;
  N_Vector state = nullptr;
  SUNMatrix matrix = nullptr;
  SUNLinearSolver solver = nullptr;
  void* cvode = nullptr;

  explicit Session(std::size_t n) {
    check(SUNContext_Create(nullptr, &context), "SUNContext_Create");
    const auto size = static_cast<sunindextype>(n);
    state = N_VNew_Serial(size, context);
    matrix = SUNBandMatrix(size, 1, 1, context);
    solver = SUNLinSol_Band(state, matrix, context);
    cvode = CVodeCreate(CV_BDF, context);
  }
  Session(const Session&) = delete;
  Session& operator=(const Session&) = delete;
  ~Session() {
    CVodeFree(&cvode);
    SUNLinSolFree(solver);
    SUNMatDestroy(matrix);
    N_VDestroy(state);
    SUNContext_Free(&context);
  }
};

}  // namespace

ReferenceResult solve_reference(const ReferenceProblem& problem, const ReferenceOptions& options) {
  Equations e = make_equations(problem);
  Session s(e.n);
  N_VConst(problem.core_wt_pct, s.state);
  e.piece = problem.pieces.front();
  check(CVodeInit(s.cvode, right_hand_side, 0.0, s.state), "CVodeInit");
  check(CVodeSStolerances(s.cvode, options.relative_tolerance, options.absolute_tolerance_wt_pct),
        "CVodeSStolerances");
  check(CVodeSetUserData(s.cvode, &e), "CVodeSetUserData");
  check(CVodeSetMaxOrd(s.cvode, options.highest_order), "CVodeSetMaxOrd");
  check(CVodeSetMaxNumSteps(s.cvode, 1'000'000), "CVodeSetMaxNumSteps");
  // Without restarts a jump of the inputs must be found by cutting the step, many times over.
  check(CVodeSetMaxErrTestFails(s.cvode, 50), "CVodeSetMaxErrTestFails");
  check(CVodeSetLinearSolver(s.cvode, s.solver, s.matrix), "CVodeSetLinearSolver");
  check(CVodeSetJacFn(s.cvode, jacobian), "CVodeSetJacFn");

  const double begin = thread_seconds();
  ReferenceResult result;
  double end = 0.0;
  long steps = 0;
  for (const ReferencePiece& piece : problem.pieces) {
    e.piece = piece;
    double reached = end;
    if (options.restart_at_pieces && end > 0.0) {
      check(CVodeGetNumSteps(s.cvode, &steps), "CVodeGetNumSteps");
      result.steps += steps;
      check(CVodeReInit(s.cvode, end, s.state), "CVodeReInit");
    }
    end += piece.duration_s;
    check(CVodeSetStopTime(s.cvode, end), "CVodeSetStopTime");
    check(CVode(s.cvode, end, s.state, &reached, CV_NORMAL), "CVode");
  }
  result.seconds = thread_seconds() - begin;
  check(CVodeGetNumSteps(s.cvode, &steps), "CVodeGetNumSteps");
  result.steps += steps;
  result.depth_m = e.centre;
  const double* c = N_VGetArrayPointer(s.state);
  result.carbon_wt_pct.assign(c, c + e.n);
  N_Vector rate = N_VClone(s.state);
  right_hand_side(end, s.state, rate, &e);
  const double* f = N_VGetArrayPointer(rate);
  result.rate_wt_pct_s.assign(f, f + e.n);
  N_VDestroy(rate);
  return result;
}

double ReferenceResult::depth_at_m(double limit) const {
  const auto& x = depth_m;
  const auto& c = carbon_wt_pct;
  std::size_t i = c.size() - 1;
  while (i > 0 && c[i - 1] < limit) --i;
  if (i == 0) return 0.0;
  const std::size_t first = std::min(i >= 2 ? i - 2 : 0, x.size() - 4);
  const auto cubic = [&](double at) {
    double sum = 0.0;
    for (std::size_t p = first; p < first + 4; ++p) {
      double weight = c[p];
      for (std::size_t q = first; q < first + 4; ++q)
        if (q != p) weight *= (at - x[q]) / (x[p] - x[q]);
      sum += weight;
    }
    return sum;
  };
  double low = x[i - 1], high = x[i];
  while (high - low > 1e-13) (cubic(0.5 * (low + high)) >= limit ? low : high) = 0.5 * (low + high);
  return 0.5 * (low + high);
}

std::vector<double> reference_faces(double extent_m, double first_m, double growth, double bulk_m,
                                    double fine_to_m, double core_growth) {
  std::vector<double> face{0.0};
  for (double width = first_m; face.back() < extent_m;) {
    face.push_back(face.back() + width);
    width = face.back() < fine_to_m ? std::min(width * growth, bulk_m) : width * core_growth;
  }
  const double scale = extent_m / face.back();
  for (double& x : face) x *= scale;
  return face;
}

}  // namespace hearthfront::testing

#include "solver/diffusion/kernel_choice.h"

#include <atomic>

#include "solver/diffusion/kernel.h"

namespace hearthfront::solver {
namespace {

// Null where this program or this processor lacks it.
const Kernel* kernel_of(KernelKind kind) {
  switch (kind) {
    case KernelKind::baseline:
      return &baseline_kernel;
    case KernelKind::avx2_fma:
#if defined(HF_HAS_AVX2_KERNEL)
      // Also asks whether the operating system keeps the wide registers.
      if (__builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma")) return &avx2_fma_kernel;
#endif
      break;
  }
  return nullptr;
}

std::atomic<KernelKind>& choice() {
  static std::atomic<KernelKind> kind{kernel_of(KernelKind::avx2_fma) ? KernelKind::avx2_fma
                                                                      : KernelKind::baseline};
  return kind;
}

}  // namespace

bool kernel_available(KernelKind kind) {
  return kernel_of(kind) != nullptr;
}

KernelKind kernel_choice() {
  return choice();
}

const char* kernel_name(KernelKind kind) {
  return kind == KernelKind::avx2_fma ? "avx2+fma" : "baseline";
}

const char* kernel_name() {
  return kernel_name(kernel_choice());
}

bool use_kernel(KernelKind kind) {
  if (!kernel_available(kind)) return false;
  choice() = kind;
  return true;
}

const Kernel& chosen_kernel() {
  return *kernel_of(kernel_choice());
}

}  // namespace hearthfront::solver

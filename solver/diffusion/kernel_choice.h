// Which build of the step kernel computes. The kernel is built for every processor of the architecture
// ("baseline") and, on x86-64, once more for processors with AVX2 and FMA ("avx2+fma"); the best one that the
// processor can run is taken at start. For the same mesh and conditions one kernel gives
// the same bits on every processor; between the two, results agree within 1e-9 relative
// (tests/solver/lanes_test.cpp). So the kernel's name belongs wherever the build is named.
#pragma once

namespace hearthfront::solver {

enum class KernelKind { baseline, avx2_fma };

// Whether this program has it and this processor can run it. Baseline always is.
bool kernel_available(KernelKind kind);

// The one that steppers made from now on will use.
KernelKind kernel_choice();

// "baseline" or "avx2+fma".
const char* kernel_name(KernelKind kind);
const char* kernel_name();  // of the current choice

// For tests and benchmarks: overrides the automatic choice for steppers and workspaces made afterwards; those
// already made keep theirs. Returns false and changes nothing where the kernel is not available.
// Safe between threads.
bool use_kernel(KernelKind kind);

}  // namespace hearthfront::solver

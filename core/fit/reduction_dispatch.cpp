#include <atomic>
#include <vector>

#include "core/fit/reduction_kernel.hpp"

namespace unply::kernel {

namespace baseline {
extern const Kernels kernels;
}
#ifdef UNPLY_SEVERAL_INSTRUCTION_SETS
namespace x86_64_v3 {
extern const Kernels kernels;
}
namespace x86_64_v4 {
extern const Kernels kernels;
}
#endif

namespace {

std::vector<const Kernels*> on_this_machine() {
  std::vector<const Kernels*> found = {&baseline::kernels};
#ifdef UNPLY_SEVERAL_INSTRUCTION_SETS
  // What the compiler may use under -march=x86-64-v3 and -v4 (x86-64 psABI, table of micro-architecture
  // levels).
  __builtin_cpu_init();
  if (__builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma") && __builtin_cpu_supports("bmi") &&
      __builtin_cpu_supports("bmi2")) {
    found.push_back(&x86_64_v3::kernels);
    if (__builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512bw") &&
        __builtin_cpu_supports("avx512cd") && __builtin_cpu_supports("avx512dq") &&
        __builtin_cpu_supports("avx512vl"))
      found.push_back(&x86_64_v4::kernels);
  }
#endif
  return found;
}

const std::vector<const Kernels*>& all() {
  static const std::vector<const Kernels*> found = on_this_machine();
  return found;
}

std::atomic<const Kernels*>& current() {
  static std::atomic<const Kernels*> kernels = all().back();
  return kernels;
}

}  // namespace

std::size_t available_count() { return all().size(); }
const Kernels& available(std::size_t which) { return *all().at(which); }
const Kernels& chosen() { return *current().load(std::memory_order_relaxed); }
void choose(std::size_t which) { current().store(all().at(which), std::memory_order_relaxed); }

}  // namespace unply::kernel

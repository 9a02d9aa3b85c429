// A plain driver for the fuzz target, where no coverage-guided one is at hand: seeded inputs, and changes of
// those that came far. usage: fuzz_cells [--seconds N] [--seed S] [FILE...]   (files: inputs to run again)
#include <unistd.h>

#include <chrono>
#include <csignal>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <fstream>
#include <iterator>
#include <string>
#include <vector>

#include "core/base/random.hpp"
#include "tests/fuzz/fuzz_cells.hpp"

#if defined(__SANITIZE_ADDRESS__)
extern "C" void __sanitizer_set_death_callback(void (*callback)());
#endif

using Input = std::vector<std::uint8_t>;
using unply::Random;

namespace {

constexpr unsigned seconds_an_input = 60;  // with all checks on; what takes longer hangs
constexpr std::size_t most_kept = 300;

Input current;

void save_input() {
  std::ofstream("fuzz_cells.input", std::ios::binary)
      .write(reinterpret_cast<const char*>(current.data()), static_cast<std::streamsize>(current.size()));
  std::fprintf(
      stderr,
      "the input is in fuzz_cells.input (%zu bytes); run it again with: fuzz_cells fuzz_cells.input\n",
      current.size());
}

void on_signal(int signal) {
  std::fprintf(stderr, "%s\n", signal == SIGALRM ? "no answer within the time for one input" : "signal");
  save_input();
  std::_Exit(1);
}

void run_current() {
  alarm(seconds_an_input);
  unply::fuzz::run(current.data(), current.size());
  alarm(0);
}

Input fresh(Random& random) {
  Input input(40 + random.below(260));
  for (std::uint8_t& byte : input) byte = static_cast<std::uint8_t>(random.bits());
  return input;
}

Input changed(Random& random, const std::vector<Input>& kept) {
  Input input = kept[random.below(kept.size())];
  for (std::uint64_t changes = 1 + random.below(4); changes > 0; --changes) {
    const std::size_t at = random.below(input.size());
    switch (random.below(4)) {
      case 0:
        input[at] = static_cast<std::uint8_t>(random.bits());
        break;
      case 1:
        input[at] = static_cast<std::uint8_t>(input[at] ^ (1u << random.below(8)));
        break;
      case 2:
        input.insert(input.begin() + static_cast<std::ptrdiff_t>(at),
                     static_cast<std::uint8_t>(random.bits()));
        break;
      default: {  // the end of another one
        const Input& other = kept[random.below(kept.size())];
        input.resize(at);
        if (at < other.size())
          input.insert(input.end(), other.begin() + static_cast<std::ptrdiff_t>(at), other.end());
        if (input.empty()) input.push_back(0);
      }
    }
  }
  return input;
}

}  // namespace

int main(int argc, char** argv) {
  double seconds = 10;
  std::uint64_t seed = 1;
  std::vector<std::string> files;
  for (int i = 1; i < argc; ++i) {
    const std::string argument = argv[i];
    if (argument == "--seconds" && i + 1 < argc)
      seconds = std::atof(argv[++i]);
    else if (argument == "--seed" && i + 1 < argc)
      seed = std::strtoull(argv[++i], nullptr, 10);
    else
      files.push_back(argument);
  }
  unply::fuzz::before_abort = save_input;
#if defined(__SANITIZE_ADDRESS__)
  __sanitizer_set_death_callback(save_input);
#else
  for (const int signal : {SIGSEGV, SIGFPE, SIGILL, SIGBUS}) std::signal(signal, on_signal);
#endif
  std::signal(SIGALRM, on_signal);

  for (const std::string& file : files) {
    std::ifstream in(file, std::ios::binary);
    if (!in) {
      std::fprintf(stderr, "cannot read %s\n", file.c_str());
      return 2;
    }
    current.assign(std::istreambuf_iterator<char>(in), {});
    run_current();
  }
  if (!files.empty()) return 0;

  Random random(seed);
  std::vector<Input> kept;
  std::size_t inputs = 0, reached[4] = {};
  const auto end = std::chrono::steady_clock::now() + std::chrono::duration<double>(seconds);
  while (std::chrono::steady_clock::now() < end) {
    current = kept.empty() || random.below(2) == 0 ? fresh(random) : changed(random, kept);
    run_current();
    ++inputs;
    ++reached[static_cast<int>(unply::fuzz::deepest)];
    if (unply::fuzz::deepest < unply::fuzz::Depth::fit) continue;
    if (kept.size() < most_kept)
      kept.push_back(current);
    else
      kept[random.below(most_kept)] = current;
  }
  std::printf(
      "seed %llu: %zu inputs without a finding; refused before a design %zu, by the fit %zu, later %zu; "
      "reported %zu\n",
      static_cast<unsigned long long>(seed), inputs, reached[0], reached[1], reached[2], reached[3]);
  // A run that never gets past the refusals has tested nothing.
  return seconds < 1 || reached[3] > 0 ? 0 : 1;
}

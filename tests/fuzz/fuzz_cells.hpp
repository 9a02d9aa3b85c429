// One input of the fuzz target, and what a driver wants to know about it.
#pragma once

#include <cstddef>
#include <cstdint>

namespace unply::fuzz {

/// Bytes become a block of cells and a model, and go through the whole analysis. Ends the process where
/// something does not hold.
void run(const std::uint8_t* data, std::size_t size);

/// How far the last input came before it was refused.
enum class Depth { nothing, design, fit, report };
extern Depth deepest;

/// Called before the process is ended; null: nothing.
extern void (*before_abort)();

}  // namespace unply::fuzz

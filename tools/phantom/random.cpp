#include "phantom/random.hpp"

#include <algorithm>
#include <numbers>

namespace tambour::tools::phantom {
namespace {

/// One step of SplitMix64: spreads neighbouring numbers over all 64 bits.
/// Source: Steele, Lea and Flood, "Fast splittable pseudorandom number generators", OOPSLA 2014.
std::uint64_t mix(std::uint64_t x) {
  x += 0x9e3779b97f4a7c15U;
  x = (x ^ (x >> 30)) * 0xbf58476d1ce4e5b9U;
  x = (x ^ (x >> 27)) * 0x94d049bb133111ebU;
  return x ^ (x >> 31);
}

}  // namespace

Random::Random(std::uint64_t seed, Purpose purpose, std::uint64_t index)
    : engine_(mix(mix(mix(seed) ^ static_cast<std::uint64_t>(purpose)) ^ index)) {}

double Random::angle() { return uniform(0, 2 * std::numbers::pi); }

int Random::below(int count) { return std::min(static_cast<int>(uniform() * count), count - 1); }

}  // namespace tambour::tools::phantom

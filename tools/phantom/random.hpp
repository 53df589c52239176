// Random numbers that are the same on every platform and do not depend on who draws first.
#pragma once

#include <boost/random/mersenne_twister.hpp>
#include <boost/random/normal_distribution.hpp>
#include <boost/random/uniform_01.hpp>
#include <cstdint>

namespace tambour::tools::phantom {

/// A stream of its own for every (seed, purpose, index).
class Random {
 public:
  /// What a stream is for; streams of different purposes are independent.
  enum class Purpose : std::uint64_t { complex_of_kind = 1, complex_of_image, pose, damage, clutter, field, noise };

  Random(std::uint64_t seed, Purpose purpose, std::uint64_t index);

  /// In [0, 1).
  double uniform() { return boost::random::uniform_01<double>()(engine_); }
  double uniform(double low, double high) { return low + (high - low) * uniform(); }
  double normal() { return normal_(engine_); }
  /// In [0, 2 pi).
  double angle();
  /// 0 .. count - 1.
  int below(int count);

 private:
  boost::random::mt19937_64 engine_;
  boost::random::normal_distribution<double> normal_;
};

}  // namespace tambour::tools::phantom

// Speed of the roots, norms and families of Bessel functions against Boost.Math.
//
// Prints case,ours_ms,peer,peer_ms,ratio. Ours and the peer run in turns in one process; a figure is the median of the
// turns. Not a test: nothing here passes or fails.
#include <algorithm>
#include <boost/math/special_functions/bessel.hpp>
#include <chrono>
#include <cmath>
#include <cstddef>
#include <cstdio>
#include <functional>
#include <vector>

#include "tambour/bessel.hpp"

namespace {

constexpr double kPi = 3.14159265358979323846;
volatile double sink = 0;

double milliseconds(const std::function<double()>& run) {
  const auto begin = std::chrono::steady_clock::now();
  sink = sink + run();
  return std::chrono::duration<double, std::milli>(std::chrono::steady_clock::now() - begin).count();
}

double median(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  return values[values.size() / 2];
}

void compare(const char* name, const std::function<double()>& ours, const char* peer,
             const std::function<double()>& theirs, int turns) {
  std::vector<double> our_times, their_times;
  for (int turn = 0; turn < turns; ++turn) {
    our_times.push_back(milliseconds(ours));
    their_times.push_back(milliseconds(theirs));
  }
  const double our_time = median(our_times);
  const double their_time = median(their_times);
  std::printf("%s,%.3f,%s,%.1f,%.1f\n", name, our_time, peer, their_time, their_time / our_time);
}

void compare_roots(const char* name, double limit, int turns) {
  using tambour::Edge;
  const int max_order = static_cast<int>(limit);
  std::vector<std::size_t> counts;
  for (const auto& roots : tambour::bessel_roots_up_to(max_order, Edge::dirichlet, limit)) {
    counts.push_back(roots.size());
  }
  const auto ours = [=] { return tambour::bessel_roots_up_to(max_order, Edge::dirichlet, limit)[0][0]; };
  const auto theirs = [=] {
    double sum = 0;
    for (std::size_t n = 0; n < counts.size(); ++n) {
      for (std::size_t k = 1; k <= counts[n]; ++k) {
        sum += boost::math::cyl_bessel_j_zero(static_cast<double>(n), static_cast<int>(k));
      }
    }
    return sum;
  };
  compare(name, ours, "boost cyl_bessel_j_zero", theirs, turns);
}

}  // namespace

int main() {
  std::puts("case,ours_ms,peer,peer_ms,ratio");
  compare_roots("roots up to 0.9 pi 64", 0.9 * kPi * 64, 9);
  compare_roots("roots up to 0.9 pi 256", 0.9 * kPi * 256, 7);

  const tambour::BesselTable table(0, 200, 800);
  std::vector<double> x(200000);
  for (std::size_t i = 0; i < x.size(); ++i) x[i] = 800 * std::fmod(0.6180339887498949 * static_cast<double>(i), 1.0);
  std::vector<double> out(x.size());
  const auto ours = [&] {
    table.values(100, x.data(), x.size(), out.data());
    return out[0];
  };
  const auto theirs = [&] {
    for (std::size_t i = 0; i < x.size(); ++i) out[i] = boost::math::cyl_bessel_j(100, x[i]);
    return out[0];
  };
  compare("200000 values of J_100 in 0..800 table made before", ours, "boost cyl_bessel_j", theirs, 7);
}

#include "study/null_law.hpp"

#include <algorithm>
#include <cmath>
#include <random>

namespace tambour::study {
namespace {

constexpr double tail_share = 0.01;
constexpr std::size_t draws_per_task = 100;

}  // namespace

NullLaw::NullLaw(const Evidence& evidence, const Shells& shells, int images, int draws, std::uint64_t seed,
                 Executor& executor)
    : sorted_(draws) {
  const std::size_t tasks = (sorted_.size() + draws_per_task - 1) / draws_per_task;
  executor.run(tasks, [&](std::size_t task, int) {
    std::seed_seq mix{static_cast<std::uint32_t>(seed), static_cast<std::uint32_t>(seed >> 32),
                      static_cast<std::uint32_t>(task)};
    std::mt19937_64 engine(mix);
    std::vector<double> energies(shells.size() * evidence.orders());
    std::vector<double> ln_bf(evidence.folds());
    const std::size_t end = std::min(sorted_.size(), (task + 1) * draws_per_task);
    for (std::size_t draw = task * draws_per_task; draw < end; ++draw) {
      for (std::size_t j = 0; j < shells.size(); ++j)
        for (int n = 0; n < evidence.orders(); ++n) {
          const double degrees = shells.degrees_of_freedom[j][n] * images;
          double& energy = energies[j * evidence.orders() + n];
          energy = degrees > 0 ? std::gamma_distribution<double>(degrees / 2, 2)(engine) : 0;
        }
      evidence.ln_bayes_factors(energies, ln_bf);
      sorted_[draw] = Evidence::statistic(ln_bf);
    }
  });
  std::sort(sorted_.begin(), sorted_.end());
  const auto tail = static_cast<std::size_t>(std::llround(tail_share * draws));
  threshold_ = sorted_[sorted_.size() - tail];
  double sum = 0;
  for (std::size_t i = sorted_.size() - tail; i < sorted_.size(); ++i) sum += sorted_[i] - threshold_;
  excess_ = std::max(sum / static_cast<double>(tail), 1.0);
}

double NullLaw::p_value(double t) const {
  if (t > threshold_) return tail_share * std::exp(-(t - threshold_) / excess_);
  const auto above = sorted_.end() - std::lower_bound(sorted_.begin(), sorted_.end(), t);
  return static_cast<double>(above) / static_cast<double>(sorted_.size());
}

}  // namespace tambour::study

#include <algorithm>
#include <cmath>
#include <numbers>

#include "tambour/noise.hpp"

namespace tambour {
namespace {

using std::numbers::pi;
constexpr double fewest_degrees = 24;  // of freedom in a shell
constexpr int lowest_order = 2;

}  // namespace

double Shells::total(std::size_t shell) const {
  double sum = 0;
  for (const double d : degrees_of_freedom[shell]) sum += d;
  return sum;
}

Shells make_shells(const DiskBasis& basis) {
  // Bins of width pi first, then merged upwards until each holds enough; a poor last one joins the one below.
  const auto bins = static_cast<std::size_t>(std::ceil(basis.root_limit() / pi)) + 1;
  std::vector<double> degrees(bins, 0.0);
  for (const Term& term : basis.terms())
    if (term.angular_order >= lowest_order) degrees[static_cast<std::size_t>(term.root / pi)] += 2;

  std::vector<std::size_t> shell_of_bin(bins, 0);
  std::size_t shell = 0;
  double held = 0;
  for (std::size_t bin = 0; bin < bins; ++bin) {
    shell_of_bin[bin] = shell;
    held += degrees[bin];
    if (held >= fewest_degrees) {
      ++shell;
      held = 0;
    }
  }
  const std::size_t count = std::max<std::size_t>(shell, 1);
  for (std::size_t& s : shell_of_bin) s = std::min(s, count - 1);

  Shells shells;
  shells.lower.assign(count + 1, 0);
  shells.mean_root.assign(count, 0);
  shells.degrees_of_freedom.assign(count, std::vector<double>(basis.max_order() + 1, 0.0));
  std::vector<double> smallest(count, basis.root_limit());
  for (const Term& term : basis.terms()) {
    if (term.angular_order < lowest_order) {
      shells.of_term.push_back(-1);
      continue;
    }
    const std::size_t s = shell_of_bin[static_cast<std::size_t>(term.root / pi)];
    shells.of_term.push_back(static_cast<int>(s));
    shells.degrees_of_freedom[s][term.angular_order] += 2;
    shells.mean_root[s] += 2 * term.root;
    smallest[s] = std::min(smallest[s], term.root);
  }
  for (std::size_t s = 0; s < count; ++s) {
    if (const double total = shells.total(s); total > 0) shells.mean_root[s] /= total;
    shells.lower[s] = smallest[s];
  }
  shells.lower[count] = std::nextafter(basis.root_limit(), 2 * basis.root_limit());
  return shells;
}

}  // namespace tambour

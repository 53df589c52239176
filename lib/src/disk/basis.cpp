#include <fmt/format.h>

#include <cmath>
#include <numbers>

#include "base/check.hpp"
#include "disk/white_noise_gain.hpp"
#include "tambour/disk_basis.hpp"

namespace tambour {

using std::numbers::pi;

std::vector<std::string> DiskGeometry::problems() const {
  std::vector<std::string> found;
  if (!(radius >= 4 && radius <= 1000)) found.push_back(fmt::format("radius is {} px; allowed is 4 to 1000", radius));
  if (!(bandlimit > 0 && bandlimit <= 1))
    found.push_back(fmt::format("bandlimit is {}; allowed is above 0 and up to 1", bandlimit));
  return found;
}

struct DiskBasis::Data {
  DiskGeometry geometry;
  double root_limit;
  std::vector<Term> terms;
  std::vector<std::size_t> begin;  // of every order, and the end
  BesselTable table;
};

DiskBasis::DiskBasis(const DiskGeometry& geometry) {
  refuse_if_any(geometry.problems());
  const double limit = pi * geometry.radius * geometry.bandlimit;
  // The first positive root of order n >= 1 exceeds n for both edges.
  std::vector<std::vector<double>> roots =
      bessel_roots_up_to(static_cast<int>(std::floor(limit)), geometry.edge, limit);
  while (!roots.empty() && roots.back().empty()) roots.pop_back();
  if (roots.empty())
    throw Error(ErrorCode::invalid_argument,
                fmt::format("no term has a root up to pi x radius x bandlimit = {:.3g}; enlarge one of the two", limit),
                fmt::format("{:.3g}", limit), "at least 2.41");

  const int max_order = static_cast<int>(roots.size()) - 1;
  const disk::WhiteNoiseGain gain(geometry.edge, geometry.radius, max_order);
  std::vector<Term> terms;
  std::vector<std::size_t> begin{0};
  for (int n = 0; n <= max_order; ++n) {
    const std::vector<double> gains = gain.of_order(n, roots[n]);
    for (std::size_t k = 0; k < roots[n].size(); ++k) {
      const double norm = bessel_norm(n, geometry.edge, roots[n][k]);
      terms.push_back(
          {n, static_cast<int>(k) + 1, roots[n][k], 1 / (geometry.radius * std::sqrt(2 * pi * norm)), gains[k]});
    }
    begin.push_back(terms.size());
  }
  data_ = std::make_shared<const Data>(
      Data{geometry, limit, std::move(terms), std::move(begin), BesselTable(0, max_order, limit)});
}

const DiskGeometry& DiskBasis::geometry() const noexcept { return data_->geometry; }
double DiskBasis::root_limit() const noexcept { return data_->root_limit; }
std::span<const Term> DiskBasis::terms() const noexcept { return data_->terms; }
int DiskBasis::max_order() const noexcept { return static_cast<int>(data_->begin.size()) - 2; }

std::size_t DiskBasis::order_begin(int angular_order) const {
  require(angular_order >= 0 && angular_order <= max_order() + 1, "angular order", angular_order,
          fmt::format("0 to {}", max_order() + 1));
  return data_->begin[angular_order];
}

std::span<const Term> DiskBasis::order(int angular_order) const {
  require(angular_order >= 0 && angular_order <= max_order(), "angular order", angular_order,
          fmt::format("0 to {}", max_order()));
  const std::size_t first = data_->begin[angular_order];
  return terms().subspan(first, data_->begin[angular_order + 1] - first);
}

double DiskBasis::radial(std::size_t term, double r) const {
  require(term < size(), "term", term, fmt::format("below {}", size()));
  require(r >= 0 && r <= radius(), "r", r, fmt::format("0 to {}", radius()));
  const Term& t = data_->terms[term];
  return t.normalisation * data_->table.value(t.angular_order, t.root * r / radius());
}

}  // namespace tambour

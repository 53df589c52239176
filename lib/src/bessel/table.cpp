#include <algorithm>
#include <boost/math/special_functions/bessel.hpp>
#include <boost/math/special_functions/bessel_prime.hpp>
#include <cstddef>
#include <utility>
#include <vector>

#include "base/check.hpp"
#include "bessel/power.hpp"
#include "bessel/sweeps.hpp"
#include "bessel/taylor.hpp"
#include "tambour/bessel.hpp"

namespace tambour {
namespace {

using bessel::kChunk;
using bessel::kLanes;
using bessel::kPairs;
using bessel::Pair;

constexpr int kMaxOrder = 5100;
constexpr double kMaxX = 1e6;
// Nodes end here: more would cost memory for rare use, so beyond it Boost computes each value.
constexpr int kLastNode = 10000;
using Wide = long double;  // of the sweeps that fill the nodes
// Values are kept times 2^900, so that a node where J_n underflows still serves points where it does not.
constexpr double kScale = 0x1p900;
constexpr double kUnscale = 0x1p-900;
// exp(-745) is the smallest double; the rest pays for the growth within a step and for forgetting the start of a sweep.
constexpr double kDepth = 820;

// The nearest node serves where J_n grows no faster than exp(x); below that only the node to the left keeps relative
// accuracy, and its series is longer.
bool is_near(int order, double x) { return x >= 0.5 && x >= 0.7 * order; }
bool is_small(int order, double x) { return !is_near(order, x) && bessel::power_series_holds(order, x); }

// Index of the node nearest to x >= 0.5; node i lies at x = i + 1.
int nearest_node(double x) { return static_cast<int>(2 * x + 1) / 2 - 1; }

}  // namespace

// Row n holds 2^900 J_n at the nodes x = 1 + start[row] ... nodes; to the left of these J_n is 0 to double.
struct BesselTable::Data {
  int first_order = 0;
  int last_order = 0;
  double x_max = 0;
  int nodes = 0;
  int first_row = 0;
  std::vector<int> start;
  std::vector<std::size_t> offset;
  std::vector<double> values;

  double at(int order, int node) const {
    const auto row = static_cast<std::size_t>(order - first_row);
    if (node < start[row]) return 0;
    return values[offset[row] + static_cast<std::size_t>(node - start[row])];
  }
  // 2^900 J_n'(1 + node).
  double slope(int order, int node) const {
    return order == 0 ? -at(1, node) : 0.5 * (at(order - 1, node) - at(order + 1, node));
  }

  void allocate();
  double* row_from(int order, int node);
  void fill_downwards(int first, int count);
  void fill_upwards(int first, int count);
  void build();

  void check(int order, double x) const;
  struct Expansion;
  Expansion expand(int order, double x) const;
  double value(int order, double x) const;
  double derivative(int order, double x) const;
};

void BesselTable::Data::allocate() {
  first_row = std::max(first_order - 1, 0);
  nodes = x_max < 0.5 ? 0 : nearest_node(std::min<double>(x_max, kLastNode)) + 1;
  const std::vector<int> starts = nodes > 0 ? bessel::start_orders(1, nodes, kDepth) : std::vector<int>();
  std::size_t total = 0;
  int node = 0;
  for (int order = first_row; order <= last_order + 1; ++order) {
    while (node < nodes && starts[static_cast<std::size_t>(node)] < order) ++node;
    start.push_back(node);
    offset.push_back(total);
    total += static_cast<std::size_t>(nodes - node);
  }
  values.resize(total);
}

double* BesselTable::Data::row_from(int order, int node) {
  const auto row = static_cast<std::size_t>(order - first_row);
  return values.data() + offset[row] + static_cast<std::size_t>(node - start[row]);
}

void BesselTable::Data::fill_downwards(int first, int count) {
  const int base = first - 1;
  std::vector<Wide> sum(static_cast<std::size_t>(count), 0);
  bessel::DownwardSweep<Wide> sweep(first, bessel::start_orders(first, count, kDepth));
  const auto stored_from = [&](int order) {
    return std::max(0, start[static_cast<std::size_t>(order - first_row)] - base);
  };
  do {
    const int order = sweep.order();
    const Wide* here = sweep.here();
    // Normalised by J_0 + 2 J_2 + 2 J_4 + ... = 1 (DLMF 10.12.4).
    if (order % 2 == 0) {
      const Wide weight = order == 0 ? 1 : 2;
      for (int i = sweep.active(); i < count; ++i) sum[static_cast<std::size_t>(i)] += weight * here[i];
    }
    if (order < first_row || order > last_order + 1) continue;
    const int from = stored_from(order);
    if (from >= count) continue;
    double* out = row_from(order, base + from);
    for (int i = from; i < count; ++i) *out++ = static_cast<double>(here[i]);
  } while (sweep.next());
  std::vector<double> factor;
  factor.reserve(sum.size());
  for (const Wide one : sum) factor.push_back(static_cast<double>(kScale / one));
  for (int order = first_row; order <= last_order + 1; ++order) {
    const int from = stored_from(order);
    if (from >= count) break;
    double* out = row_from(order, base + from);
    for (int i = from; i < count; ++i) *out++ *= factor[static_cast<std::size_t>(i)];
  }
}

// For chunks to the right of every turning point.
void BesselTable::Data::fill_upwards(int first, int count) {
  bessel::UpwardSweep<Wide> sweep(first_row, first, count);
  for (;;) {
    double* out = row_from(sweep.order(), first - 1);
    for (int i = 0; i < count; ++i) out[i] = static_cast<double>(kScale * sweep.here()[i]);
    if (sweep.order() == last_order + 1) return;
    sweep.next();
  }
}

void BesselTable::Data::build() {
  allocate();
  for (int first = 1; first <= nodes; first += kChunk) {
    const int count = std::min(kChunk, nodes - first + 1);
    if (first > last_order + 1) {
      fill_upwards(first, count);
    } else {
      fill_downwards(first, count);
    }
  }
}

void BesselTable::Data::check(int order, double x) const {
  if (order >= first_order && order <= last_order && x >= 0 && x <= x_max) return;
  require(order >= first_order && order <= last_order, "order asked of the Bessel table", order,
          fmt::format("{} to {}", first_order, last_order));
  require(x >= 0 && x <= x_max, "x asked of the Bessel table", x, fmt::format("0 to {}", x_max));
}

// The Taylor terms of 2^900 J_n about the node chosen for x.
struct BesselTable::Data::Expansion {
  int count = 0;
  double t[1] = {};
  double slope = 0;
  double d[bessel::kMaxTerms][1];
};

BesselTable::Data::Expansion BesselTable::Data::expand(int order, double x) const {
  Expansion e;
  const bool near = is_near(order, x);
  const int node = near ? nearest_node(x) : static_cast<int>(x) - 1;
  const double x0[1] = {node + 1.0};
  e.t[0] = x - x0[0];
  e.slope = slope(order, node);
  e.d[0][0] = at(order, node);
  e.d[1][0] = e.slope * e.t[0];
  if (e.d[0][0] == 0 && e.slope == 0) return e;
  // To the left of the turning point the terms grow like (n t / x0)^k / k! before they fall.
  e.count =
      near ? bessel::kNearTerms : std::min(bessel::kMaxTerms, 18 + static_cast<int>(4.2 * order * e.t[0] / x0[0]));
  bessel::taylor_terms<double, 1>(order, e.count, x0, e.t, e.d);
  return e;
}

double BesselTable::Data::value(int order, double x) const {
  if (x > kLastNode) return boost::math::cyl_bessel_j(order, x);
  if (is_small(order, x)) return bessel::power_series(order, x);
  const Expansion e = expand(order, x);
  double sum = 0;
  for (int k = e.count - 1; k >= 0; --k) sum += e.d[k][0];
  return kUnscale * sum;
}

double BesselTable::Data::derivative(int order, double x) const {
  if (x > kLastNode) return boost::math::cyl_bessel_j_prime(order, x);
  if (is_small(order, x)) {
    if (order == 0) return -bessel::power_series(1, x);
    return 0.5 * (bessel::power_series(order - 1, x) - bessel::power_series(order + 1, x));
  }
  const Expansion e = expand(order, x);
  double sum = 0;
  for (int k = e.count - 1; k >= 2; --k) sum += k * e.d[k][0];
  if (sum != 0) sum /= e.t[0];
  return kUnscale * (e.slope + sum);
}

BesselTable::BesselTable(int first_order, int last_order, double x_max) {
  require(first_order >= 0 && first_order <= kMaxOrder, "first_order of the Bessel table", first_order,
          fmt::format("0 to {}", kMaxOrder));
  require(last_order >= first_order && last_order <= kMaxOrder, "last_order of the Bessel table", last_order,
          fmt::format("first_order {} to {}", first_order, kMaxOrder));
  require(x_max >= 0 && x_max <= kMaxX, "x_max of the Bessel table", x_max, fmt::format("0 to {}", kMaxX));
  auto data = std::make_shared<Data>();
  data->first_order = first_order;
  data->last_order = last_order;
  data->x_max = x_max;
  data->build();
  data_ = std::move(data);
}

int BesselTable::first_order() const noexcept { return data_->first_order; }
int BesselTable::last_order() const noexcept { return data_->last_order; }
double BesselTable::x_max() const noexcept { return data_->x_max; }

double BesselTable::value(int order, double x) const {
  data_->check(order, x);
  return data_->value(order, x);
}

double BesselTable::derivative(int order, double x) const {
  data_->check(order, x);
  return data_->derivative(order, x);
}

void BesselTable::values(int order, const double* x, std::size_t count, double* out) const {
  const Data& data = *data_;
  double x0[kLanes], t[kLanes] = {}, value[kLanes] = {}, slope[kLanes] = {};
  std::fill_n(x0, kLanes, 1.0);
  std::size_t index[kLanes];
  int used = 0;
  const auto flush = [&] {
    Pair x0s[kPairs], ts[kPairs], sum[kPairs], d[bessel::kNearTerms][kPairs];
    for (int l = 0; l < kPairs; ++l) {
      x0s[l] = bessel::load_pair(x0, l);
      ts[l] = bessel::load_pair(t, l);
      d[0][l] = bessel::load_pair(value, l);
      d[1][l] = bessel::load_pair(slope, l) * ts[l];
      sum[l] = Pair{};
    }
    bessel::taylor_terms<Pair, kPairs>(order, bessel::kNearTerms, x0s, ts, d);
    for (int k = bessel::kNearTerms - 1; k >= 0; --k) {
      for (int l = 0; l < kPairs; ++l) sum[l] += d[k][l];
    }
    for (int l = 0; l < used; ++l) out[index[l]] = kUnscale * sum[l / 2][l % 2];
    used = 0;
  };
  for (std::size_t i = 0; i < count; ++i) {
    data.check(order, x[i]);
    if (x[i] > kLastNode || !is_near(order, x[i])) {
      out[i] = data.value(order, x[i]);
      continue;
    }
    const int node = nearest_node(x[i]);
    index[used] = i;
    x0[used] = node + 1.0;
    t[used] = x[i] - x0[used];
    value[used] = data.at(order, node);
    slope[used] = data.slope(order, node);
    if (++used == kLanes) flush();
  }
  if (used > 0) flush();
}

}  // namespace tambour

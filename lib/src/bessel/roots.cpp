#include <algorithm>
#include <cmath>
#include <cstddef>
#include <utility>
#include <vector>

#include "base/check.hpp"
#include "bessel/sweeps.hpp"
#include "bessel/taylor.hpp"
#include "tambour/bessel.hpp"

namespace tambour {
namespace {

using bessel::kChunk;
using bessel::kLanes;
using bessel::kPairs;
using bessel::Pair;

constexpr int kTerms = bessel::kNearTerms + 2;  // the node with the smaller value need not be the nearest
constexpr int kCoarseTerms = 8;                 // good to 1e-6
constexpr int kMaxOrder = 5000;
constexpr double kMaxLimit = 1e5;
// Roots lie above x = n, where a sweep begun this far down has forgotten its start.
constexpr double kDepth = 30;

// One Halley step from (y, dy) = (J_n, J_n') at x towards the root; higher derivatives follow from Bessel's equation.
template <Edge edge>
inline Pair halley_step(double order, Pair x, Pair y, Pair dy) {
  const Pair inverse = 1.0 / x;
  const Pair own = (x - order) * (x + order) * inverse * inverse;
  const Pair ddy = -(dy * inverse + own * y);
  if constexpr (edge == Edge::dirichlet) {
    return -2.0 * y * dy / (2.0 * dy * dy - y * ddy);
  } else {
    const Pair ratio = order * inverse;
    const Pair dddy = -(ddy * inverse + (own - inverse * inverse) * dy + 2.0 * ratio * ratio * inverse * y);
    return -2.0 * dy * ddy / (2.0 * ddy * ddy - dy * dddy);
  }
}

// Up to kLanes roots of one order, each next to a node x0 where y and dy are known up to a common factor.
struct RootLanes {
  double x0[kLanes];
  double y[kLanes];
  double dy[kLanes];
  double root[kLanes];

  template <Edge edge>
  void solve(double order);
};

template <Edge edge>
void RootLanes::solve(double order) {
  Pair node[kPairs], t[kPairs], one[kPairs], c[kTerms][kPairs];
  for (int l = 0; l < kPairs; ++l) {
    node[l] = bessel::load_pair(x0, l);
    c[0][l] = bessel::load_pair(y, l);
    c[1][l] = bessel::load_pair(dy, l);
    one[l] = Pair{1, 1};
    t[l] = halley_step<edge>(order, node[l], c[0][l], c[1][l]);
  }
  bessel::taylor_terms<Pair, kPairs>(order, kTerms, node, one, c);
  // Third-order convergence from a first step that may leave 0.1; only the last round needs every term.
  for (const int terms : {kCoarseTerms, kCoarseTerms, kTerms}) {
    Pair value[kPairs], slope[kPairs];
    for (int l = 0; l < kPairs; ++l) {
      value[l] = c[terms - 1][l];
      slope[l] = Pair{};
    }
    for (int k = terms - 2; k >= 0; --k) {
      for (int l = 0; l < kPairs; ++l) {
        slope[l] = slope[l] * t[l] + value[l];
        value[l] = value[l] * t[l] + c[k][l];
      }
    }
    for (int l = 0; l < kPairs; ++l) t[l] += halley_step<edge>(order, node[l] + t[l], value[l], slope[l]);
  }
  for (int l = 0; l < kLanes; ++l) root[l] = x0[l] + t[l / 2][l % 2];
}

// Appends the roots of one order that lie between the nodes x = first .. first + count - 1.
void append_roots(Edge edge, int order, int first, int count, const double* y, const double* dy,
                  std::vector<double>* roots) {
  const double* f = edge == Edge::dirichlet ? y : dy;
  // Neighbouring roots lie more than 3 apart and the nodes 1: a cell holds no root or one, told by the signs.
  int cells[kChunk];
  int found = 0;
  for (int i = std::max(0, order - 1 - first); i + 1 < count; ++i) {
    cells[found] = i;
    found += (f[i] > 0) != (f[i + 1] > 0);
  }
  for (int begin = 0; begin < found; begin += kLanes) {
    const int used = std::min(kLanes, found - begin);
    RootLanes lanes;
    for (int l = 0; l < kLanes; ++l) {
      const int cell = cells[begin + std::min(l, used - 1)];
      const int node = std::abs(f[cell]) < std::abs(f[cell + 1]) ? cell : cell + 1;
      lanes.x0[l] = first + node;
      lanes.y[l] = y[node];
      lanes.dy[l] = dy[node];
    }
    if (edge == Edge::dirichlet) {
      lanes.solve<Edge::dirichlet>(order);
    } else {
      lanes.solve<Edge::neumann>(order);
    }
    roots->insert(roots->end(), lanes.root, lanes.root + used);
  }
}

using RootLists = std::vector<std::vector<double>>;

void append_roots(Edge edge, int first, int count, const bessel::Sweep<double>& sweep, std::vector<double>* roots) {
  double dy[kChunk + 1];
  for (int i = 0; i < count; ++i) dy[i] = 0.5 * (sweep.below()[i] - sweep.above()[i]);
  append_roots(edge, sweep.order(), first, count, sweep.here(), dy, roots);
}

// All orders lie below x here: upwards, which takes one step an order wherever x is.
void search_upwards(int first_order, Edge edge, int first, int count, RootLists* lists) {
  bessel::UpwardSweep<double> sweep(first_order, first, count);
  append_roots(edge, first_order, first, count, sweep.here(), sweep.first_slope(), &lists->front());
  for (std::size_t i = 1; i < lists->size(); ++i) {
    sweep.next();
    append_roots(edge, first, count, sweep, &(*lists)[i]);
  }
}

void search_downwards(int first_order, Edge edge, int first, int count, RootLists* lists) {
  const int last_order = first_order + static_cast<int>(lists->size()) - 1;
  bessel::DownwardSweep<double> sweep(first, bessel::start_orders(first, count, kDepth));
  do {
    if (sweep.order() > last_order) continue;
    append_roots(edge, first, count, sweep, &(*lists)[static_cast<std::size_t>(sweep.order() - first_order)]);
  } while (sweep.order() > first_order && sweep.next());
}

RootLists find_roots(int first_order, int last_order, Edge edge, double limit) {
  RootLists roots(static_cast<std::size_t>(last_order - first_order + 1));
  if (edge == Edge::neumann && first_order == 0) roots[0].push_back(0.0);  // the constant function
  const int last_node = static_cast<int>(std::ceil(limit)) + 1;
  for (int first = 1; first < last_node; first += kChunk) {
    const int count = std::min(kChunk, last_node - first) + 1;
    if (first + count - 1 < first_order) continue;  // no root of these orders so far down
    if (first > last_order) {
      search_upwards(first_order, edge, first, count, &roots);
    } else {
      search_downwards(first_order, edge, first, count, &roots);
    }
  }
  for (auto& list : roots) {
    while (!list.empty() && list.back() > limit) list.pop_back();
  }
  return roots;
}

void check_arguments(const char* name, int order, double limit) {
  require(order >= 0 && order <= kMaxOrder, name, order, fmt::format("0 to {}", kMaxOrder));
  require(limit >= 0 && limit <= kMaxLimit, "limit of the Bessel roots", limit, fmt::format("0 to {}", kMaxLimit));
}

}  // namespace

const char* to_string(Edge edge) { return edge == Edge::dirichlet ? "dirichlet" : "neumann"; }

std::vector<double> bessel_roots(int order, Edge edge, double limit) {
  check_arguments("order of the Bessel roots", order, limit);
  return std::move(find_roots(order, order, edge, limit).front());
}

std::vector<std::vector<double>> bessel_roots_up_to(int max_order, Edge edge, double limit) {
  check_arguments("max_order of the Bessel roots", max_order, limit);
  return find_roots(0, max_order, edge, limit);
}

}  // namespace tambour

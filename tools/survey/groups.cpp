#include "survey/groups.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "common/coefficient_batches.hpp"
#include "survey/report_collector.hpp"

namespace tambour::tools::survey {
namespace {

using Complex = std::complex<double>;

constexpr std::size_t most_groups = 8;
constexpr std::size_t most_examples = 12;
constexpr std::ptrdiff_t example_side = 128;

struct Group {
  ReportGroup shown;
  std::vector<Complex> sum;
};

/// Supported folds by size, then the inconclusive images.
std::vector<Group> empty_groups(const std::vector<ImageRow>& rows, std::size_t terms) {
  std::map<int, std::size_t> supported;
  std::size_t inconclusive = 0;
  for (const ImageRow& row : rows) {
    if (row.verdict == Verdict::best_supported) ++supported[row.fold];
    if (row.verdict == Verdict::inconclusive) ++inconclusive;
  }
  std::vector<Group> groups;
  for (const auto& [fold, images] : supported) {
    Group& group = groups.emplace_back();
    group.shown.verdict = to_string(Verdict::best_supported);
    group.shown.fold = fold;
    group.shown.images = images;
    group.sum.resize(terms);
  }
  std::stable_sort(groups.begin(), groups.end(),
                   [](const Group& a, const Group& b) { return a.shown.images > b.shown.images; });
  if (groups.size() > most_groups - 1) groups.resize(most_groups - 1);
  if (inconclusive > 0) {
    ReportGroup& shown = groups.emplace_back().shown;
    shown.verdict = to_string(Verdict::inconclusive);
    shown.images = inconclusive;
  }
  return groups;
}

Group* group_of(std::vector<Group>& groups, const ImageRow& row) {
  const int fold = row.verdict == Verdict::best_supported ? row.fold : 0;
  const auto found = std::find_if(groups.begin(), groups.end(), [&](const Group& group) {
    return group.shown.verdict == to_string(row.verdict) && group.shown.fold == fold;
  });
  return found == groups.end() ? nullptr : &*found;
}

/// Turns a pattern at `degrees` back to the angle 0.
std::vector<Complex> turned(const DiskBasis& basis, std::span<const Complex> coefficients, double degrees) {
  std::vector<Complex> result(coefficients.begin(), coefficients.end());
  const double angle = degrees * std::numbers::pi / 180;
  for (std::size_t i = 0; i < result.size(); ++i) result[i] *= std::polar(1.0, basis.terms()[i].angular_order * angle);
  return result;
}

ReportPicture rebuilt_in_middle(const StackStudyPlan& plan, std::ptrdiff_t rows, std::ptrdiff_t columns,
                                const std::vector<Complex>& coefficients) {
  std::vector<double> pixels(rows * columns);
  const ImageView<double> view(pixels.data(), rows, columns);
  plan.rebuild(coefficients, frame_middle(rows, columns), view);
  return picture_of(view, example_side);
}

}  // namespace

std::vector<ReportGroup> make_groups(const std::string& coefficient_file, const StackStudyPlan& plan,
                                     const std::vector<ImageRow>& rows,
                                     const std::map<std::size_t, PatternAngle>& angles, Session& session) {
  const CoefficientReader reader(coefficient_file);
  const std::ptrdiff_t height = reader.header().rows, width = reader.header().columns;
  std::vector<Group> groups = empty_groups(rows, reader.basis().size());
  for_each_batch(reader, "groups", session, [&](const CoefficientBatch& batch) {
    for (std::size_t i = 0; i < batch.size(); ++i) {
      const ImageRow& row = rows[batch.first + i];
      Group* group = group_of(groups, row);
      if (group == nullptr || (group->sum.empty() && group->shown.examples.size() >= most_examples)) continue;
      const auto angle = angles.find(row.image);
      const std::vector<Complex> aligned =
          turned(reader.basis(), batch.of(i), angle == angles.end() ? 0 : angle->second.angle);
      for (std::size_t term = 0; term < group->sum.size(); ++term) group->sum[term] += aligned[term];
      if (group->shown.examples.size() >= most_examples) continue;
      ReportImage example;
      example.image = row.image;
      example.source = row.source;
      example.verdict = group->shown.verdict;
      example.fold = group->shown.fold;
      example.picture = rebuilt_in_middle(plan, height, width, aligned);
      example.centre = frame_middle(height, width);
      group->shown.examples.push_back(std::move(example));
    }
  });
  std::vector<ReportGroup> result;
  for (Group& group : groups) {
    if (!group.sum.empty()) {
      for (Complex& a : group.sum) a /= static_cast<double>(group.shown.images);
      group.shown.mean = rebuilt_in_middle(plan, height, width, group.sum);
    }
    result.push_back(std::move(group.shown));
  }
  return result;
}

}  // namespace tambour::tools::survey

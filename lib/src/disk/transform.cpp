#include <fmt/format.h>

#include <cmath>
#include <type_traits>

#include "base/check.hpp"
#include "disk/analysis.hpp"
#include "disk/synthesis.hpp"
#include "tambour/disk_transform.hpp"

namespace tambour {
namespace {

/// The first pixel that is not a number, or ok.
template <class T>
ImageStatus finite(ImageView<const T> image) {
  for (std::ptrdiff_t y = 0; y < image.rows; ++y)
    for (std::ptrdiff_t x = 0; x < image.columns; ++x)
      if (!std::isfinite(image(y, x)))
        return {fmt::format("pixel (x {}, y {}) is {}; every pixel must be finite", x, y, image(y, x))};
  return {};
}

}  // namespace

ImageStatus disk_in_frame(Centre centre, double radius, std::ptrdiff_t rows, std::ptrdiff_t columns) {
  if (!std::isfinite(centre.x) || !std::isfinite(centre.y)) return {"the centre is not finite"};
  const double slack = 1e-9;  // a disk that touches the rim exactly is inside
  const auto fits = [&](double c, std::ptrdiff_t size) {
    return c - radius >= -0.5 - slack && c + radius <= static_cast<double>(size) - 0.5 + slack;
  };
  if (fits(centre.x, columns) && fits(centre.y, rows)) return {};
  return {fmt::format(
      "the disk of radius {:.6g} px around ({:.6g}, {:.6g}) leaves the frame of {} x {} px (columns x rows)", radius,
      centre.x, centre.y, columns, rows)};
}

std::vector<std::string> DiskTransformOptions::problems() const {
  std::vector<std::string> found = geometry.problems();
  for (const auto& [name, size] : {std::pair{"rows", rows}, std::pair{"columns", columns}})
    if (size < 8 || size > 16384) found.push_back(fmt::format("{} is {}; allowed is 8 to 16384", name, size));
  if (tolerance != 0 && !(tolerance >= 1e-12 && tolerance <= 1e-2))
    found.push_back(fmt::format("tolerance is {}; allowed is 1e-12 to 1e-2, or 0 for the precision's own", tolerance));
  if (found.empty() && !disk_in_frame(frame_middle(rows, columns), geometry.radius, rows, columns).ok())
    found.push_back(fmt::format("radius is {} px; at most {} px fit into a frame of {} x {} px (columns x rows)",
                                geometry.radius, static_cast<double>(std::min(rows, columns)) / 2, columns, rows));
  return found;
}

template <class T>
struct DiskTransform<T>::Plan {
  DiskTransformOptions options;
  DiskBasis basis;
  disk::Analysis<T> analysis;
  disk::Synthesis<T> synthesis;

  explicit Plan(const DiskTransformOptions& o)
      : options(o),
        basis(o.geometry),
        analysis(basis, static_cast<int>(o.rows), static_cast<int>(o.columns), o.tolerance),
        synthesis(basis, o.tolerance) {}
};

template <class T>
struct DiskTransform<T>::Workspace::State {
  typename disk::Analysis<T>::Scratch analysis;
  typename disk::Synthesis<T>::Scratch synthesis;
};

template <class T>
DiskTransform<T>::Workspace::Workspace(std::unique_ptr<State> state) : state_(std::move(state)) {}
template <class T>
DiskTransform<T>::Workspace::Workspace(Workspace&&) noexcept = default;
template <class T>
typename DiskTransform<T>::Workspace& DiskTransform<T>::Workspace::operator=(Workspace&&) noexcept = default;
template <class T>
DiskTransform<T>::Workspace::~Workspace() = default;

template <class T>
DiskTransform<T>::DiskTransform(const DiskTransformOptions& options) {
  refuse_if_any(options.problems());
  DiskTransformOptions filled = options;
  constexpr double finest = std::is_same_v<T, float> ? 1e-6 : 1e-12;
  if (filled.tolerance == 0) filled.tolerance = finest;
  require(filled.tolerance >= finest, "tolerance", filled.tolerance,
          fmt::format("{} to 1e-2 in this precision", finest));
  plan_ = std::make_shared<const Plan>(filled);
}

template <class T>
const DiskBasis& DiskTransform<T>::basis() const noexcept {
  return plan_->basis;
}

template <class T>
const DiskTransformOptions& DiskTransform<T>::options() const noexcept {
  return plan_->options;
}

template <class T>
typename DiskTransform<T>::Workspace DiskTransform<T>::make_workspace() const {
  return Workspace(std::make_unique<typename Workspace::State>(
      typename Workspace::State{plan_->analysis.make_scratch(), plan_->synthesis.make_scratch()}));
}

template <class T>
void DiskTransform<T>::check_shapes(std::ptrdiff_t images, std::ptrdiff_t rows, std::ptrdiff_t columns,
                                    std::size_t centres, std::ptrdiff_t coefficient_rows,
                                    std::ptrdiff_t coefficient_columns) const {
  const auto& o = plan_->options;
  require(rows == o.rows, "rows of the images", rows, fmt::format("{}, as planned", o.rows));
  require(columns == o.columns, "columns of the images", columns, fmt::format("{}, as planned", o.columns));
  require(centres == 0 || static_cast<std::ptrdiff_t>(centres) == images, "number of centres", centres,
          fmt::format("0 or {}, one per image", images));
  require(coefficient_rows == images, "rows of the coefficients", coefficient_rows,
          fmt::format("{}, one per image", images));
  require(coefficient_columns == static_cast<std::ptrdiff_t>(plan_->basis.size()), "columns of the coefficients",
          coefficient_columns, fmt::format("{}, one per term", plan_->basis.size()));
}

template <class T>
void DiskTransform<T>::analyse_one(ImageView<const T> image, Centre centre, Complex* out, ImageStatus& status,
                                   Workspace& workspace) const {
  const auto& o = plan_->options;
  status = disk_in_frame(centre, o.geometry.radius, o.rows, o.columns);
  if (status.ok()) status = finite(image);
  if (status.ok())
    plan_->analysis.run(image, centre, out, workspace.state_->analysis);
  else
    std::fill_n(out, plan_->basis.size(), Complex());
}

template <class T>
void DiskTransform<T>::analyse(StackView<const T> images, std::span<const Centre> centres,
                               MatrixView<Complex> coefficients, std::span<ImageStatus> statuses,
                               Workspace& workspace) const {
  check_shapes(images.images, images.rows, images.columns, centres.size(), coefficients.rows, coefficients.columns);
  require(static_cast<std::ptrdiff_t>(statuses.size()) == images.images, "number of statuses", statuses.size(),
          fmt::format("{}, one per image", images.images));
  const Centre middle = frame_middle(images.rows, images.columns);
  for (std::ptrdiff_t i = 0; i < images.images; ++i)
    analyse_one(images[i], centres.empty() ? middle : centres[i], coefficients.row(i), statuses[i], workspace);
}

template <class T>
void DiskTransform<T>::analyse(StackView<const T> images, std::span<const Centre> centres,
                               MatrixView<Complex> coefficients, std::span<ImageStatus> statuses,
                               Executor& executor) const {
  check_shapes(images.images, images.rows, images.columns, centres.size(), coefficients.rows, coefficients.columns);
  require(static_cast<std::ptrdiff_t>(statuses.size()) == images.images, "number of statuses", statuses.size(),
          fmt::format("{}, one per image", images.images));
  const Centre middle = frame_middle(images.rows, images.columns);
  std::vector<Workspace> workspaces;
  workspaces.reserve(executor.workers());
  for (int worker = 0; worker < executor.workers(); ++worker) workspaces.push_back(make_workspace());
  executor.run(images.images, [&](std::size_t i, int worker) {
    analyse_one(images[i], centres.empty() ? middle : centres[i], coefficients.row(i), statuses[i], workspaces[worker]);
  });
}

template <class T>
void DiskTransform<T>::synthesise(MatrixView<const Complex> coefficients, std::span<const Centre> centres,
                                  StackView<T> images, Workspace& workspace) const {
  check_shapes(images.images, images.rows, images.columns, centres.size(), coefficients.rows, coefficients.columns);
  const Centre middle = frame_middle(images.rows, images.columns);
  for (std::ptrdiff_t i = 0; i < images.images; ++i)
    plan_->synthesis.run(coefficients.row(i), centres.empty() ? middle : centres[i], images[i],
                         workspace.state_->synthesis);
}

template <class T>
void DiskTransform<T>::synthesise(MatrixView<const Complex> coefficients, std::span<const Centre> centres,
                                  StackView<T> images, Executor& executor) const {
  check_shapes(images.images, images.rows, images.columns, centres.size(), coefficients.rows, coefficients.columns);
  const Centre middle = frame_middle(images.rows, images.columns);
  std::vector<Workspace> workspaces;
  workspaces.reserve(executor.workers());
  for (int worker = 0; worker < executor.workers(); ++worker) workspaces.push_back(make_workspace());
  executor.run(images.images, [&](std::size_t i, int worker) {
    plan_->synthesis.run(coefficients.row(i), centres.empty() ? middle : centres[i], images[i],
                         workspaces[worker].state_->synthesis);
  });
}

template class DiskTransform<float>;
template class DiskTransform<double>;

}  // namespace tambour

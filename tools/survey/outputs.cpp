#include "survey/outputs.hpp"

#include <fmt/format.h>

#include <cmath>
#include <filesystem>
#include <limits>

#include "common/centre_rows.hpp"
#include "tambour/error.hpp"
#include "tambour/files.hpp"

namespace tambour::tools::survey {
namespace {

std::span<const std::complex<double>> coefficients_of(const StudyBatch& batch, std::size_t i) {
  return {batch.coefficients.row(static_cast<std::ptrdiff_t>(i)), static_cast<std::size_t>(batch.coefficients.columns)};
}

}  // namespace

SurveyPaths::SurveyPaths(const std::string& folder) {
  const std::filesystem::path base(folder);
  images = (base / "images.csv").string();
  centres = (base / "centres.csv").string();
  orders = (base / "orders.csv").string();
  coefficients = (base / "coefficients.h5").string();
  descriptors = (base / "descriptors.npy").string();
  descriptor_layout = layout_path(descriptors);
  report = (base / "report.html").string();
}

std::vector<std::string> SurveyPaths::all() const {
  return {images, centres, orders, coefficients, descriptors, descriptor_layout, report};
}

void prepare_folder(const std::string& folder, const SurveyPaths& paths, bool overwrite) {
  std::error_code problem;
  std::filesystem::create_directories(folder, problem);
  if (problem || !std::filesystem::is_directory(folder))
    throw Error(ErrorCode::cannot_write, fmt::format("{}: no folder can be made there ({})", folder,
                                                     problem ? problem.message() : "a file has that name"));
  for (const std::string& path : paths.all()) check_writable(path, overwrite);
}

BatchOutputs::BatchOutputs(const SurveyPaths& paths, const StackStudyPlan& plan, const CoefficientHeader& header,
                           std::size_t images, const Session& session, bool overwrite)
    : plan_(plan),
      paths_(paths),
      overwrite_(overwrite),
      images_(images),
      descriptor_(plan.basis(), DescriptorOptions{}),
      centres_(paths.centres, overwrite),
      orders_(paths.orders, overwrite),
      coefficients_(paths.coefficients, plan.basis(), header, overwrite),
      descriptors_(create_matrix(paths.descriptors, {images, descriptor_.size()}, overwrite)) {
  session.describe_in(centres_);
  write_centre_header(plan.options(), centres_);
  session.describe_in(orders_);
  orders_.comment("power: image units squared times px^2, both signs of the order together, noise subtracted");
  orders_.row({"image", "angular_order", "power", "se", "noise_power"});
}

void BatchOutputs::take(const StudyBatch& batch, Executor& executor) {
  for (const ImageStudy& study : batch.images) {
    centres_.row(centre_row(study));
    if (!study.status.ok()) skipped_.push_back(study.image);
  }
  coefficients_.take(batch);
  write_orders(batch, executor);
  write_descriptors(batch, executor);
}

void BatchOutputs::write_orders(const StudyBatch& batch, Executor& executor) {
  std::vector<std::string> lines(batch.images.size());
  executor.run(lines.size(), [&](std::size_t i, int) {
    for (const OrderPower& order : batch.images[i].spectrum)
      lines[i] += csv_line({std::to_string(batch.first + i), std::to_string(order.angular_order), cell(order.power),
                            cell(order.se), cell(order.noise_power)});
  });
  for (const std::string& image : lines) orders_.rows(image);
}

void BatchOutputs::write_descriptors(const StudyBatch& batch, Executor& executor) {
  const std::size_t size = descriptor_.size();
  std::vector<double> values(batch.images.size() * size, std::numeric_limits<double>::quiet_NaN());
  executor.run(batch.images.size(), [&](std::size_t i, int) {
    if (batch.images[i].status.ok()) descriptor_.compute(coefficients_of(batch, i), {values.data() + i * size, size});
  });
  descriptors_->append(
      {values.data(), static_cast<std::ptrdiff_t>(batch.images.size()), static_cast<std::ptrdiff_t>(size)});
}

BatchOutputs::~BatchOutputs() {
  std::error_code ignored;
  if (coefficients_alone_) std::filesystem::remove(paths_.coefficients, ignored);
}

void BatchOutputs::finish_coefficients(const Provenance& provenance) {
  coefficients_.finish(provenance);
  coefficients_alone_ = true;
}

void BatchOutputs::finish_tables(const Provenance& provenance) {
  OutputFile layout(paths_.descriptor_layout, overwrite_);
  layout.write(layout_text(plan_.options().geometry, images_, descriptor_, provenance, skipped_));
  centres_.commit();
  coefficients_alone_ = false;
  orders_.commit();
  descriptors_->finish();
  layout.commit();
}

}  // namespace tambour::tools::survey

#include "common/coefficient_sink.hpp"

#include <algorithm>
#include <complex>
#include <utility>

namespace tambour::tools {
namespace {

CoefficientRecord record_of(const ImageStudy& study, std::size_t nodes) {
  CoefficientRecord record;
  record.centre = study.centre.centre;
  record.source = study.source;
  record.status = study.status;
  record.noise_sd = study.noise_sd;
  record.noise_spectrum = study.noise.variance;
  record.noise_spectrum.resize(nodes, 0.0);
  std::copy(std::begin(study.prepared.background), std::end(study.prepared.background), record.background);
  return record;
}

}  // namespace

CoefficientHeader header_of(const StackStudyPlan& plan, const ImageSource& source, const Session& session) {
  CoefficientHeader header;
  header.geometry = plan.options().geometry;
  header.rows = source.rows();
  header.columns = source.columns();
  header.double_precision = plan.options().double_precision;
  header.tolerance = plan.tolerance();
  header.pixel_size = source.pixel_size();
  header.preparation = plan.options().preparation;
  header.provenance = session.provenance({});
  return header;
}

CoefficientSink::CoefficientSink(std::string path, const DiskBasis& basis, CoefficientHeader header, bool overwrite)
    : path_(std::move(path)), basis_(basis), header_(std::move(header)), overwrite_(overwrite) {}

void CoefficientSink::take(const StudyBatch& batch) {
  if (!writer_) {
    const auto first_fine = std::find_if(batch.images.begin(), batch.images.end(),
                                         [](const ImageStudy& study) { return study.status.ok(); });
    if (first_fine == batch.images.end()) {
      for (const auto& study : batch.images) waiting_.push_back(record_of(study, 0));
      return;
    }
    header_.noise_frequency = first_fine->noise.root;
    open();
  }
  std::vector<CoefficientRecord> records;
  records.reserve(batch.images.size());
  for (const auto& study : batch.images) records.push_back(record_of(study, header_.noise_frequency.size()));
  writer_->append(batch.coefficients, records);
}

void CoefficientSink::finish(const Provenance& provenance) {
  if (!writer_) open();
  writer_->finish(provenance);
}

void CoefficientSink::open() {
  writer_.emplace(path_, basis_, header_, overwrite_);
  const std::vector<std::complex<double>> zeros(basis_.size());
  for (auto& record : waiting_) {
    record.noise_spectrum.assign(header_.noise_frequency.size(), 0.0);
    writer_->append(MatrixView<const std::complex<double>>(zeros.data(), 1, static_cast<std::ptrdiff_t>(zeros.size())),
                    {record});
  }
  waiting_.clear();
}

}  // namespace tambour::tools

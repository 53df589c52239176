#include "common/coefficient_batches.hpp"

#include <algorithm>

#include "tambour/error.hpp"

namespace tambour::tools {

void for_each_batch(const CoefficientReader& reader, std::string_view stage, Session& session,
                    const std::function<void(const CoefficientBatch&)>& take) {
  constexpr std::size_t images_per_worker = 16;
  const std::size_t size = images_per_worker * static_cast<std::size_t>(session.executor().workers());
  const auto terms = static_cast<std::ptrdiff_t>(reader.basis().size());
  std::vector<std::complex<double>> values(std::min(size, reader.images()) * reader.basis().size());
  for (std::size_t first = 0; first < reader.images(); first += size) {
    stop_if_interrupted();
    const std::size_t count = std::min(size, reader.images() - first);
    const MatrixView<std::complex<double>> rows(values.data(), static_cast<std::ptrdiff_t>(count), terms);
    CoefficientBatch batch{first, {}, rows};
    reader.read(first, rows, &batch.records);
    take(batch);
    session.progress().advance(stage, first + count, reader.images());
  }
  stop_if_interrupted();
}

void require_images(const CoefficientReader& reader, const std::string& path) {
  if (reader.images() == 0) throw Error(ErrorCode::bad_input, path + ": holds no image; allowed is one or more");
}

void name_skipped(const CoefficientBatch& batch, Session& session) {
  for (std::size_t i = 0; i < batch.size(); ++i)
    if (const CoefficientRecord& record = batch.records[i]; !record.status.ok())
      session.skip(batch.first + i, record.source, record.status.reason);
}

NoiseSpectrum noise_of(const CoefficientHeader& header, const CoefficientRecord& record) {
  const bool known = !header.noise_frequency.empty() && record.noise_spectrum.size() == header.noise_frequency.size() &&
                     std::all_of(record.noise_spectrum.begin(), record.noise_spectrum.end(),
                                 [](double variance) { return variance > 0; });
  if (!known) return {};
  return {header.noise_frequency, record.noise_spectrum};
}

}  // namespace tambour::tools

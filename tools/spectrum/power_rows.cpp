#include "spectrum/power_rows.hpp"

namespace tambour::tools::spectrum {

PowerOfImage::PowerOfImage(const DiskBasis& basis, int rings) : basis_(basis) {
  if (rings > 0) rings_.emplace(basis, rings);
}

PowerTable PowerOfImage::compute(std::span<const std::complex<double>> coefficients, const NoiseSpectrum& noise) const {
  if (rings_) return rings_->compute(coefficients, noise);
  return {rotational_spectrum(basis_, coefficients, noise)};
}

std::vector<std::string> PowerOfImage::header() const {
  std::vector<std::string> names{"image", "angular_order", "power", "se", "noise_power"};
  if (rings_) names.insert(names.end(), {"ring_inner", "ring_outer"});
  return names;
}

void PowerOfImage::write(const std::string& label, const PowerTable& table, bool noise_known, CsvWriter& out) const {
  for (std::size_t ring = 0; ring < table.size(); ++ring)
    for (const auto& order : table[ring]) {
      std::vector<std::string> cells{label, std::to_string(order.angular_order), cell(order.power),
                                     noise_known ? cell(order.se) : "", noise_known ? cell(order.noise_power) : ""};
      if (rings_) {
        cells.push_back(cell(rings_->inner(static_cast<int>(ring))));
        cells.push_back(cell(rings_->outer(static_cast<int>(ring))));
      }
      out.row(cells);
    }
}

void MeanPower::add(const PowerTable& table, bool noise_known) {
  ++images_;
  noise_known_ = noise_known_ && noise_known;
  if (sum_.empty()) {
    sum_ = table;
    for (auto& ring : sum_)
      for (auto& order : ring) order.se *= order.se;
    return;
  }
  for (std::size_t ring = 0; ring < sum_.size(); ++ring)
    for (std::size_t n = 0; n < sum_[ring].size(); ++n) {
      const OrderPower& added = table[ring][n];
      sum_[ring][n].power += added.power;
      sum_[ring][n].noise_power += added.noise_power;
      sum_[ring][n].se += added.se * added.se;
    }
}

PowerTable MeanPower::mean() const {
  PowerTable mean = sum_;
  const auto count = static_cast<double>(images_);
  for (auto& ring : mean)
    for (auto& order : ring) {
      order.power /= count;
      order.noise_power /= count;
      order.se = std::sqrt(order.se) / count;
    }
  return mean;
}

}  // namespace tambour::tools::spectrum

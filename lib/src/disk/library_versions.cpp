#include <Eigen/Core>

#include "bessel/boost_version.hpp"
#include "fourier/plans.hpp"
#include "tambour/version.hpp"

namespace tambour {

std::vector<std::pair<std::string, std::string>> numeric_library_versions() {
  const std::string eigen = std::to_string(EIGEN_WORLD_VERSION) + "." + std::to_string(EIGEN_MAJOR_VERSION) + "." +
                            std::to_string(EIGEN_MINOR_VERSION);
  return {{"FFTW", fourier::fftw_library_version()}, {"Boost", bessel::boost_version()}, {"Eigen", eigen}};
}

}  // namespace tambour

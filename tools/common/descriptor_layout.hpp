// The sidecar that says what the numbers of a descriptor file are.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "tambour/descriptors.hpp"
#include "tambour/disk_basis.hpp"
#include "tambour/provenance.hpp"

namespace tambour::tools {

/// "d.npy" has its layout in "d.npy.json".
std::string layout_path(const std::string& output);

/// One JSON document: kind, band limit, names of the columns, the basis, the skipped images, and where it all comes
/// from.
std::string layout_text(const DiskGeometry& basis, std::size_t images, const Descriptor& descriptor,
                        const Provenance& provenance, const std::vector<std::size_t>& skipped);

}  // namespace tambour::tools

#include "common/descriptor_layout.hpp"

#include <nlohmann/json.hpp>

namespace tambour::tools {
namespace {

constexpr int layout_schema_version = 1;

}  // namespace

std::string layout_path(const std::string& output) { return output + ".json"; }

std::string layout_text(const DiskGeometry& basis, std::size_t images, const Descriptor& descriptor,
                        const Provenance& provenance, const std::vector<std::size_t>& skipped) {
  nlohmann::ordered_json layout;
  layout["schema_version"] = layout_schema_version;
  layout["kind"] = to_string(descriptor.options().kind);
  layout["bandlimit"] = descriptor.options().bandlimit;
  layout["mirror_invariant"] = descriptor.options().mirror_invariant;
  layout["images"] = images;
  layout["size"] = descriptor.size();
  layout["names"] = descriptor.names();
  layout["skipped_images"] = skipped;
  layout["basis"] = {{"radius", basis.radius}, {"edge", to_string(basis.edge)}, {"bandlimit", basis.bandlimit}};
  layout["command"] = provenance.command;
  layout["version"] = provenance.version;
  for (const auto& [file, hash] : provenance.inputs) layout["source"].push_back({{"file", file}, {"sha256", hash}});
  return layout.dump(2, ' ', false, nlohmann::ordered_json::error_handler_t::replace) + "\n";
}

}  // namespace tambour::tools

#include "describe/run.hpp"

#include <fmt/format.h>

#include <limits>

#include "common/coefficient_batches.hpp"
#include "common/descriptor_layout.hpp"
#include "common/parse.hpp"
#include "common/session.hpp"
#include "describe/descriptor_output.hpp"
#include "tambour/descriptors.hpp"
#include "tambour/files.hpp"

namespace tambour::tools::describe {
namespace {

struct Flags {
  std::string input;
  std::string kind = to_string(DescriptorKind::gram);
  DescriptorOptions options;
  SkipFlags skip;

  void add_to(CommandLine& line) {
    line.add_input("coefficients", input, "File that tambour-analyse wrote");
    line.add_choice("--kind", kind, {to_string(DescriptorKind::magnitude), to_string(DescriptorKind::gram)},
                    "magnitude: sizes of the coefficients; gram: their products within an order as well");
    line.add_number("--bandlimit", options.bandlimit, "Share of the pixel band whose terms are used, 0 to 1");
    line.add_flag("--mirror-invariant", options.mirror_invariant, "Mirror images get the same numbers as well");
    skip.add_to(line);
  }

  DescriptorOptions resolve() const {
    DescriptorOptions resolved = options;
    resolved.kind = kind == to_string(DescriptorKind::gram) ? DescriptorKind::gram : DescriptorKind::magnitude;
    refuse_if_any(resolved.problems());
    return resolved;
  }
};

}  // namespace

int run(const Arguments& arguments, std::ostream& out, std::ostream& err) {
  CommandLine line("tambour-describe", "Descriptors of images that do not change when the object is rotated.");
  Flags flags;
  flags.add_to(line);
  if (!line.parse(arguments, out)) return 0;
  const DescriptorOptions options = flags.resolve();
  Session session(line, out, err);
  const std::string sidecar_path = layout_path(line.out());
  check_writable(line.out(), line.force());
  check_writable(sidecar_path, line.force());

  session.refuse_as_output({flags.input});
  const CoefficientReader reader(flags.input);
  require_images(reader, flags.input);
  const Descriptor descriptor(reader.basis(), options);
  const auto output = create_output(line.out(), reader.images(), descriptor.names(), session, line.force());
  std::vector<std::size_t> skipped;
  for_each_batch(reader, "describe", session, [&](const CoefficientBatch& batch) {
    name_skipped(batch, session);
    std::vector<double> values(batch.size() * descriptor.size(), std::numeric_limits<double>::quiet_NaN());
    session.executor().run(batch.size(), [&](std::size_t i, int) {
      if (!batch.records[i].status.ok()) return;
      descriptor.compute(batch.of(i), {values.data() + i * descriptor.size(), descriptor.size()});
    });
    for (std::size_t i = 0; i < batch.size(); ++i)
      if (!batch.records[i].status.ok()) skipped.push_back(batch.first + i);
    output->append(
        {values.data(), static_cast<std::ptrdiff_t>(batch.size()), static_cast<std::ptrdiff_t>(descriptor.size())});
  });
  OutputFile sidecar(sidecar_path, line.force());
  sidecar.write(
      layout_text(reader.header().geometry, reader.images(), descriptor, session.provenance({flags.input}), skipped));
  output->finish();
  sidecar.commit();

  session.wrote("descriptors", line.out());
  session.wrote("layout", sidecar_path);
  session.result("images", reader.images() - session.skipped());
  session.result("kind", to_string(options.kind));
  session.result("size", descriptor.size());
  session.say(fmt::format("{}: {} images, {} numbers each ({}); layout in {}", line.out(),
                          reader.images() - session.skipped(), descriptor.size(), to_string(options.kind),
                          sidecar_path));
  return session.finish(flags.skip.max_skipped());
}

}  // namespace tambour::tools::describe

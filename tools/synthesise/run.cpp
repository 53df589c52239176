#include "synthesise/run.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "common/coefficient_batches.hpp"
#include "common/session.hpp"
#include "synthesise/background.hpp"
#include "tambour/disk_transform.hpp"
#include "tambour/files.hpp"

namespace tambour::tools::synthesise {
namespace {

constexpr double finest_tolerance = 1e-12;

struct Flags {
  std::string input;
  std::string pixel_type = "float32";
  bool add_background = false;
  SkipFlags skip;

  void add_to(CommandLine& line) {
    line.add_input("coefficients", input, "File that tambour-analyse wrote");
    line.add_choice("--pixel-type", pixel_type, {"float32", "float64"}, "Type of the pixels");
    line.add_flag("--add-background", add_background,
                  "Add the subtracted background again and turn an inverted contrast back");
    skip.add_to(line);
  }
};

DiskTransform<double> transform_for(const CoefficientHeader& header) {
  DiskTransformOptions options;
  options.geometry = header.geometry;
  options.rows = header.rows;
  options.columns = header.columns;
  options.tolerance = header.tolerance > 0 ? std::max(header.tolerance, finest_tolerance) : 0;
  return DiskTransform<double>(options);
}

}  // namespace

int run(const Arguments& arguments, std::ostream& out, std::ostream& err) {
  CommandLine line("tambour-synthesise", "Rebuilds images from Fourier-Bessel coefficients.");
  Flags flags;
  flags.add_to(line);
  if (!line.parse(arguments, out)) return 0;
  Session session(line, out, err);
  check_writable(line.out(), line.force());

  session.refuse_as_output({flags.input});
  const CoefficientReader reader(flags.input);
  require_images(reader, flags.input);
  const CoefficientHeader& header = reader.header();
  if (flags.add_background) require_restorable(flags.input, header.preparation);
  const StackShape shape{reader.images(), header.rows, header.columns, header.pixel_size,
                         flags.pixel_type == "float64" ? PixelType::float64 : PixelType::float32};
  const auto stack = create_stack(line.out(), shape, line.force());
  const auto transform = transform_for(header);
  for_each_batch(reader, "synthesise", session, [&](const CoefficientBatch& batch) {
    name_skipped(batch, session);
    const auto count = static_cast<std::ptrdiff_t>(batch.size());
    std::vector<double> pixels(static_cast<std::size_t>(count * header.rows * header.columns));
    const StackView<double> images(pixels.data(), count, header.rows, header.columns);
    std::vector<Centre> centres;
    for (const auto& record : batch.records) centres.push_back(record.centre);
    transform.synthesise(batch.coefficients, centres, images, session.executor());
    for (std::ptrdiff_t i = 0; i < count; ++i) {
      const auto& record = batch.records[static_cast<std::size_t>(i)];
      if (!record.status.ok())
        std::fill_n(images[i].data, header.rows * header.columns, 0.0);
      else if (flags.add_background)
        restore_background(header, record, images[i]);
      stack->append(images[i]);
    }
  });
  stack->finish();

  if (header.preparation.invert_contrast && !flags.add_background)
    session.remark("the contrast was inverted before the analysis and stays so (--add-background turns it back)");
  if (header.preparation.scaling != Scaling::none)
    session.remark("images were divided by the standard deviation outside the disk and stay so");
  session.wrote("images", line.out());
  session.result("images", reader.images());
  session.result("rebuilt", reader.images() - session.skipped());
  session.say(fmt::format("{}: {} images of {} by {} px{}", line.out(), reader.images(), header.columns, header.rows,
                          session.skipped() == 0 ? "" : fmt::format(", {} of them zero", session.skipped())));
  return session.finish(flags.skip.max_skipped());
}

}  // namespace tambour::tools::synthesise

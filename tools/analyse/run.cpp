#include "analyse/run.hpp"

#include <fmt/format.h>

#include "analyse/centres.hpp"
#include "common/coefficient_sink.hpp"
#include "common/geometry_flags.hpp"
#include "common/image_flags.hpp"
#include "common/preparation_flags.hpp"
#include "common/study_flags.hpp"

namespace tambour::tools::analyse {
namespace {

struct Flags {
  ImageFlags images;
  GeometryFlags geometry;
  CentreFlags centres;
  PreparationFlags preparation;
  StudyFlags study;
  SkipFlags skip;

  void add_to(CommandLine& line) {
    images.add_to(line);
    geometry.add_to(line, GeometryFlags::Radius::number, DiskGeometry{}.bandlimit);
    centres.add_to(line);
    study.add_precision(line);
    preparation.add_to(line, Background::none);
    study.add_batch(line);
    skip.add_to(line);
  }
};

}  // namespace

int run(const Arguments& arguments, std::ostream& out, std::ostream& err) {
  CommandLine line("tambour-analyse", "Expands every image of a stack in Fourier-Bessel functions on a disk.");
  Flags flags;
  flags.add_to(line);
  if (!line.parse(arguments, out)) return 0;
  Session session(line, out, err);
  check_writable(line.out(), line.force());

  const auto source = flags.images.open(session);
  StackStudyOptions options;
  options.geometry = flags.geometry.resolve(*source, 0, session);
  options.find_centres = false;
  options.test_symmetry = false;
  flags.study.apply(options);
  const Centres centres = flags.centres.resolve(*source, options.geometry.radius, session);
  if (centres.file) session.refuse_as_output({*centres.file});
  options.preparation = flags.preparation.resolve(source->rows(), source->columns(), options.geometry.radius, session);

  const StackStudyPlan plan(options, source->rows(), source->columns(), session.executor());
  CoefficientSink sink(line.out(), plan.basis(), header_of(plan, *source, session), line.force());
  plan.run(*source, centres.of_image, centres.status, session.executor(), session.progress(),
           [&](const StudyBatch& batch) {
             sink.take(batch);
             for (const auto& study : batch.images)
               if (!study.status.ok()) session.skip(study.image, study.source, study.status.reason);
           });
  auto inputs = source->files();
  if (centres.file) inputs.push_back(*centres.file);
  const Provenance provenance = session.provenance(inputs);
  stop_if_interrupted();
  sink.finish(provenance);

  const std::size_t analysed = source->images() - session.skipped();
  session.wrote("coefficients", line.out());
  session.result("images", source->images());
  session.result("analysed", analysed);
  session.result("terms", plan.basis().size());
  session.result("max_angular_order", plan.basis().max_order());
  session.say(fmt::format("{}: {} of {} images analysed, {} terms, angular orders 0 to {}", line.out(), analysed,
                          source->images(), plan.basis().size(), plan.basis().max_order()));
  return session.finish(flags.skip.max_skipped());
}

}  // namespace tambour::tools::analyse

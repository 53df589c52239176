#include "locate/run.hpp"

#include <fmt/format.h>

#include "common/centre_limits.hpp"
#include "common/centre_rows.hpp"
#include "common/geometry_flags.hpp"
#include "common/image_flags.hpp"
#include "common/preparation_flags.hpp"
#include "common/study_flags.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools::locate {
namespace {

struct Flags {
  ImageFlags images;
  GeometryFlags geometry;
  PreparationFlags preparation;
  StudyFlags study;
  SkipFlags skip;

  void add_to(CommandLine& line) {
    images.add_to(line);
    geometry.add_to(line, GeometryFlags::Radius::number_or_auto, StackStudyOptions{}.geometry.bandlimit);
    study.add_search(line);
    preparation.add_to(line, Background::quadratic);
    study.add_batch(line);
    skip.add_to(line);
  }
};

}  // namespace

int run(const Arguments& arguments, std::ostream& out, std::ostream& err) {
  CommandLine line("tambour-locate", "Finds the rotation centre of every image of a stack.");
  Flags flags;
  flags.add_to(line);
  if (!line.parse(arguments, out)) return 0;
  Session session(line, out, err);
  check_writable(line.out(), line.force());

  const auto source = flags.images.open(session);
  StackStudyOptions options;
  options.geometry = flags.geometry.resolve(*source, flags.study.search(), session);
  options.test_symmetry = false;
  flags.study.apply(options);
  require_room_to_search(*source, options.geometry.radius);
  options.preparation = flags.preparation.resolve(source->rows(), source->columns(), options.geometry.radius, session);

  const StackStudyPlan plan(options, source->rows(), source->columns(), session.executor());
  CsvWriter table(line.out(), line.force());
  session.describe_in(table);
  write_centre_header(options, table);
  CentreLimits limits(options.search, options.geometry.radius, source->rows(), source->columns());
  plan.run(*source, {}, {}, session.executor(), session.progress(), [&](const StudyBatch& batch) {
    for (const auto& study : batch.images) {
      table.row(centre_row(study));
      limits.see(study);
      if (!study.status.ok()) session.skip(study.image, study.source, study.status.reason);
    }
  });
  stop_if_interrupted();
  table.commit();

  limits.report(session);
  const std::size_t located = source->images() - session.skipped();
  session.wrote("centres", line.out());
  session.result("images", source->images());
  session.result("located", located);
  session.result("radius", options.geometry.radius);
  session.say(fmt::format("{}: {} of {} images located, radius {:.6g} px", line.out(), located, source->images(),
                          options.geometry.radius));
  return session.finish(flags.skip.max_skipped());
}

}  // namespace tambour::tools::locate

#include "symmetry/run.hpp"

#include <fmt/format.h>

#include "common/centre_limits.hpp"
#include "common/geometry_flags.hpp"
#include "common/image_flags.hpp"
#include "common/image_rows.hpp"
#include "common/pattern_angles.hpp"
#include "common/preparation_flags.hpp"
#include "common/study_flags.hpp"
#include "common/symmetry_flags.hpp"
#include "symmetry/stack_test.hpp"

namespace tambour::tools::symmetry {
namespace {

struct Flags {
  ImageFlags images;
  GeometryFlags geometry;
  PreparationFlags preparation;
  StudyFlags study;
  SymmetryFlags symmetry;
  SkipFlags skip;
  bool stack = false;

  void add_to(CommandLine& line) {
    images.add_to(line);
    geometry.add_to(line, GeometryFlags::Radius::number_or_auto, StackStudyOptions{}.geometry.bandlimit);
    study.add_search(line);
    study.add_precision(line);
    preparation.add_to(line, Background::quadratic);
    symmetry.add_to(line);
    line.add_flag("--stack", stack, "Test the whole stack as well, into stack.csv beside the table");
    study.add_batch(line);
    skip.add_to(line);
  }
};

void report_stack(const std::optional<SymmetryEvidence>& evidence, std::size_t images, Session& session) {
  if (!evidence) {
    session.say("stack: no image to test");
    session.result("stack", nullptr);
    return;
  }
  session.say(fmt::format("stack of {} images: {}-fold, ln BF {:.4g}, p_noise {:.3g}, {}", images, evidence->fold,
                          evidence->ln_bf, evidence->p_noise, to_string(evidence->verdict)));
  session.result("stack", {{"images", images},
                           {"fold", evidence->fold},
                           {"ln_bf", evidence->ln_bf},
                           {"p_noise", evidence->p_noise},
                           {"verdict", to_string(evidence->verdict)}});
}

}  // namespace

int run(const Arguments& arguments, std::ostream& out, std::ostream& err) {
  CommandLine line("tambour-symmetry", "Tests every image of a stack for N-fold rotational symmetry.");
  Flags flags;
  flags.add_to(line);
  if (!line.parse(arguments, out)) return 0;
  Session session(line, out, err);
  check_writable(line.out(), line.force());
  const std::string stack_path = flags.stack ? stack_table_beside(line.out()) : "";
  if (flags.stack) check_writable(stack_path, line.force());

  StackStudyOptions options;
  const auto source = flags.images.open(session);
  if (flags.stack) refuse_inputs_as_outputs(source->files(), {stack_path});
  options.geometry = flags.geometry.resolve(*source, flags.study.search(), session);
  options.symmetry = flags.symmetry.resolve(options.geometry, session);
  flags.study.apply(options);
  require_room_to_search(*source, options.geometry.radius);
  options.preparation = flags.preparation.resolve(source->rows(), source->columns(), options.geometry.radius, session);

  const StackStudyPlan plan(options, source->rows(), source->columns(), session.executor());
  CsvWriter table(line.out(), line.force());
  session.describe_in(table);
  std::vector<ImageRow> rows;
  CentreLimits limits(options.search, options.geometry.radius, source->rows(), source->columns());
  PatternAngles angles(plan.basis());
  StackSum sum(plan);
  plan.run(*source, {}, {}, session.executor(), session.progress(), [&](const StudyBatch& batch) {
    for (std::size_t i = 0; i < batch.images.size(); ++i) {
      const ImageStudy& study = batch.images[i];
      rows.push_back(row_of(study));
      limits.see(study);
      if (!study.status.ok()) {
        session.skip(study.image, study.source, study.status.reason);
        continue;
      }
      const auto* coefficients = batch.coefficients.row(static_cast<std::ptrdiff_t>(i));
      angles.add(study, coefficients);
      if (flags.stack) sum.add(study, {coefficients, plan.basis().size()});
    }
  });
  limits.report(session);
  write_image_table(rows, angles.angles(), options, table);
  std::optional<SymmetryEvidence> of_stack;
  if (flags.stack) of_stack = sum.evaluate(session.executor());
  stop_if_interrupted();
  table.commit();
  if (flags.stack) write_stack_table(stack_path, of_stack, sum.images(), session, line.force());

  session.wrote("symmetry", line.out());
  session.result("images", source->images());
  session.result("radius", options.geometry.radius);
  session.say(fmt::format("{}: {} images, radius {:.6g} px", line.out(), source->images(), options.geometry.radius));
  summarise(rows, session);
  if (flags.stack) {
    session.wrote("stack", stack_path);
    report_stack(of_stack, sum.images(), session);
  }
  return session.finish(flags.skip.max_skipped());
}

}  // namespace tambour::tools::symmetry
